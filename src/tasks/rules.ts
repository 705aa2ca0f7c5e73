/** Rules in pixels: what a task asks of the picture once its sizes are brought to the sensor. */
import { type Fault, InputError } from '../errors.js';
import type { Rule } from '../files/load-task.js';
import { pixelPitchMm, type Rig } from '../optics/rig.js';
import { objectPixelMm } from './object-scale.js';

/** A limit from above in the unit in which the task states it, and what one pixel is in that unit. */
export interface UpperLimit {
  atMost: number;
  unit: 'px' | 'mm';
  perPixel: number;
}

export type PixelRule =
  | { kind: 'contrast'; lpPerMm: number; atLeast: number }
  | { kind: 'placement'; limit: UpperLimit; modelOrder: number | null }
  | { kind: 'edge_blur'; limit: UpperLimit }
  | { kind: 'detect'; diameterPx: number; contrast: number; ratioAtLeast: number }
  | {
      kind: 'decode';
      symbol: 'qr' | 'data_matrix' | 'code_128';
      modulePx: number;
      successAtLeast: number;
      trials: number;
    };

export type PixelRuleOf<Kind extends PixelRule['kind']> = Extract<PixelRule, { kind: Kind }>;

/** A feature is one bar: a line pair is two of them. */
const FEATURES_PER_PERIOD = 2;

/** The rules of a task on a rig's sensor.
 * @throws {InputError} for every rule in mm where the rig does not state its scale on the object
 */
export function pixelRules(rig: Rig, rules: readonly Rule[]): PixelRule[] {
  const objectPixel = objectPixelMm(rig);
  const faults: Fault[] = [];
  const pixels = (mm: number, at: number, key: string): number => {
    if (objectPixel === undefined) faults.push(scaleFault(at, rules[at].kind, key, mm));
    return mm / (objectPixel ?? 1);
  };
  const limit = (rule: Extract<Rule, { limit: unknown }>, at: number): UpperLimit => {
    if ('atMostPx' in rule.limit) return { atMost: rule.limit.atMostPx, unit: 'px', perPixel: 1 };
    pixels(rule.limit.atMostMm, at, 'at_most_mm');
    return { atMost: rule.limit.atMostMm, unit: 'mm', perPixel: objectPixel ?? 1 };
  };
  const feature = (size: { featureMm: number } | { featurePx: number }, at: number) =>
    'featurePx' in size ? size.featurePx : pixels(size.featureMm, at, 'feature_mm');
  const inPixels = (rule: Rule, at: number): PixelRule => {
    switch (rule.kind) {
      case 'contrast': {
        const { size, atLeast } = rule;
        if ('lpPerMm' in size) return { kind: rule.kind, lpPerMm: size.lpPerMm, atLeast };
        const periodMm = FEATURES_PER_PERIOD * feature(size, at) * pixelPitchMm(rig.camera);
        return { kind: rule.kind, lpPerMm: 1 / periodMm, atLeast };
      }
      case 'placement':
        return {
          kind: rule.kind,
          limit: limit(rule, at),
          modelOrder: rule.after === 'radial-model' ? rule.modelOrder : null,
        };
      case 'edge_blur':
        return { kind: rule.kind, limit: limit(rule, at) };
      case 'detect': {
        const { contrast, ratioAtLeast } = rule;
        return { kind: rule.kind, diameterPx: feature(rule.size, at), contrast, ratioAtLeast };
      }
      case 'decode': {
        const { kind, symbol, module, successAtLeast, trials } = rule;
        const modulePx = 'modulePx' in module ? module.modulePx : pixels(module.moduleMm, at, 'module_mm');
        return { kind, symbol, modulePx, successAtLeast, trials };
      }
    }
  };
  const all = rules.map(inPixels);
  if (faults.length > 0) throw new InputError(faults);
  return all;
}

function scaleFault(at: number, kind: string, key: string, mm: number): Fault {
  return {
    key: `require[${at}].${kind}.${key}`,
    message: 'is a size on the object, and the rig does not state its scale there',
    found: `${mm}`,
    advice:
      'State mount.object_pixel_mm, mount.magnification or mount.object_distance_mm in the rig, ' +
      `or give ${key.replace('_mm', '_px')} in the task.`,
  };
}
