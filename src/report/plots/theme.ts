/** The common look of all plots: colours that stay apart for colour-blind eyes, on screens light and dark and on paper.
 *
 * A plot is drawn in the light colours, as plain attributes, so that every program that reads SVG shows them. A style sheet inside of the
 * plot replaces each by its dark partner where a browser asks for dark pages; on paper the light ones stay.
 */

export interface Tone {
  light: string;
  dark: string;
}

const tone = (light: string, dark: string): Tone => ({ light, dark });

/** Lettering, lines that carry no data, the page. */
export const INK = tone('#1f2328', '#e6e8eb');
export const FAINT = tone('#6b7280', '#9aa3ad');
export const GRID = tone('#d4d8dd', '#3a4048');
export const PAGE = tone('#ffffff', '#16191d');

/** Colours of data in the order in which they are to be used. Never the only sign: a plot also tells its data apart by place, label or dash. The first three
 * stand out from the page enough for thin lines.
 * Source: the light ones are of the set of M. Okabe and K. Ito, "Color Universal Design" (2008), without its yellow, which is too pale for
 * lines on white (cited from memory); the dark ones are the same hues, lighter. */
export const SERIES: readonly Tone[] = [
  tone('#0072b2', '#56b4e9'), // blue
  tone('#d55e00', '#f0884a'), // vermillion
  tone('#009e73', '#3cc99d'), // bluish green
  tone('#cc79a7', '#e3a3c6'), // reddish purple
  tone('#e69f00', '#f2c14e'), // orange
  tone('#56b4e9', '#9bd3f5'), // sky blue
];

export const FONT = { family: 'system-ui, sans-serif', sizePx: 12 };

/** The class of every plot's root element. */
export const PLOT_CLASS = 'foreglass-plot';

/** The style sheet that turns the plots of this class dark where dark is asked for. */
export function darkStyle(): string {
  const rules = [INK, FAINT, GRID, PAGE, ...SERIES].flatMap(({ light, dark }) =>
    ['fill', 'stroke', 'color'].map(
      (name) =>
        `.${PLOT_CLASS} [${name}="${light}"], .${PLOT_CLASS}[${name}="${light}"] { ${name}: ${dark}; }`,
    ),
  );
  return `@media screen and (prefers-color-scheme: dark) {\n${rules.join('\n')}\n}`;
}
