/** Curves over one axis, as all reports draw them. */
import { drawPlot } from './draw-plot.js';
import { FAINT, GRID, INK, type Tone } from './theme.js';

export interface Curve {
  x: readonly number[];
  /** null: a gap. */
  y: readonly (number | null)[];
  tone: Tone;
  /** As in SVG's stroke-dasharray. */
  dash?: string;
  widthPx?: number;
}

export interface LinePlot {
  title: string;
  description: string;
  id: string;
  x: { label: string; domain?: readonly [number, number] };
  y: { label: string; domain?: readonly [number, number] };
  curves: readonly Curve[];
  /** Single points: filled or open. */
  dots?: readonly { x: number; y: number; tone: Tone; isOpen: boolean }[];
  /** Upright lines with a word on top. */
  marks?: readonly { x: number; text: string }[];
}

/** Dash of the direction across the radius; along it lines are whole. */
export const ACROSS_DASH = '5 4';

/** A plot for a page, of a width that a phone shows without shrinking its letters much. */
export function linePlot({
  title,
  description,
  id,
  x,
  y,
  curves,
  dots = [],
  marks = [],
}: LinePlot): Promise<string> {
  return drawPlot({
    title,
    description,
    id,
    inPage: true,
    widthPx: 300,
    heightPx: 224,
    plot: (Plot) => ({
      marginTop: 30,
      marginLeft: 46,
      marginRight: 14,
      marginBottom: 44,
      x: { label: x.label, domain: x.domain, nice: x.domain === undefined, labelAnchor: 'center', ticks: 5 },
      y: { label: y.label, domain: y.domain, nice: y.domain === undefined, labelAnchor: 'top', ticks: 5 },
      marks: [
        Plot.gridX({ stroke: GRID.light, strokeOpacity: 1, ticks: 5 }),
        Plot.gridY({ stroke: GRID.light, strokeOpacity: 1, ticks: 5 }),
        Plot.ruleX(marks, { x: 'x', stroke: FAINT.light, strokeDasharray: '1 3', strokeWidth: 1.5 }),
        ...(['start', 'middle', 'end'] as const).map((textAnchor) =>
          Plot.text(
            marks.filter((mark) => anchorOf(mark.x, x.domain) === textAnchor),
            {
              x: 'x',
              text: 'text',
              frameAnchor: 'top',
              textAnchor,
              lineAnchor: 'bottom',
              dy: -6,
              fill: INK.light,
            },
          ),
        ),
        ...[false, true].map((isOpen) =>
          Plot.dot(
            dots.filter((dot) => dot.isOpen === isOpen),
            {
              x: 'x',
              y: 'y',
              r: 3,
              symbol: isOpen ? 'square' : 'circle',
              stroke: ({ tone }: { tone: Tone }) => tone.light,
              fill: isOpen ? 'none' : ({ tone }: { tone: Tone }) => tone.light,
            },
          ),
        ),
        ...curves.map((curve) =>
          Plot.line(
            curve.y.map((value, i) => ({ x: curve.x[i], y: value })),
            {
              x: 'x',
              y: 'y',
              stroke: curve.tone.light,
              strokeWidth: curve.widthPx ?? 2,
              strokeDasharray: curve.dash,
              clip: true,
            },
          ),
        ),
      ],
    }),
  });
}

/** Words at either end stay inside of the plot. */
function anchorOf(at: number, domain: readonly [number, number] | undefined): 'start' | 'middle' | 'end' {
  if (domain === undefined) return 'middle';
  const share = (at - domain[0]) / (domain[1] - domain[0]);
  return share < 0.2 ? 'start' : share > 0.8 ? 'end' : 'middle';
}
