/** A sweep as tables and plain words for the terminal. It only shows: every number comes from the report. */
import type { CoefficientBudget } from '../tasks/budget.js';
import type { DepthRange } from '../tasks/depth.js';
import { CAUTION } from './caution.js';
import { partName, percentText, RULE_NAMES } from './task-words.js';
import { type Column, fixed, layOutColumns, type Paint, PLAIN, significant, wrapText } from './text.js';
import { zoneName } from './zone-table.js';

const WIDTH = 80;

/** The part of the report that is told. */
export interface SweepFigures {
  rig: string;
  model: string;
  figure: { kind: 'margin'; task: string } | { kind: 'mtf'; lpPerMm: number } | { kind: 'wavefront_rms' };
  lightFrom: { fNumber: number; whiteE: number } | null;
  zones: readonly { field: number; azimuthDeg: number; place: string | null }[];
  axes: readonly { key: string; values: readonly number[] }[];
  samples: readonly Sample[];
  best: Sample | null;
  bestSampled: Sample | null;
  budget?: readonly CoefficientBudget[];
  depth?: DepthRange | null;
  met: boolean | null;
}

export interface Sample {
  values: readonly number[];
  figure: number | null;
  met?: boolean;
  rule?: string;
  zone?: number;
  zones?: readonly number[];
  decode?: { value: number };
  whiteE?: number;
}

export function sweepTable(report: SweepFigures, paint: Paint = PLAIN): string {
  const head = `${subjectOf(report)}, with ${report.rig}: ${report.model} model`;
  return [
    ...wrapText(head, WIDTH).map((line) => paint.strong(line)),
    ...sampleSection(report, paint),
    ...bestSection(report, paint),
    ...budgetSection(report, paint),
    ...depthSection(report, paint),
    '',
    ...wrapText(CAUTION, WIDTH).map((line) => paint.faint(line)),
    '',
  ].join('\n');
}

export function subjectOf({ figure }: SweepFigures): string {
  switch (figure.kind) {
    case 'margin':
      return figure.task;
    case 'mtf':
      return `MTF at ${significant(figure.lpPerMm, 4)} lp/mm`;
    case 'wavefront_rms':
      return 'RMS of the wavefront';
  }
}

export const TITLES = {
  margin: 'Least margin over all rules and zones',
  mtf: 'MTF of lens and camera, lowest over directions and zones',
  wavefront_rms: 'RMS of the wavefront in waves, largest over the zones',
} as const;
const SHORT = { margin: 'least margin', mtf: 'lowest MTF', wavefront_rms: 'largest RMS' } as const;

function sampleSection(report: SweepFigures, paint: Paint): string[] {
  const { axes, figure } = report;
  if (axes.length === 0) return [];
  const table = axes.length === 2 ? gridOf(report, paint) : listOf(report, paint);
  return ['', paint.strong(TITLES[figure.kind]), ...table];
}

/** Two axes: the first down, the second across. */
function gridOf(report: SweepFigures, paint: Paint): string[] {
  const [down, across] = report.axes;
  const cell = (row: number, column: number) =>
    figureText(report, report.samples[row * across.values.length + column].figure);
  const lead = {
    title: axisName(down.key),
    columns: [{ head: axisUnit(down.key), cells: down.values.map((value) => significant(value, 4)) }],
  };
  // each column a group of its own, so that a wide grid goes on below
  const groups = across.values.map((value, column) => ({
    title: column === 0 ? `${axisName(across.key)} ${axisUnit(across.key)}`.trim() : '',
    columns: [{ head: significant(value, 4), cells: down.values.map((_, row) => cell(row, column)) }],
  }));
  return layOutColumns(lead, groups, WIDTH, paint).flatMap((table, at) =>
    at === 0 ? table : ['', ...table],
  );
}

function listOf(report: SweepFigures, paint: Paint): string[] {
  const { samples, axes, zones, figure } = report;
  const lead = {
    title: '',
    columns: axes.map(
      ({ key }, at): Column => ({
        head: `${axisName(key)} ${axisUnit(key)}`.trim(),
        cells: samples.map(({ values }) => significant(values[at], 4)),
      }),
    ),
  };
  const columns: Column[] = [
    {
      head: figure.kind === 'wavefront_rms' ? 'largest' : 'least',
      cells: samples.map((sample) => figureText(report, sample.figure)),
    },
    {
      head: 'where',
      cells: samples.map((sample) => whereOf(report, sample)),
      align: 'left',
    },
  ];
  const byZone = zones.map(
    (zone, at): Column => ({
      head: zoneName(zone),
      cells: samples.map((sample) => figureText(report, sample.zones?.[at] ?? null)),
    }),
  );
  const groups = [
    { title: '', columns },
    { title: 'by zone', columns: byZone },
  ];
  if (samples.some(({ decode }) => decode !== undefined))
    groups.push({
      title: 'lowest rate',
      columns: [{ head: 'read', cells: samples.map(({ decode }) => fixed(decode?.value, 3)) }],
    });
  return layOutColumns(lead, groups, WIDTH, paint).flatMap((table, at) =>
    at === 0 ? table : ['', ...table],
  );
}

function bestSection(report: SweepFigures, paint: Paint): string[] {
  const words = bestWords(report);
  if (words.length === 0) return [];
  const title = report.met === null ? 'Best place' : report.met ? 'Best place: MET' : 'Best place: NOT MET';
  return ['', paint.strong(title), ...words.flatMap((sentence) => wrapText(sentence, WIDTH))];
}

/** Where it is best, in sentences; none where nothing is swept. */
export function bestWords(report: SweepFigures): string[] {
  const { best, bestSampled } = report;
  if (best === null || bestSampled === null) return [];
  const name = SHORT[report.figure.kind];
  const told = (sample: Sample) =>
    `${placeText(report, sample)}: ${name} ${figureText(report, sample.figure)} (${whereOf(report, sample)})`;
  const words = [`Best between the samples: ${told(best)}.`];
  if (bestSampled.values.some((value, at) => value !== best.values[at]))
    words.push(`Best sample: ${told(bestSampled)}.`);
  const { lightFrom } = report;
  if (lightFrom !== null && best.whiteE !== undefined)
    words.push(
      `Light: ${significant(best.whiteE, 3)} electrons are left of a white at this stop, of ${significant(lightFrom.whiteE, 3)} at ` +
        `f/${significant(lightFrom.fNumber, 3)}; --keep-light reckons with light or exposure that makes up for the stop.`,
    );
  if (atBorder(report, best).length > 0)
    words.push(`It lies on the border of what was swept (${atBorder(report, best).join(', ')}): sweep on.`);
  return words;
}

/** Axes of which the best place takes the first or the last value. */
function atBorder({ axes }: SweepFigures, { values }: Sample): string[] {
  return axes
    .filter(({ values: all }, at) => {
      const span = all[all.length - 1] - all[0];
      const isNear = (border: number) => Math.abs(values[at] - border) < 0.01 * span;
      return all.length > 1 && (isNear(all[0]) || isNear(all[all.length - 1]));
    })
    .map(({ key }) => axisName(key));
}

/** Where budget and depth are taken. */
export function there(report: SweepFigures): string {
  return report.best === null ? '' : ` at ${placeText(report, report.best)}`;
}

function budgetSection(report: SweepFigures, paint: Paint): string[] {
  const { budget } = report;
  if (budget === undefined) return [];
  const range = (value: number | null) => (value === null ? 'no end' : fixed(value, 2));
  const lead = {
    title: '',
    columns: [
      {
        head: 'coefficient',
        cells: budget.map(({ coefficient }) => partName(coefficient)),
        align: 'left' as const,
      },
    ],
  };
  const columns = [
    { head: 'from', cells: budget.map(({ lowest }) => range(lowest)) },
    { head: 'present', cells: budget.map(({ present }) => fixed(present, 2)) },
    { head: 'to', cells: budget.map(({ highest }) => range(highest)) },
  ];
  const isGone = budget.every(({ present, lowest, highest }) => lowest === present && highest === present);
  const note = isGone ? ['The task is not met there, so there is nothing left to give.'] : [];
  return [
    '',
    paint.strong(`Budget${there(report)}: each coefficient alone, in waves`),
    ...layOutColumns(lead, [{ title: '', columns }], WIDTH, paint).flat(),
    ...note,
  ];
}

function depthSection(report: SweepFigures, paint: Paint): string[] {
  const { depth } = report;
  if (depth === undefined) return [];
  const title = ['', paint.strong(`Depth${there(report)}: how near and how far the object may lie`)];
  return [...title, ...wrapText(depthWords(depth), WIDTH)];
}

/** The depth in a sentence. */
export function depthWords(depth: DepthRange | null): string {
  if (depth === null) return 'The task is not met there, so it has no depth.';
  const mm = (value: number | null | undefined) =>
    value === null || value === undefined ? 'no end' : `${significant(value, 4)} mm`;
  const range =
    depth.objectDistanceMm === undefined
      ? `${mm(depth.nearerMm)} nearer to ${mm(depth.fartherMm)} farther than in focus`
      : `from ${mm(depth.nearestMm)} to ${mm(depth.farthestMm)}, in focus at ${mm(depth.objectDistanceMm)}`;
  return `The task is met ${range}: a depth of ${mm(depth.depthMm)} at a magnification of ${significant(depth.magnification, 3)}.`;
}

export function figureText({ figure }: SweepFigures, value: number | null): string {
  if (value === null) return '-';
  return figure.kind === 'margin' ? percentText(value) : fixed(value, 3);
}

export function whereOf({ zones }: SweepFigures, { rule, zone }: Sample): string {
  const names = [
    rule === undefined ? undefined : RULE_NAMES[rule as keyof typeof RULE_NAMES],
    zone === undefined ? undefined : zoneName(zones[zone]),
  ];
  return names.filter((name) => name !== undefined).join(', ') || '-';
}

function placeText({ axes }: SweepFigures, { values }: Sample): string {
  return axes
    .map(({ key }, at) =>
      key === 'mount.f_number'
        ? `f/${significant(values[at], 3)}`
        : `${axisName(key)} ${significant(values[at], 3)} ${axisUnit(key)}`.trim(),
    )
    .join(', ');
}

const AXIS_NAMES: Readonly<Record<string, string>> = {
  'mount.f_number': 'f-number',
  'mount.sensor_shift_um': 'sensor shift',
};

/** `sensor shift` or the path of the key; the unit of the two is told apart from the name. */
export function axisName(key: string): string {
  return AXIS_NAMES[key] ?? key;
}

export function axisUnit(key: string): string {
  return key === 'mount.sensor_shift_um' ? 'um' : '';
}
