/** Rows with a bar each, to either side of a middle line: margins, gains. */
import { drawPlot } from './draw-plot.js';
import { GRID, INK, SERIES } from './theme.js';

export interface BarRow {
  name: string;
  value: number;
  /** In words, beside the bar. */
  label: string;
  /** Drawn in the second colour. */
  isBad: boolean;
}

export interface BarRows {
  title: string;
  description: string;
  id: string;
  rows: readonly BarRow[];
  axis: string;
  /** Bars longer than this to either side end here. */
  reach: number;
  /** How numbers of the axis are written. */
  tick(value: number): string;
}

const ROW_PX = 22;

export function barRows({ title, description, id, rows, axis, reach, tick }: BarRows): Promise<string> {
  const clipped = rows.map((row, at) => ({
    ...row,
    key: String(at), // names may repeat
    shown: Math.min(reach, Math.max(-reach, Number.isFinite(row.value) ? row.value : -reach)),
  }));
  const low = Math.min(0, ...clipped.map(({ shown }) => shown));
  const high = Math.max(0, ...clipped.map(({ shown }) => shown));
  const room = 0.32 * (high - low || 1); // for the labels at the bars' ends
  const longest = Math.max(...rows.map(({ name }) => name.length));
  return drawPlot({
    title,
    description,
    id,
    inPage: true,
    widthPx: 440,
    heightPx: 50 + rows.length * ROW_PX,
    plot: (Plot) => ({
      marginTop: 6,
      marginBottom: 42,
      marginLeft: Math.min(180, 12 + 6.2 * longest),
      marginRight: 8,
      x: {
        domain: [low - (low < 0 ? room : 0), high + (high > 0 ? room : 0.02)],
        label: axis,
        labelAnchor: 'center',
        tickFormat: tick,
        ticks: 5,
      },
      y: {
        domain: clipped.map(({ key }) => key),
        tickFormat: (key: string) => clipped[Number(key)].name,
        label: null,
        tickSize: 0,
        padding: 0.25,
      },
      marks: [
        Plot.gridX({ stroke: GRID.light, strokeOpacity: 1, ticks: 5 }),
        Plot.barX(clipped, {
          y: 'key',
          x: 'shown',
          fill: ({ isBad }: BarRow) => (isBad ? SERIES[1].light : SERIES[0].light),
        }),
        Plot.ruleX([0], { stroke: INK.light }),
        ...([1, -1] as const).map((side) =>
          Plot.text(
            clipped.filter(({ shown }) => (shown < 0 ? -1 : 1) === side),
            {
              y: 'key',
              x: 'shown',
              text: 'label',
              dx: 4 * side,
              textAnchor: side === 1 ? 'start' : 'end',
            },
          ),
        ),
      ],
    }),
  });
}
