/** All rules at all places: values, margins, and the least of them. */
import { InputError } from '../errors.js';
import type { Rule } from '../files/load-task.js';
import type { Accuracy } from '../numeric/gauss-legendre.js';
import { distortionMap } from '../optics/distortion.js';
import { type FieldPoint, type FieldSpec, fieldPoint } from '../optics/field-points.js';
import type { Rig } from '../optics/rig.js';
import { refuseTooSteep } from '../optics/sampling.js';
import { type Bench, benchFor, type Place } from './bench.js';
import { contrastAt } from './contrast.js';
import { patchOversample } from './decode/reading.js';
import { detectAt, sensorOf } from './detect.js';
import { edgeBlurAt } from './edge-blur.js';
import { type Figure, marginAtLeast, marginAtMost } from './figures.js';
import { placementAt } from './placement.js';
import { type PixelRule, pixelRules } from './rules.js';

/** A rule's figure at a place, against its limit. */
export interface RuleFigure extends Figure {
  limit: number;
  /** (value - limit) / limit, its sign such that more is better. */
  margin: number;
  met: boolean;
}

/** A rule that is answered in closed form, without trials. */
export type OpticsRule = Exclude<PixelRule, { kind: 'decode' }>;

export function isOpticsRule(rule: PixelRule): rule is OpticsRule {
  return rule.kind !== 'decode';
}

/** A rule's figure at a place. @throws {InputError} for `detect` without a sensor */
export function judgeRule(
  bench: Bench,
  rule: OpticsRule,
  place: Place,
  accuracy: Accuracy = 'full',
): RuleFigure {
  switch (rule.kind) {
    case 'contrast':
      return atLeast(contrastAt(bench, place, rule, accuracy), rule.atLeast);
    case 'placement':
      return atMost(placementAt(bench, place, rule), rule.limit.atMost);
    case 'edge_blur':
      return atMost(edgeBlurAt(bench, place, rule, accuracy), rule.limit.atMost);
    case 'detect':
      return atLeast(detectAt(bench, place, rule, accuracy), rule.ratioAtLeast);
  }
}

function atLeast(figure: Figure, limit: number): RuleFigure {
  return { ...figure, limit, margin: marginAtLeast(figure.value, limit), met: figure.value >= limit };
}

function atMost(figure: Figure, limit: number): RuleFigure {
  return { ...figure, limit, margin: marginAtMost(figure.value, limit), met: figure.value <= limit };
}

/** A rig with the rules of a task brought to its pixels. */
export interface LaidOut {
  bench: Bench;
  rules: PixelRule[];
  points: FieldPoint[];
}

/** Everything that must be right before a task can be judged on a rig.
 * @throws {InputError} rules in mm without a scale, rules that need a sensor, field points that are none, a map that folds, a wavefront too
 *   steep to be computed */
export function layOut(rig: Rig, rules: readonly Rule[], fields: readonly FieldSpec[]): LaidOut {
  const points = fields.map((spec) => fieldPoint(rig, spec));
  const inPixels = pixelRules(rig, rules);
  const bench = benchFor(rig);
  refuseFold(rig, points);
  const places = points.map(({ xMm, yMm }) => [xMm, yMm] as const);
  refuseTooSteep(rig, places, 0.5e-3 * shortestNm(rig) * rig.mount.fNumber);
  for (const rule of inPixels) {
    if (rule.kind === 'detect') sensorOf(bench);
    if (rule.kind === 'decode') patchOversample(rule.symbol, rule.modulePx);
  }
  return { bench, rules: inPixels, points };
}

function shortestNm(rig: Rig): number {
  return Math.min(...rig.camera.bands.flatMap(({ lines }) => lines.map(({ nm }) => nm)));
}

/** Past the radius where the distortion folds back there is no picture to judge. */
function refuseFold(rig: Rig, points: readonly FieldPoint[]): void {
  for (const band of rig.camera.bands) {
    const { a, c } = distortionMap(rig.lens, band);
    const turnsMm = a <= 0 ? 0 : c >= 0 ? Number.POSITIVE_INFINITY : Math.sqrt(a / (-3 * c)); // dr'/dr = 0
    const past = points.find(({ xMm, yMm }) => Math.hypot(xMm, yMm) > turnsMm);
    if (past === undefined) continue;
    throw new InputError({
      key: 'lens.waves.W311',
      message: `the distortion folds the picture over itself ${turnsMm.toFixed(2)} mm from the axis, inside of the zone at h = ${Number(past.field.toPrecision(4))}`,
      found: `${rig.lens.waves.W311} waves`,
      advice: 'Lower W311 (or distortion_percent), or judge zones nearer to the axis.',
    });
  }
}
