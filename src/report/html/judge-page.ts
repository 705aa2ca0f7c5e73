/** A verdict as a page: the verdict first, then what it rests on. It only shows: every number comes from the report. */
import { fieldPoint } from '../../optics/field-points.js';
import { pixelPitchMm, type Rig } from '../../optics/rig.js';
import type { JudgeReport } from '../../tasks/judge.js';
import type { RuleVerdict, ZoneVerdict } from '../../tasks/verdict.js';
import { ruleTitle, verdictWords } from '../judge-table.js';
import { barRows } from '../plots/bar-rows.js';
import { metRegionPlot } from '../plots/met-region.js';
import { partName, percentText, RULE_NAMES } from '../task-words.js';
import { fixed, significant } from '../text.js';
import { zoneName } from '../zone-table.js';
import { html, type Markup } from './markup.js';
import { pageText } from './page.js';
import { figure, figureTable, type HtmlColumn, tiles } from './parts.js';
import { rigFacts } from './rig-facts.js';

export async function judgePage(rig: Rig, report: JudgeReport): Promise<string> {
  const sections = [
    { id: 'verdict', title: 'Verdict', body: verdict(report) },
    { id: 'frame', title: 'Where it is met', body: await frameSection(rig, report) },
    { id: 'margins', title: 'Margins by rule and zone', body: await marginSection(report) },
    { id: 'limits', title: 'What limits it', body: await limitSection(report) },
    { id: 'figures', title: 'All figures', body: report.rules.map(ruleTable) },
    { id: 'rig', title: 'The rig', body: rigFacts(rig) },
  ];
  return pageText({
    title: `${report.task}: ${report.met ? 'met' : 'not met'}`,
    lead: `with ${report.rig} at f/${significant(report.fNumber, 3)}, sensor shift ${significant(report.sensorShiftUm, 3)} µm, ${report.model} model, seed ${report.seed}`,
    warnings: report.warnings,
    sections: report.limits.length > 0 ? sections : sections.filter(({ id }) => id !== 'limits'),
  });
}

function verdict(report: JudgeReport): Markup {
  const { met, margin, largestField, cornerField, limits } = report;
  const worst = report.rules.reduce((a, b) => (b.margin < a.margin ? b : a));
  const zone = worst.zones.find((one) => one.margin === worst.margin) ?? worst.zones[0];
  const all = [
    {
      what: 'Least margin',
      value: percentText(margin),
      where: `${RULE_NAMES[worst.rule]} at ${zoneName(zone)}`,
    },
    {
      what: 'Met from the axis out to',
      value: `h = ${fixed(largestField, 2)}`,
      where: `the farthest corner lies at ${fixed(cornerField, 2)}`,
    },
  ];
  if (limits.length > 0 && limits[0].gain > 0)
    all.push({
      what: 'Limits it most',
      value: partName(limits[0].coefficient),
      where: `without it the least margin is ${percentText(limits[0].margin)}`,
    });
  return html`<p class="verdict ${met ? 'met' : 'missed'}">${met ? 'Met in every zone' : 'Not met'}</p>
${verdictWords(report).map((sentence) => html`<p>${sentence.replaceAll(' um', ' µm')}</p>`)}
${tiles(all)}
`;
}

async function frameSection(rig: Rig, report: JudgeReport): Promise<Markup> {
  const pitch = pixelPitchMm(rig.camera);
  const [width, height] = rig.camera.pixels;
  const [axisX, axisY] = rig.mount.axisPx;
  const zones = report.rules[0].zones.map((zone, at) => {
    const { place, field, azimuthDeg } = zone;
    const { xMm, yMm } = fieldPoint(rig, place ?? { field, azimuthDeg });
    return { name: zoneName(zone), xMm, yMm, met: report.rules.every((rule) => rule.zones[at].met) };
  });
  const radiusMm = report.largestField * rig.lens.fullFieldMm;
  const names = (met: boolean) =>
    zones
      .filter((zone) => zone.met === met)
      .map(({ name }) => name)
      .join(', ') || 'none';
  const description = `Met within ${fixed(radiusMm, 2)} mm of the axis; zones that meet the task: ${names(true)}; that do not: ${names(false)}`;
  const frame = {
    left: (-0.5 - axisX) * pitch,
    right: (width - 0.5 - axisX) * pitch,
    top: (-0.5 - axisY) * pitch,
    bottom: (height - 0.5 - axisY) * pitch,
  };
  const isOutside = zones.some(
    ({ xMm, yMm }) => xMm < frame.left || xMm > frame.right || yMm < frame.top || yMm > frame.bottom,
  );
  const svg = await metRegionPlot({
    frame,
    radiusMm,
    zones,
    description,
  });
  return html`<p>${description}.</p>
<div class="plots few">${figure('The frame', `shaded: met from the axis out to here, looked at along the diagonals; ring: zone met; cross: not met${isOutside ? '; zones outside of the frame are left out' : ''}`, svg)}</div>
`;
}

async function marginSection({ rules }: JudgeReport): Promise<Markup> {
  const svg = await barRows({
    title: 'Margins by rule and zone',
    description: rules
      .map(
        (rule) =>
          `${RULE_NAMES[rule.rule]}: ${rule.zones.map((zone) => `${zoneName(zone)} ${percentText(zone.margin)}`).join(', ')}`,
      )
      .join('; '),
    id: 'margins',
    rows: rules.flatMap(({ rule, zones }) =>
      zones.map((zone) => ({
        name: `${RULE_NAMES[rule]}, ${zoneName(zone)}`,
        value: zone.margin,
        label: percentText(zone.margin),
        isBad: !zone.met,
      })),
    ),
    axis: 'margin, % of the limit',
    reach: LONGEST,
    tick: (value) => fixed(100 * value, 0),
  });
  const zones = rules[0].zones.map((_, at) => at);
  return html`<p>How far each figure lies on the right side of its limit, as a share of the limit; bars end at ${percentText(LONGEST)}.</p>
<div class="plots wide">${figure('Margins', 'left of 0, orange: not met', svg)}</div>
${figureTable('Margin of each rule in each zone', zones, [
  { head: 'zone', cell: (at) => zoneName(rules[0].zones[at]), kind: 'head' },
  ...rules.map((rule) => ({
    head: RULE_NAMES[rule.rule],
    cell: (at: number) => `${percentText(rule.zones[at].margin)} ${rule.zones[at].met ? 'met' : 'not met'}`,
  })),
])}`;
}

/** Margins past this say no more than that there is room. */
const LONGEST = 1.5;

async function limitSection({ limits }: JudgeReport): Promise<Markup> {
  const svg = await barRows({
    title: 'What the least margin gains without each error',
    description: limits
      .map(({ coefficient, gain }) => `${partName(coefficient)} ${percentText(gain)}`)
      .join(', '),
    id: 'limits',
    rows: limits.map(({ coefficient, gain }) => ({
      name: partName(coefficient),
      value: gain,
      label: percentText(gain),
      isBad: gain < 0,
    })),
    axis: 'gain of the least margin, % of the limit',
    reach: LONGEST,
    tick: (value) => fixed(100 * value, 0),
  });
  return html`<p>What the least margin gains when one error of lens or mount is set to zero and the rest stays. A loss means that it makes up for another.</p>
<div class="plots wide">${figure('Gains', '', svg)}</div>
${figureTable('The least margin with one error set to zero', limits, [
  { head: 'without', cell: ({ coefficient }) => partName(coefficient), kind: 'head' },
  { head: 'least margin', cell: ({ margin }) => percentText(margin) },
  { head: 'gain', cell: ({ gain }) => percentText(gain) },
])}`;
}

function ruleTable(rule: RuleVerdict): Markup {
  const { zones } = rule;
  const decimals = rule.rule === 'contrast' || rule.rule === 'decode' ? 3 : 2;
  const number = (head: string, of: (zone: ZoneVerdict) => number | undefined): HtmlColumn<ZoneVerdict> => ({
    head,
    cell: (zone) => fixed(of(zone), decimals),
  });
  const columns: HtmlColumn<ZoneVerdict>[] = [
    { head: 'zone', cell: zoneName, kind: 'head' },
    { head: 'mm', cell: ({ imageHeightMm }) => fixed(imageHeightMm, 2) },
    number(rule.unit === null ? 'value' : `value, ${rule.unit}`, ({ value }) => value),
    number('limit', ({ limit }) => limit),
    { head: 'margin', cell: ({ margin }) => percentText(margin) },
    { head: '', cell: ({ met }) => (met ? 'met' : 'not met'), kind: 'text' },
  ];
  if (zones.some(({ tangential }) => tangential !== undefined))
    columns.push(
      number('along', ({ tangential }) => tangential),
      number('across', ({ sagittal }) => sagittal),
      { head: 'worst at, degrees', cell: ({ directionDeg }) => fixed(directionDeg, 0) },
    );
  if (zones.some(({ band }) => band !== undefined && band !== 'mono'))
    columns.push({ head: 'band', cell: ({ band }) => band ?? '', kind: 'text' });
  if (zones.some(({ interval }) => interval !== undefined))
    columns.push(
      { head: 'read', cell: ({ read, trials }) => `${read} of ${trials}` },
      { head: 'misread', cell: ({ misread }) => String(misread) },
      {
        head: '95 % sure',
        cell: ({ interval }) => (interval ?? []).map((share) => fixed(share, 3)).join(' to '),
      },
    );
  return figureTable(
    ruleTitle(rule),
    zones,
    columns.map((column) => ({ ...column, head: column.head || 'verdict' })),
  );
}
