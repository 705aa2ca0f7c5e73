/** A sweep as a page: the best place first, then the whole of it. It only shows: every number comes from the report. */
import type { Rig } from '../../optics/rig.js';
import type { CoefficientBudget } from '../../tasks/budget.js';
import { colourRamp, twoSidedRamp } from '../plots/colour-ramp.js';
import { heatMap } from '../plots/heat-map.js';
import { linePlot } from '../plots/line-plot.js';
import { INK, SERIES } from '../plots/theme.js';
import {
  axisName,
  axisUnit,
  bestWords,
  depthWords,
  figureText,
  type Sample,
  type SweepFigures,
  subjectOf,
  TITLES,
  there,
  whereOf,
} from '../sweep-table.js';
import { partName } from '../task-words.js';
import { fixed, significant } from '../text.js';
import { zoneName } from '../zone-table.js';
import { html, type Markup } from './markup.js';
import { pageText, type Section } from './page.js';
import { figure, figureTable, type HtmlColumn, lineKey } from './parts.js';
import { rigFacts } from './rig-facts.js';

export async function sweepPage(
  rig: Rig,
  report: SweepFigures & { warnings: readonly string[] },
): Promise<string> {
  const { axes, budget, depth, met } = report;
  const sections: Section[] = [];
  if (axes.length > 0)
    sections.push(
      { id: 'best', title: 'The best place', body: bestSection(report) },
      { id: 'sweep', title: TITLES[report.figure.kind], body: await sampleSection(report) },
    );
  if (budget !== undefined)
    sections.push({
      id: 'budget',
      title: `Budget${there(report).replaceAll(' um', ' µm')}`,
      body: budgetSection(budget),
    });
  if (depth !== undefined)
    sections.push({
      id: 'depth',
      title: `Depth${there(report).replaceAll(' um', ' µm')}`,
      body: html`<p>${depthWords(depth)}</p>`,
    });
  sections.push({ id: 'rig', title: 'The rig as the sweep began with it', body: rigFacts(rig) });
  const verdict = met === null ? '' : met ? ': met at the best place' : ': not met at the best place';
  return pageText({
    title: `${subjectOf(report)}${axes.length > 0 ? verdict : ''}`,
    lead: `with ${report.rig}, ${report.model} model${axes.length > 0 ? `, over ${axes.map(({ key }) => axisTitle(key)).join(' and ')}` : ''}`,
    warnings: report.warnings,
    sections,
  });
}

function axisTitle(key: string): string {
  const unit = axisUnit(key).replace('um', 'µm');
  return unit === '' ? axisName(key) : `${axisName(key)}, ${unit}`;
}

function bestSection(report: SweepFigures): Markup {
  const { met } = report;
  return html`${met !== null && html`<p class="verdict ${met ? 'met' : 'missed'}">${met ? 'Met at the best place' : 'Not met anywhere'}</p>`}
${bestWords(report).map((sentence) => html`<p>${sentence.replaceAll(' um', ' µm')}</p>`)}
`;
}

async function sampleSection(report: SweepFigures): Promise<Markup> {
  const plot =
    report.axes.length === 2 ? await mapFigure(report) : report.axes.length === 1 ? await curve(report) : '';
  return html`${plot}
${sampleTable(report)}`;
}

/** The first axis upward, the second to the right, as the samples run. */
async function mapFigure(report: SweepFigures): Promise<Markup> {
  const [up, right] = report.axes;
  const isMargin = report.figure.kind === 'margin';
  const known = report.samples.map((sample) => sample.figure).filter((value) => value !== null);
  const least = Math.min(...known);
  const most = Math.max(...known);
  const reach = Math.min(1, Math.max(Math.abs(least), Math.abs(most), 1e-9)); // past 100 % the colour says no more
  const shareOf = (value: number) =>
    isMargin ? 0.5 + (0.5 * value) / reach : most === least ? 0.5 : (value - least) / (most - least);
  const cells = report.samples.map(({ figure: value }) => ({
    share: value === null ? 0.5 : shareOf(value),
    label: figureText(report, value),
  }));
  const { best } = report;
  const svg = await heatMap({
    title: TITLES[report.figure.kind],
    description: bestWords(report).join(' '),
    x: { label: axisTitle(right.key), values: right.values, tick: (value) => significant(value, 4) },
    y: { label: axisTitle(up.key), values: up.values, tick: (value) => significant(value, 4) },
    cells,
    ramp: isMargin ? await twoSidedRamp() : await colourRamp(),
    best: best === null ? undefined : { x: best.values[1], y: best.values[0] },
  });
  const colours = isMargin
    ? 'ring: the best place; purple: met with room to spare; orange: not met'
    : 'ring: the best place; light: high; dark: low';
  return html`<div class="plots wide">${figure('The samples, and the best place between them', colours, svg)}</div>`;
}

async function curve(report: SweepFigures): Promise<Markup> {
  const [axis] = report.axes;
  const { zones, samples, best, figure: what } = report;
  const byZone = samples.every((sample) => sample.zones !== undefined || sample.figure === null);
  const scale = what.kind === 'margin' ? 100 : 1;
  const svg = await linePlot({
    title: TITLES[what.kind],
    description: bestWords(report).join(' '),
    id: 'curve',
    x: { label: axisTitle(axis.key), domain: [axis.values[0], axis.values.at(-1)!] },
    y: { label: what.kind === 'margin' ? 'margin, %' : what.kind === 'mtf' ? 'MTF' : 'RMS, waves' },
    curves: [
      ...(byZone
        ? zones.map((_, zone) => ({
            x: axis.values,
            y: samples.map((sample) => scaled(sample.zones?.[zone], scale)),
            tone: SERIES[zone % SERIES.length],
            widthPx: 1.5,
            dash: '4 3',
          }))
        : []),
      { x: axis.values, y: samples.map((sample) => scaled(sample.figure, scale)), tone: INK, widthPx: 2.5 },
    ],
    marks: best === null ? [] : [{ x: best.values[0], text: `best ${figureText(report, best.figure)}` }],
  });
  const key = [
    { text: what.kind === 'wavefront_rms' ? 'largest' : 'least', tone: INK },
    ...zones.map((zone, at) => ({ text: zoneName(zone), tone: SERIES[at % SERIES.length], dash: '4 3' })),
  ];
  return html`${byZone && lineKey(key)}<div class="plots few">${figure('The samples', '', svg)}</div>`;
}

function scaled(value: number | null | undefined, scale: number): number | null {
  return value === null || value === undefined || !Number.isFinite(value) ? null : value * scale;
}

function sampleTable(report: SweepFigures): Markup {
  const { axes, zones, samples } = report;
  const columns: HtmlColumn<Sample>[] = [
    ...axes.map(({ key }, at) => ({
      head: axisTitle(key),
      cell: ({ values }: Sample) => significant(values[at], 4),
    })),
    {
      head: report.figure.kind === 'wavefront_rms' ? 'largest' : 'least',
      cell: (sample) => figureText(report, sample.figure),
    },
    { head: 'where', cell: (sample) => whereOf(report, sample), kind: 'text' },
    ...zones.map((zone, at) => ({
      head: zoneName(zone),
      group: 'by zone',
      cell: (sample: Sample) => figureText(report, sample.zones?.[at] ?? null),
    })),
  ];
  if (samples.some(({ decode }) => decode !== undefined))
    columns.push({ head: 'lowest rate read', cell: ({ decode }) => fixed(decode?.value, 3) });
  return figureTable('All samples', samples, columns);
}

function budgetSection(budget: readonly CoefficientBudget[]): Markup {
  const end = (value: number | null) => (value === null ? 'no end' : fixed(value, 2));
  return html`<p>How far each coefficient may go, alone, until the task is not met any more, in waves.</p>
${figureTable('Budget of each coefficient, waves', budget, [
  { head: 'coefficient', cell: ({ coefficient }) => partName(coefficient), kind: 'head' },
  { head: 'from', cell: ({ lowest }) => end(lowest) },
  { head: 'present', cell: ({ present }) => fixed(present, 2) },
  { head: 'to', cell: ({ highest }) => end(highest) },
])}`;
}
