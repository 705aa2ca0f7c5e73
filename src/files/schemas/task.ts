/** What a vision task asks of the picture. */
import type { z } from 'zod';
import { checkOneOf, crossChecked, numberIn } from './cross-check.js';
import { fieldPoint } from './field-point.js';
import { choice, list, mapping, number, text } from './values.js';

const size = (unit: 'mm' | 'px', what: string) => number({ above: 0, max: 1e6, unit }, what);
const share = (what: string) => number({ above: 0, max: 1 }, what);

const contrast = crossChecked(
  mapping({
    feature_mm: size('mm', 'Width of a bar on the object; a bar and its gap are one period.').optional(),
    feature_px: size('px', 'Width of a bar in pixels.').optional(),
    lp_per_mm: number(
      { above: 0, max: 1e5, unit: 'line pairs per mm' },
      'Frequency on the sensor.',
    ).optional(),
    at_least: share('Smallest MTF of lens and camera, in the worst direction.'),
  }),
  (rule, report) => checkOneOf(rule, ['feature_mm', 'feature_px', 'lp_per_mm'], report, { needed: true }),
).describe('MTF of lens and camera at the frequency of a feature.');

const atMost = {
  at_most_px: size('px', 'Largest value allowed.').optional(),
  at_most_mm: size('mm', 'Largest value allowed, on the object.').optional(),
};

const placement = crossChecked(
  mapping({
    ...atMost,
    after: choice(
      ['none', 'radial-model'],
      'What is taken out first: nothing, or the best radial model.',
    ).default('none'),
    model_order: number(
      { min: 1, max: 7, whole: true },
      'Order of the radial model, 1, 3, 5 or 7: 1 is a scale alone. Default: 3.',
    ).optional(),
  }),
  (rule, report) => {
    checkOneOf(rule, Object.keys(atMost), report, { needed: true });
    const order = numberIn(rule.model_order);
    if (order !== undefined && order % 2 === 0)
      report(['model_order'], { message: 'is even', allowed: '1, 3, 5 or 7' });
    if (rule.model_order !== undefined && rule.after !== 'radial-model')
      report(['model_order'], { message: 'stands without after: radial-model', inKey: true });
  },
).describe('Displacement of a point against the ideal picture.');

const edgeBlur = crossChecked(mapping(atMost), (rule, report) =>
  checkOneOf(rule, Object.keys(atMost), report, { needed: true }),
).describe('10-90 % rise of an edge, in the worst direction.');

const decode = crossChecked(
  mapping({
    symbol: choice(['qr', 'data_matrix', 'code_128'], 'Kind of the symbol.'),
    module_mm: size('mm', 'Size of a module on the object.').optional(),
    module_px: size('px', 'Size of a module in pixels.').optional(),
    success_at_least: share('Smallest share of symbols read rightly.'),
    trials: number(
      { min: 1, max: 100000, whole: true },
      'Number of symbols tried at each field point.',
    ).default(50),
  }),
  (rule, report) => checkOneOf(rule, ['module_mm', 'module_px'], report, { needed: true }),
).describe('Rate at which a decoder reads symbols in simulated pictures.');

const detect = crossChecked(
  mapping({
    feature_mm: size('mm', 'Diameter of the feature on the object.').optional(),
    feature_px: size('px', 'Diameter of the feature in pixels.').optional(),
    contrast: share('Contrast of the feature against its surround.'),
    ratio_at_least: number({ above: 0, max: 1e6 }, 'Smallest contrast-to-noise ratio.').default(5),
  }),
  (rule, report) => checkOneOf(rule, ['feature_mm', 'feature_px'], report, { needed: true }),
).describe('Contrast-to-noise ratio of a feature (Rose criterion).');

const RULES = { contrast, placement, edge_blur: edgeBlur, decode, detect };
const RULE_NAMES = Object.keys(RULES);

const rule = crossChecked(
  mapping({
    contrast: contrast.optional(),
    placement: placement.optional(),
    edge_blur: edgeBlur.optional(),
    decode: decode.optional(),
    detect: detect.optional(),
  }),
  (value, report) => {
    const there = RULE_NAMES.filter((name) => value[name] !== undefined);
    for (const name of there.slice(1)) {
      const advice = `Begin a list entry of its own: - ${name}: ...`;
      report([name], { message: `stands in one list entry with ${there[0]}`, advice, inKey: true });
    }
    if (there.length === 0) {
      report([], { message: 'is no rule', allowed: `one of ${RULE_NAMES.join(', ')}`, lacks: RULE_NAMES });
    }
  },
).meta({ description: 'One rule.', minProperties: 1, maxProperties: 1 });

export const taskFile = mapping({
  name: text('Name of the task, for reports.').default('task'),
  zones: list(fieldPoint, 'a list of field points')
    .describe(
      'Where the rules must be met. Left out: axis, top, right, top_right, or all nine places where the rig is not symmetric.',
    )
    .optional(),
  require: list(rule, 'a list of rules').describe('What the picture must show, a rule an entry.'),
}).meta({ title: 'Task', description: 'What a vision task asks of the picture, zone by zone.' });

export type TaskFile = z.output<typeof taskFile>;
