/** From marks to an SVG file: the one place that knows the plotting library. */
import type { Markish, PlotOptions } from '@observablehq/plot';
import { darkStyle, FAINT, FONT, INK, PAGE, PLOT_CLASS } from './theme.js';

/** The plotting library as the plots use it. */
export type Plotting = typeof import('@observablehq/plot');

export interface Figure {
  title: string;
  /** A line below the title. */
  subtitle?: string;
  /** The figure in words, for who cannot see it. */
  description: string;
  /** Begins the ids within the plot: plots on one page need different ones. Default: `plot`. */
  id?: string;
  /** For a page that has heading, background and `darkStyle` of its own: the title is left to screen readers. */
  inPage?: boolean;
  /** Of the plot without its heading. */
  widthPx: number;
  heightPx: number;
  /** What is drawn in it: options and marks of the library. The top margin grows by what the heading needs. */
  plot(library: Plotting): Omit<PlotOptions, 'marks'> & { marks: Markish[] };
}

const HEADING_PX = { title: 26, subtitle: 20 };

/** Draw a figure as a text of SVG that stands alone in a file or within a page. Same figure, same bytes.
 *
 * The library is loaded here and not before: a tenth of a second that commands without plots save.
 */
export async function drawPlot(figure: Figure): Promise<string> {
  const [plotting, { DOMParser }] = await Promise.all([import('@observablehq/plot'), import('linkedom')]);
  // a document of XML, so that names with & and < are written as XML wants them
  const document = new DOMParser().parseFromString(`<svg xmlns="${SVG}"/>`, 'image/svg+xml');
  const heading = figure.inPage
    ? 0
    : HEADING_PX.title + (figure.subtitle === undefined ? 0 : HEADING_PX.subtitle);
  const options = figure.plot(plotting);
  const svg = plotting.plot({
    ...options,
    document,
    className: PLOT_CLASS,
    width: figure.widthPx,
    height: figure.heightPx + heading,
    marginTop: (options.marginTop ?? 20) + heading,
  });
  finish(svg as unknown as SvgElement, document as unknown as SvgDocument, figure);
  const text = numberIds(`${svg.outerHTML}\n`, figure.id ?? 'plot');
  return figure.inPage ? withoutInnerLabels(text) : text;
}

/** What of the document this file uses; Node's types know no document. */
interface SvgElement {
  setAttribute(name: string, value: string): void;
  append(...children: SvgElement[]): void;
  prepend(...children: SvgElement[]): void;
  textContent: string | null;
}

interface SvgDocument {
  createElementNS(namespace: string, name: string): SvgElement;
}

const SVG = 'http://www.w3.org/2000/svg';

/** Page, heading, colours, and words for those who cannot see it. */
function finish(
  svg: SvgElement,
  document: SvgDocument,
  { title, subtitle, description, inPage }: Figure,
): void {
  const element = (name: string, attributes: Record<string, string>, text?: string) => {
    const made = document.createElementNS(SVG, name);
    for (const [key, value] of Object.entries(attributes)) made.setAttribute(key, value);
    if (text !== undefined) made.textContent = text;
    return made;
  };
  svg.setAttribute('xmlns', SVG);
  svg.setAttribute('role', 'img');
  svg.setAttribute('aria-label', title);
  svg.setAttribute('color', INK.light);
  svg.setAttribute('font-family', FONT.family);
  svg.setAttribute('font-size', String(FONT.sizePx));
  if (inPage) {
    svg.prepend(element('desc', {}, description));
    return;
  }
  svg.prepend(
    element('title', {}, title),
    element('desc', {}, description),
    element('style', {}, darkStyle()),
    element('rect', { width: '100%', height: '100%', fill: PAGE.light }),
  );
  const line = (text: string, y: number, more: Record<string, string>) =>
    element('text', { x: '12', y: String(y), 'text-anchor': 'start', ...more }, text);
  svg.append(line(title, 20, { 'font-size': '15', 'font-weight': '600' }));
  if (subtitle !== undefined) svg.append(line(subtitle, 40, { fill: FAINT.light }));
}

/** To who cannot see it the plot is one picture with a description; the library's words for its layers ("line") are of no use there, and
 * groups may not bear labels. */
function withoutInnerLabels(svg: string): string {
  return svg.replace(/<(g|path|text|rect|line|circle)\b[^>]*>/g, (tag) =>
    tag.replace(/ aria-label="[^"]*"/, ''),
  );
}

/** The library counts its ids on from plot to plot; here each plot begins anew. */
function numberIds(svg: string, prefix: string): string {
  const seen = new Map<string, string>();
  return svg.replace(/\bplot-(clip|pattern|gradient)-\d+\b/g, (id, kind) => {
    if (!seen.has(id)) seen.set(id, `${prefix}-${kind}-${seen.size + 1}`);
    return seen.get(id)!;
  });
}
