/** A measurement as a page. It only shows: every number comes from the report. */
import type { EdgeFigures, MeasureReport } from '../../measure/figures.js';
import { bandTone } from '../plots/band-tone.js';
import { linePlot } from '../plots/line-plot.js';
import { SERIES } from '../plots/theme.js';
import { fixed, significant } from '../text.js';
import { html, type Markup } from './markup.js';
import { pageText, type Section } from './page.js';
import { figure, figureTable, folded, type HtmlColumn, lineKey } from './parts.js';

/** @param rig the name of the lens that the figures are held against, if one is given */
export async function measurePage(report: MeasureReport, rig?: string): Promise<string> {
  const { edges, dots, flats, skipped, pixels, encoding, chart } = report;
  const sections: Section[] = [];
  if (edges.length > 0)
    sections.push({ id: 'edges', title: 'Slanted edges', body: await edgeSection(report) });
  if (dots.length > 0) sections.push({ id: 'dots', title: 'Discs', body: await dotSection(report) });
  if (flats.length > 0) sections.push({ id: 'flats', title: 'Flat fields', body: flatTable(report) });
  if (skipped.length > 0)
    sections.push({ id: 'skipped', title: 'What could not be measured', body: skippedTable(report) });
  const of = rig === undefined ? '' : `, held against ${rig}`;
  return pageText({
    title: `Measured: ${report.image ?? 'a picture'}`,
    lead: `${chart === null ? '' : `chart of ${chart}, `}${pixels.join(' x ')} pixels, ${ENCODINGS[encoding] ?? encoding}${of}`,
    warnings: report.warnings,
    sections,
  });
}

const ENCODINGS: Readonly<Record<string, string>> = {
  linear: 'linear light',
  srgb: 'sRGB',
  raw: 'raw numbers',
};
const WAYS: Readonly<Record<string, string>> = { tangential: 'along', sagittal: 'across' };

/** More curves than these would be a heap of lines: the table has them all. */
const MOST_PLOTS = 24;

async function edgeSection({ edges }: MeasureReport): Promise<Markup> {
  const [first] = edges;
  const isPredicted = edges.some(({ sfr }) => sfr.some(({ predicted }) => predicted !== undefined));
  const shown = spread(edges, MOST_PLOTS);
  const plots = await Promise.all(
    shown.map(async (edge, at) => {
      const f = edge.sfr.map(({ cyclesPerPixel }) => cyclesPerPixel);
      const svg = await linePlot({
        title: `SFR of the edge at ${placeOf(edge)}`,
        description: `50 % at ${fixed(edge.sfr50CyclesPerPixel, 3)} cycles a pixel, 10-90 % rise ${fixed(edge.edgeWidthPx, 2)} px`,
        id: `edge-${at}`,
        x: { label: 'frequency, cycles/pixel', domain: [0, Math.max(...f)] },
        y: { label: 'SFR', domain: [0, Math.max(1, ...edge.sfr.map(({ value }) => value))] },
        curves: [
          { x: [0, ...f], y: [1, ...edge.sfr.map(({ value }) => value)], tone: SERIES[0] },
          ...(isPredicted
            ? [
                {
                  x: [0, ...f],
                  y: [1, ...edge.sfr.map(({ predicted }) => predicted ?? null)],
                  tone: SERIES[1],
                  dash: '5 4',
                },
              ]
            : []),
        ],
      });
      return figure(placeOf(edge), `${edge.band}, 10-90 % ${fixed(edge.edgeWidthPx, 2)} px`, svg);
    }),
  );
  const key = lineKey([
    { text: 'measured', tone: SERIES[0] },
    ...(isPredicted ? [{ text: 'lens and camera of the rig', tone: SERIES[1], dash: '5 4' }] : []),
  ]);
  const left = edges.length - shown.length;
  const table = edgeTable(edges, first, isPredicted);
  return html`<p>Along: modulation along the radius (tangential); across: across it (sagittal). Frequencies along the normal of the edge.</p>
${await halfFigure(edges)}
${key}
<div class="plots">${plots}</div>
${left > 0 && html`<p>${shown.length} of ${edges.length} edges are drawn, evenly chosen; the tables have them all.</p>`}
${edges.length > MOST_PLOTS ? folded('All edges as a table', table) : table}
${folded('Every frequency of every edge', sfrTable(edges, first, isPredicted))}`;
}

/** Where the response falls to a half, over the field. */
async function halfFigure(edges: readonly EdgeFigures[]): Promise<Markup | false> {
  const seen = edges.flatMap(({ field, sfr50CyclesPerPixel: half, band, direction }) =>
    field === null || half === null
      ? []
      : [{ x: field, y: half, tone: bandTone(band), isOpen: direction === 'sagittal' }],
  );
  if (seen.length < 3) return false;
  const svg = await linePlot({
    title: 'Where the response falls to a half, over the field',
    description: `${seen.length} edges, from ${fixed(Math.min(...seen.map(({ y }) => y)), 3)} to ${fixed(Math.max(...seen.map(({ y }) => y)), 3)} cycles a pixel`,
    id: 'half',
    x: { label: 'field h', domain: [0, Math.max(...seen.map(({ x }) => x))] },
    y: { label: 'SFR 50 %, cycles/pixel' },
    curves: [],
    dots: seen,
  });
  const bands = [...new Set(edges.map(({ band }) => band))];
  return html`${bands.length > 1 && lineKey(bands.map((band) => ({ text: band, tone: bandTone(band) })))}
<div class="plots few">${figure('Where the response falls to a half', 'disc: along the radius; square: across it', svg)}</div>`;
}

function edgeTable(edges: readonly EdgeFigures[], first: EdgeFigures, isPredicted: boolean): Markup {
  const columns: HtmlColumn<EdgeFigures>[] = [
    { head: 'x', cell: ({ x }) => fixed(x, 0) },
    { head: 'y', cell: ({ y }) => fixed(y, 0) },
    { head: 'h', cell: ({ field }) => fixed(field, 2) },
    { head: 'way', cell: ({ direction }) => WAYS[direction ?? ''] ?? '-', kind: 'text' },
    { head: 'band', cell: ({ band }) => band, kind: 'text' },
    { head: 'SFR 50 %, c/px', cell: ({ sfr50CyclesPerPixel }) => fixed(sfr50CyclesPerPixel, 3) },
  ];
  if (edges.some(({ sfr50LpPerMm }) => sfr50LpPerMm !== undefined))
    columns.push({ head: 'lp/mm', cell: ({ sfr50LpPerMm }) => fixed(sfr50LpPerMm, 1) });
  columns.push({ head: '10-90 %, px', cell: ({ edgeWidthPx }) => fixed(edgeWidthPx, 2) });
  const picked = spread(
    first.sfr.map((_, at) => at),
    3,
  );
  for (const at of picked) {
    const group = `${significant(first.sfr[at].cyclesPerPixel, 3)} c/px`;
    columns.push({ head: 'SFR', group, cell: ({ sfr }) => fixed(sfr[at].value, 3) });
    if (isPredicted) columns.push({ head: 'rig', group, cell: ({ sfr }) => fixed(sfr[at].predicted, 3) });
  }
  return figureTable('Slanted edges', edges, columns);
}

function sfrTable(edges: readonly EdgeFigures[], first: EdgeFigures, isPredicted: boolean): Markup {
  const columns: HtmlColumn<EdgeFigures>[] = [
    { head: 'edge', cell: placeOf, kind: 'head' },
    { head: 'band', cell: ({ band }) => band, kind: 'text' },
  ];
  for (const [at, { cyclesPerPixel, lpPerMm }] of first.sfr.entries()) {
    const lp = lpPerMm === undefined ? '' : `, ${significant(lpPerMm, 4)} lp/mm`;
    const group = `${significant(cyclesPerPixel, 3)} c/px${lp}`;
    columns.push({ head: 'SFR', group, cell: ({ sfr }) => fixed(sfr[at].value, 3) });
    if (isPredicted) columns.push({ head: 'rig', group, cell: ({ sfr }) => fixed(sfr[at].predicted, 3) });
  }
  return figureTable('SFR at every frequency', edges, columns);
}

async function dotSection({ distortion, lateralColour, radialFit, dots }: MeasureReport): Promise<Markup> {
  const bands = [...new Set(distortion.map(({ band }) => band))];
  const fields = distortion.map(({ field }) => field);
  const end = Math.max(...fields, 1e-3);
  const svg = await linePlot({
    title: 'Distortion of the discs against the field',
    description: `${distortion.length} fields, to ${fixed(distortion.at(-1)?.percent, 3)} percent at h = ${fixed(distortion.at(-1)?.field, 2)}`,
    id: 'distortion',
    x: { label: 'field h', domain: [0, end] },
    y: { label: 'distortion, %' },
    curves: bands.map((band) => {
      const own = distortion.filter((entry) => entry.band === band).toSorted((a, b) => a.field - b.field);
      return { x: own.map(({ field }) => field), y: own.map(({ percent }) => percent), tone: bandTone(band) };
    }),
  });
  return html`<p>${dots.length} discs; distortion with the scale of the radial fit taken out.</p>
${lineKey(bands.map((band) => ({ text: band, tone: bandTone(band) })))}
<div class="plots few">${figure('Distortion', 'mean of the discs at each field', svg)}</div>
${figureTable('Radial fit: r′ = scale r + cubic r³', radialFit, [
  { head: 'band', cell: ({ band }) => band, kind: 'head' },
  { head: 'scale', cell: ({ scale }) => scale.toFixed(5) },
  { head: 'cubic, 1/mm²', cell: ({ cubicPerMm2 }) => significant(cubicPerMm2, 4) },
  { head: 'RMS left, px', cell: ({ rmsPx }) => significant(rmsPx, 2) },
])}
${folded(
  'Every field as a table',
  html`${figureTable('Distortion by field', distortion, [
    { head: 'h', cell: ({ field }) => fixed(field, 3), kind: 'head' },
    { head: 'band', cell: ({ band }) => band, kind: 'text' },
    { head: 'distortion, %', cell: ({ percent }) => fixed(percent, 3) },
    { head: 'shift, px', cell: ({ radialShiftPx }) => fixed(radialShiftPx, 2) },
    { head: 'discs', cell: (row) => String(row.dots) },
  ])}
${
  lateralColour.length > 0 &&
  figureTable('Lateral colour by field', lateralColour, [
    { head: 'h', cell: ({ field }) => fixed(field, 3), kind: 'head' },
    { head: 'band', cell: ({ band, against }) => `${band} against ${against}`, kind: 'text' },
    { head: 'px', cell: ({ px }) => fixed(px, 3) },
    { head: 'µm', cell: ({ um }) => fixed(um, 2) },
    { head: 'discs', cell: (row) => String(row.dots) },
  ])
}`,
)}`;
}

function flatTable({ flats }: MeasureReport): Markup {
  return figureTable('Flat fields', flats, FLAT_COLUMNS);
}

const FLAT_COLUMNS: HtmlColumn<MeasureReport['flats'][number]>[] = [
  {
    head: 'region, px',
    cell: ({ region: { x, y, width, height } }) => `${x}, ${y}: ${width} x ${height}`,
    kind: 'head',
  },
  { head: 'band', cell: ({ band }) => band, kind: 'text' },
  { head: 'mean light', cell: ({ mean }) => fixed(mean, 4) },
  { head: 'noise, RMS', cell: ({ noise }) => fixed(noise, 5) },
  { head: 'SNR', cell: ({ snr }) => fixed(snr, 1) },
  { head: 'SNR, dB', cell: ({ snrDb }) => fixed(snrDb, 1) },
];

function skippedTable({ skipped }: MeasureReport): Markup {
  return figureTable('Parts of the chart that were left out', skipped, [
    { head: 'what', cell: ({ what }) => (what === 'dot' ? 'disc' : what), kind: 'head' },
    { head: 'x', cell: ({ x }) => fixed(x, 0) },
    { head: 'y', cell: ({ y }) => fixed(y, 0) },
    { head: 'band', cell: ({ band }) => band, kind: 'text' },
    { head: 'reason', cell: ({ reason }) => reason, kind: 'wordy' },
  ]);
}

function placeOf({ x, y, field, direction }: EdgeFigures): string {
  const h = field === null ? '' : `, h = ${fixed(field, 2)}`;
  const way = direction === null ? '' : `, ${WAYS[direction]}`;
  return `x ${fixed(x, 0)}, y ${fixed(y, 0)} px${h}${way}`;
}

/** At most `most` of a list, evenly chosen, first and last among them. */
function spread<T>(all: readonly T[], most: number): T[] {
  if (all.length <= most) return [...all];
  return Array.from({ length: most }, (_, i) => all[Math.round((i * (all.length - 1)) / (most - 1))]);
}
