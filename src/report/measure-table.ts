/** A measurement as tables for the terminal. It only shows: every number comes from the report. */
import type { EdgeFigures, MeasureReport } from '../measure/figures.js';
import { CAUTION } from './caution.js';
import {
  type Column,
  type ColumnGroup,
  fixed,
  layOutColumns,
  type Paint,
  PLAIN,
  significant,
  wrapText,
} from './text.js';

const WIDTH = 80;

/** Frequencies that find room beside each other. */
const MOST_FREQUENCIES = 3;
/** Fields in a table of distortion. */
const MOST_FIELDS = 12;

export function measureTable(report: MeasureReport, paint: Paint = PLAIN): string {
  const [width, height] = report.pixels;
  const encodings: Readonly<Record<string, string>> = {
    linear: 'linear light',
    srgb: 'sRGB',
    raw: 'raw numbers',
  };
  const head = `${report.image ?? 'picture'}: ${width} x ${height} pixels, ${encodings[report.encoding] ?? report.encoding}`;
  const sections = [edgeSection(report), dotSection(report), flatSection(report)].filter(
    (section) => section !== undefined,
  );
  return [
    ...wrapText(head, WIDTH).map((line) => paint.strong(line)),
    ...sections.flatMap(({ title, notes, lead, groups }) => [
      '',
      paint.strong(title),
      ...notes.flatMap((note) => wrapText(note, WIDTH)),
      ...layOutColumns(lead, groups, WIDTH, paint).flatMap((table, at) =>
        at === 0 ? table : ['', ...table],
      ),
    ]),
    '',
    ...wrapText(CAUTION, WIDTH).map((line) => paint.faint(line)),
    '',
  ].join('\n');
}

interface Section {
  title: string;
  notes: string[];
  lead: ColumnGroup;
  groups: ColumnGroup[];
}

const DIRECTIONS: Readonly<Record<string, string>> = { tangential: 'along', sagittal: 'across' };

function edgeSection({ edges }: MeasureReport): Section | undefined {
  if (edges.length === 0) return undefined;
  const [first] = edges;
  const shown = spread(
    first.sfr.map((_, at) => at),
    MOST_FREQUENCIES,
  );
  const isPredicted = edges.some(({ sfr }) => sfr.some(({ predicted }) => predicted !== undefined));
  const lead = [
    text('x', edges, ({ x }) => fixed(x, 0)),
    text('y', edges, ({ y }) => fixed(y, 0)),
    text('h', edges, ({ field }) => fixed(field, 2)),
    { ...text('way', edges, ({ direction }) => DIRECTIONS[direction ?? ''] ?? '-'), align: 'left' as const },
    ...bandColumn(edges),
  ];
  const sfr = shown.map((at): ColumnGroup => {
    const { cyclesPerPixel, lpPerMm } = first.sfr[at];
    const lp = lpPerMm === undefined ? '' : ` ${significant(lpPerMm, 3)}/mm`;
    const measured = text('SFR', edges, (edge) => fixed(edge.sfr[at].value, 3));
    const predicted = text('rig', edges, (edge) => fixed(edge.sfr[at].predicted, 3));
    return {
      title: `${significant(cyclesPerPixel, 3)} c/px${lp}`,
      columns: isPredicted ? [measured, predicted] : [measured],
    };
  });
  const notes = [
    'way: modulation along the radius (tangential) or across it (sagittal); frequencies along the normal of the edge',
  ];
  if (isPredicted) notes.push('rig: MTF of lens and camera in the same direction');
  if (shown.length < first.sfr.length) notes.push(`all ${first.sfr.length} frequencies: --json, --csv`);
  const half: ColumnGroup = {
    title: 'SFR 50 %',
    columns: [text('c/px', edges, ({ sfr50CyclesPerPixel }) => fixed(sfr50CyclesPerPixel, 3))],
  };
  const width: ColumnGroup = {
    title: '10-90 %',
    columns: [text('px', edges, ({ edgeWidthPx }) => fixed(edgeWidthPx, 2))],
  };
  return { title: 'Slanted edges', notes, lead: { title: '', columns: lead }, groups: [half, width, ...sfr] };
}

function dotSection({ dots, distortion, lateralColour, radialFit }: MeasureReport): Section | undefined {
  if (dots.length === 0) return undefined;
  const reference = lateralColour[0]?.against ?? radialFit[0].band;
  const all = distortion.filter(({ band }) => band === reference);
  const rows = spread(all, MOST_FIELDS);
  const others = [...new Set(lateralColour.map(({ band }) => band))];
  const notes = radialFit.map(
    ({ band, scale, rmsPx }) =>
      `${band}: scale ${scale.toFixed(5)}, ${significant(rmsPx, 2)} px RMS between the discs and a third-order distortion`,
  );
  if (rows.length < all.length) notes.push(`all ${all.length} fields: --json; every disc: --csv`);
  const lateral = others.map(
    (band): ColumnGroup => ({
      title: `${band} - ${reference}`,
      columns: [
        text('um', rows, ({ field }) =>
          fixed(lateralColour.find((other) => other.band === band && other.field === field)?.um, 2),
        ),
      ],
    }),
  );
  return {
    title: `Discs: distortion in ${reference}${others.length > 0 ? ', and lateral colour' : ''}`,
    notes,
    lead: { title: '', columns: [text('h', rows, ({ field }) => fixed(field, 3))] },
    groups: [
      { title: 'distortion', columns: [text('percent', rows, ({ percent }) => fixed(percent, 3))] },
      { title: 'shift', columns: [text('px', rows, ({ radialShiftPx }) => fixed(radialShiftPx, 2))] },
      ...lateral,
      { title: 'discs', columns: [text('', rows, (row) => String(row.dots))] },
    ],
  };
}

function flatSection({ flats }: MeasureReport): Section | undefined {
  if (flats.length === 0) return undefined;
  const region = text('region', flats, ({ region: { x, y, width, height } }) => [x, y, width, height].join());
  return {
    title: 'Flat fields: a plane taken out, noise over time and over the pixels together',
    notes: [],
    lead: { title: '', columns: [{ ...region, align: 'left' }, ...bandColumn(flats)] },
    groups: [
      { title: 'mean', columns: [text('light', flats, ({ mean }) => fixed(mean, 4))] },
      { title: 'noise', columns: [text('RMS', flats, ({ noise }) => fixed(noise, 5))] },
      {
        title: 'SNR',
        columns: [
          text('ratio', flats, ({ snr }) => fixed(snr, 1)),
          text('dB', flats, ({ snrDb }) => fixed(snrDb, 1)),
        ],
      },
    ],
  };
}

/** The band, where there is more than one. */
function bandColumn(rows: readonly Pick<EdgeFigures, 'band'>[]): Column[] {
  const isOne = new Set(rows.map(({ band }) => band)).size === 1;
  return isOne ? [] : [{ ...text('band', rows, ({ band }) => band), align: 'left' }];
}

function text<Row>(head: string, rows: readonly Row[], cell: (row: Row) => string): Column {
  return { head, cells: rows.map(cell) };
}

/** At most so many of a list, spread over it evenly, the last one among them. */
function spread<Item>(items: readonly Item[], most: number): Item[] {
  if (items.length <= most) return [...items];
  return Array.from({ length: most }, (_, i) => items[Math.round(((i + 1) * items.length) / most) - 1]);
}
