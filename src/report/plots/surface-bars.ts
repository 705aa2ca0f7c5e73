/** Which surface contributes what: a row for each surface and one for the total, a column for each sum. */
import type { DeriveReport } from '../../prescription/derive-report.js';
import { SEIDEL_SUMS } from '../../prescription/seidel.js';
import { SUM_NAMES } from '../derive-table.js';
import { decimalsFor, fixed, significant } from '../text.js';
import { drawPlot } from './draw-plot.js';
import { FAINT, GRID, INK, SERIES } from './theme.js';

type Surfaces = Pick<DeriveReport, 'name' | 'surfaces' | 'seidelMm' | 'fullFieldMm' | 'workingFNumber'>;

interface Bar {
  sum: string;
  row: string;
  um: number;
  /** In figures. */
  label: string;
  /** Of the largest in its column, -1..1. */
  share: number;
}

const TOTAL = 'total';
const ROW_PX = 22;
const COLUMN_PX = 112;

/** The bars as a text of SVG. Each column has a scale of its own, written below it: sums of one kind are to be compared with each other.
 * In a well-corrected lens long bars to both sides leave a short one in the last row.
 * @param inPage see `Figure`
 */
export function surfaceBars(report: Surfaces, { inPage = false } = {}): Promise<string> {
  const { surfaces, seidelMm } = report;
  const rows = [
    ...surfaces.map((sums) => ({ row: `${sums.surface}${sums.stop ? ' stop' : ''}`, sums })),
    { row: TOTAL, sums: seidelMm },
  ];
  const scales = SEIDEL_SUMS.map((sum) => ({
    sum,
    um: Math.max(...rows.map(({ sums }) => Math.abs(1000 * sums[sum]))),
  }));
  const bars: Bar[] = scales.flatMap(({ sum, um: scale }) =>
    rows.map(({ row, sums }) => {
      const um = 1000 * sums[sum];
      return { sum, row, um, label: fixed(um, decimalsFor(scale, 4)), share: scale === 0 ? 0 : um / scale };
    }),
  );
  return drawPlot({
    title: `What each surface contributes: ${report.name}`,
    subtitle: `Third-order sums at f/${significant(report.workingFNumber, 3)} and h = 1 (${significant(report.fullFieldMm, 4)} mm), um of optical path`,
    description: inWords(report, scales),
    inPage,
    id: inPage ? 'surfaces' : undefined,
    widthPx: 76 + SEIDEL_SUMS.length * COLUMN_PX,
    heightPx: 72 + rows.length * ROW_PX,
    plot: (Plot) => ({
      marginTop: 44,
      marginBottom: 28,
      marginLeft: 64,
      marginRight: 12,
      x: { domain: [-1, 1], axis: null },
      y: { domain: rows.map(({ row }) => row), label: null, tickSize: 0, padding: 0.25 },
      fx: {
        domain: [...SEIDEL_SUMS],
        axis: 'top',
        label: null,
        padding: 0.12,
        tickFormat: (sum: keyof typeof SUM_NAMES) => `${sum}\n${SUM_NAMES[sum]}`,
      },
      marks: [
        Plot.ruleX([-1, 1], { stroke: GRID.light }),
        Plot.barX(bars, {
          fx: 'sum',
          y: 'row',
          x: 'share',
          fill: ({ row }: Bar) => (row === TOTAL ? SERIES[1].light : SERIES[0].light),
          ariaLabel: ({ sum, row, um }: Bar) => `${sum}, ${row}: ${significant(um, 4)} um`,
        }),
        Plot.ruleX([0], { stroke: INK.light }),
        ...([-1, 1] as const).map((side) =>
          // the total in figures, across the middle line from its bar
          Plot.text(
            bars.filter(({ row, um }) => row === TOTAL && (um > 0 ? 1 : -1) === -side),
            {
              fx: 'sum',
              y: 'row',
              x: () => 0,
              dx: 5 * side,
              textAnchor: side === 1 ? 'start' : 'end',
              text: 'label',
            },
          ),
        ),
        Plot.text(scales, {
          fx: 'sum',
          frameAnchor: 'bottom',
          dy: 16,
          fill: FAINT.light,
          text: ({ um }: { um: number }) => (um === 0 ? 'none' : `\u00b1${significant(um, 3)} um`),
        }),
      ],
    }),
  });
}

function inWords(
  { surfaces, seidelMm }: Surfaces,
  scales: readonly { sum: (typeof SEIDEL_SUMS)[number] }[],
): string {
  const parts = scales.map(({ sum }) => {
    const largest = surfaces.reduce((most, one) => (Math.abs(one[sum]) > Math.abs(most[sum]) ? one : most));
    const um = (mm: number) => `${significant(1000 * mm, 3)} um`;
    return `${SUM_NAMES[sum]} (${sum}) most from surface ${largest.surface} (${um(largest[sum])}), in total ${um(seidelMm[sum])}`;
  });
  return `Bars of the third-order sums of ${surfaces.length} surfaces: ${parts.join('; ')}.`;
}
