/** A figure over two axes, with the best place marked. */
import { inkOn, rampColour } from './colour-ramp.js';
import { drawPlot } from './draw-plot.js';
import { INK, PAGE } from './theme.js';

export interface HeatMap {
  title: string;
  description: string;
  x: { label: string; values: readonly number[]; tick(value: number): string };
  y: { label: string; values: readonly number[]; tick(value: number): string };
  /** Row by row; null where there is none. */
  cells: readonly { share: number; label: string }[];
  ramp: readonly string[];
  /** Where the mark goes, in values of the axes. */
  best?: { x: number; y: number };
}

export function heatMap({ title, description, x, y, cells, ramp, best }: HeatMap): Promise<string> {
  const columns = x.values.length;
  const rows = y.values.length;
  // cells of one size: values need not be evenly spaced
  const placed = cells.map((cell, at) => {
    const colour = rampColour(ramp, cell.share);
    return { ...cell, colour, ink: inkOn(colour), column: at % columns, row: Math.floor(at / columns) };
  });
  const widthPx = Math.max(360, Math.min(760, 70 + 62 * columns));
  const mark =
    best === undefined ? [] : [{ column: placeIn(x.values, best.x), row: placeIn(y.values, best.y) }];
  const half = 0.485;
  return drawPlot({
    title,
    description,
    id: 'heat',
    inPage: true,
    widthPx,
    heightPx: 66 + 46 * rows,
    plot: (Plot) => ({
      marginTop: 24,
      marginLeft: 56,
      marginRight: 10,
      marginBottom: 42,
      x: {
        domain: [-0.5, columns - 0.5],
        ticks: x.values.map((_, i) => i),
        tickFormat: (i: number) => x.tick(x.values[i]),
        tickSize: 0,
        label: x.label,
        labelAnchor: 'center',
      },
      y: {
        domain: [-0.5, rows - 0.5],
        ticks: y.values.map((_, i) => i),
        tickFormat: (i: number) => y.tick(y.values[i]),
        tickSize: 0,
        label: y.label,
        labelAnchor: 'top',
      },
      marks: [
        Plot.rect(placed, {
          x1: ({ column }: { column: number }) => column - half,
          x2: ({ column }: { column: number }) => column + half,
          y1: ({ row }: { row: number }) => row - half,
          y2: ({ row }: { row: number }) => row + half,
          fill: ({ colour }: { colour: string }) => colour,
        }),
        Plot.dot(mark, { x: 'column', y: 'row', r: 21, stroke: PAGE.light, strokeWidth: 6, fill: 'none' }),
        Plot.dot(mark, { x: 'column', y: 'row', r: 21, stroke: INK.light, strokeWidth: 2.5, fill: 'none' }),
        Plot.text(placed, { x: 'column', y: 'row', text: 'label', fill: ({ ink }: { ink: string }) => ink }),
      ],
      color: { type: 'identity' },
    }),
  });
}

/** Where a value stands among rising ones: 1.5 is half-way from the second to the third. */
function placeIn(values: readonly number[], value: number): number {
  const after = values.findIndex((one) => one >= value);
  if (after === 0) return 0;
  if (after < 0) return values.length - 1;
  return after - 1 + (value - values[after - 1]) / (values[after] - values[after - 1]);
}
