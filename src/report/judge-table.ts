/** A verdict as tables and plain words for the terminal. It only shows: every number comes from the report. */
import type { Advice } from '../tasks/advice.js';
import type { JudgeReport } from '../tasks/judge.js';
import type { RuleVerdict, ZoneVerdict } from '../tasks/verdict.js';
import { CAUTION } from './caution.js';
import { partName, percentText, RULE_NAMES } from './task-words.js';
import { type Column, fixed, layOutColumns, type Paint, PLAIN, significant, wrapText } from './text.js';
import { zoneName } from './zone-table.js';

const WIDTH = 80;

/** Parts of the errors that are worth a line. */
const MOST_LIMITS = 5;

export function judgeTable(report: JudgeReport, paint: Paint = PLAIN): string {
  const head = `${report.task}, with ${report.rig}: f/${significant(report.fNumber, 3)}, ${report.model} model`;
  return [
    ...wrapText(head, WIDTH).map((line) => paint.strong(line)),
    ...report.rules.flatMap((rule) => ruleSection(rule, paint)),
    ...limitSection(report, paint),
    '',
    paint.strong(report.met ? 'MET in every zone' : 'NOT MET'),
    ...verdictWords(report).flatMap((sentence) => wrapText(sentence, WIDTH)),
    '',
    ...wrapText(CAUTION, WIDTH).map((line) => paint.faint(line)),
    '',
  ].join('\n');
}

function ruleSection(rule: RuleVerdict, paint: Paint): string[] {
  const { zones } = rule;
  const decimals = rule.rule === 'contrast' || rule.rule === 'decode' ? 3 : 2;
  const figure = (head: string, value: (zone: ZoneVerdict) => number | undefined): Column => ({
    head,
    cells: zones.map((zone) => fixed(value(zone), decimals)),
  });
  const text = (head: string, value: (zone: ZoneVerdict) => string): Column => ({
    head,
    cells: zones.map(value),
    align: 'left',
  });
  const columns = [
    { head: 'mm', cells: zones.map(({ imageHeightMm }) => fixed(imageHeightMm, 2)) },
    figure('value', ({ value }) => value),
    figure('limit', ({ limit }) => limit),
    { head: 'margin', cells: zones.map(({ margin }) => percentText(margin)) },
    text('', ({ met }) => (met ? 'met' : 'NOT MET')),
  ];
  if (zones.some(({ tangential }) => tangential !== undefined))
    columns.push(
      figure('along', ({ tangential }) => tangential),
      figure('across', ({ sagittal }) => sagittal),
      { head: 'worst at', cells: zones.map(({ directionDeg }) => `${fixed(directionDeg, 0)} deg`) },
    );
  if (zones.some(({ band }) => band !== undefined && band !== 'mono'))
    columns.push(text('band', ({ band }) => band ?? ''));
  if (zones.some(({ interval }) => interval !== undefined))
    columns.push(
      { head: 'read', cells: zones.map(({ read, trials }) => `${read} of ${trials}`) },
      { head: 'misread', cells: zones.map(({ misread }) => String(misread)) },
      {
        head: '95 % sure',
        cells: zones.map(({ interval }) => (interval ?? []).map((share) => fixed(share, 3)).join('-')),
      },
    );
  const lead = { title: '', columns: [text('zone', zoneName)] };
  const tables = layOutColumns(lead, [{ title: '', columns }], WIDTH, paint);
  return ['', ...wrapText(ruleTitle(rule), WIDTH).map((line) => paint.strong(line)), ...tables.flat()];
}

/** What a rule asks, in words. */
export function ruleTitle({ rule, unit, asked, zones }: RuleVerdict): string {
  const limit = significant(zones[0].limit, 4);
  switch (rule) {
    case 'contrast':
      return `contrast: MTF of lens and camera at ${significant(asked.lpPerMm ?? 0, 4)} lp/mm, at least ${limit}`;
    case 'placement': {
      const model =
        asked.modelOrder === undefined ? '' : ` left by a radial model of order ${asked.modelOrder}`;
      return `placement: displacement${model}, at most ${limit} ${unit}`;
    }
    case 'edge_blur':
      return `edge blur: 10-90 % rise of an edge, at most ${limit} ${unit}`;
    case 'detect':
      return `detect: contrast to noise of a feature of ${significant(asked.featurePx ?? 0, 4)} px, at least ${limit}`;
    case 'decode':
      return `decode: share of ${asked.symbol} symbols read, ${significant(asked.modulePx ?? 0, 4)} px a module, at least ${limit}`;
  }
}

function limitSection({ limits }: JudgeReport, paint: Paint): string[] {
  const shown = limits.slice(0, MOST_LIMITS);
  if (shown.length === 0) return [];
  const lead = {
    title: '',
    columns: [
      {
        head: 'without',
        cells: shown.map(({ coefficient }) => partName(coefficient)),
        align: 'left' as const,
      },
    ],
  };
  const columns = [
    { head: 'least margin', cells: shown.map(({ margin }) => percentText(margin)) },
    { head: 'gain', cells: shown.map(({ gain }) => percentText(gain)) },
  ];
  return [
    '',
    paint.strong('What limits it: the least margin with one error set to zero'),
    ...layOutColumns(lead, [{ title: '', columns }], WIDTH, paint).flat(),
  ];
}

/** The verdict in plain words, and what to change first. */
export function verdictWords(report: JudgeReport): string[] {
  const { met, largestField, cornerField, advice } = report;
  const worst = report.rules.reduce((a, b) => (b.margin < a.margin ? b : a));
  const zone = worst.zones.find(({ margin }) => margin === worst.margin) ?? worst.zones[0];
  const where = `${RULE_NAMES[worst.rule]} at ${zoneName(zone)}`;
  const words = [
    met
      ? `The least margin is ${percentText(worst.margin)}: ${where}.`
      : `Furthest from its limit is ${where}: ${percentText(worst.margin)}.`,
    fieldWords(largestField, cornerField),
  ];
  const unsure = report.rules.some(
    ({ rule, met: isMet, zones }) => rule === 'decode' && isMet && zones.some(isUnsure),
  );
  if (unsure)
    words.push(
      'decode is met by the tries made, but so few cannot show that the rate is above its limit: see the interval, and raise trials to be surer.',
    );
  if (met) return words;
  const [first, ...others] = advice;
  if (first === undefined)
    return [
      ...words,
      'Neither focus nor stop nor a single coefficient mends it alone: try them together with foreglass sweep.',
    ];
  words.push(`What to change first: ${adviceWords(first)}`);
  if (others.length > 0) words.push(`Or: ${others.map(adviceWords).join(' Or: ')}`);
  return words;
}

function isUnsure({ interval, limit }: ZoneVerdict): boolean {
  return interval !== undefined && interval[0] < limit;
}

function fieldWords(largest: number, corner: number): string {
  if (largest === 0) return 'It is not even met on the axis.';
  if (largest >= corner * (1 - 1e-9)) return `It is met all over the sensor, out to h = ${fixed(corner, 3)}.`;
  return `It is met from the axis out to h = ${fixed(largest, 3)}; the corner lies at ${fixed(corner, 3)}.`;
}

function adviceWords(advice: Advice): string {
  const outcome = advice.met
    ? `this alone meets the task, with a least margin of ${percentText(advice.margin)}.`
    : `this alone brings the least margin to ${percentText(advice.margin)}.`;
  switch (advice.change) {
    case 'focus':
      return `set the sensor shift to ${significant(advice.sensorShiftUm, 3)} um; ${outcome}`;
    case 'stop': {
      const light =
        advice.whiteE === undefined
          ? ''
          : `, where ${significant(advice.whiteE, 3)} electrons are left of a white`;
      return `set the stop to f/${significant(advice.fNumber, 3)}${light}; ${outcome}`;
    }
    case 'lens':
      return `take a lens with less ${partName(advice.coefficient)}: with none of it, ${outcome}`;
    case 'task':
      return taskAdvice(advice.rule);
  }
}

/** What no lens can mend. */
function taskAdvice(rule: RuleVerdict['rule']): string {
  const start = `even a lens without any error fails ${RULE_NAMES[rule]} at this stop:`;
  switch (rule) {
    case 'detect':
      return `${start} the feature has too little light or too little contrast; raise the light or the exposure, open the stop, or enlarge the feature on the sensor.`;
    case 'placement':
      return `${start} ask for less.`;
    default:
      return `${start} the pixels or the stop are too coarse for it; come nearer, use a longer focal length or finer pixels, or open the stop.`;
  }
}
