/** Names of rules, of margins and of what limits them, for tables and sentences. */
import type { RigPart } from '../tasks/lens-parts.js';
import type { RuleVerdict } from '../tasks/verdict.js';
import { fixed } from './text.js';

export const RULE_NAMES: Readonly<Record<RuleVerdict['rule'], string>> = {
  contrast: 'contrast',
  placement: 'placement',
  edge_blur: 'edge blur',
  decode: 'decode',
  detect: 'detect',
};

const PART_NAMES: Readonly<Record<RigPart, string>> = {
  W040: 'spherical aberration',
  W131: 'coma',
  W222: 'astigmatism',
  W220: 'field curvature',
  W311: 'distortion',
  W020: 'defocus of the lens',
  W111: 'change of scale',
  axial_colour: 'axial colour',
  lateral_colour: 'lateral colour',
  sensor_shift: 'sensor shift',
  sensor_tilt: 'sensor tilt',
};

/** `coma (W131)`. */
export function partName(part: RigPart): string {
  return part.startsWith('W') ? `${PART_NAMES[part]} (${part})` : PART_NAMES[part];
}

/** A margin as it is read: `+32 %`, `-1.4 %`. */
export function percentText(margin: number): string {
  if (!Number.isFinite(margin)) return '-';
  const text = fixed(100 * margin, Math.abs(margin) < 0.1 ? 1 : 0);
  return `${margin > 0 && Number(text) !== 0 ? '+' : ''}${text} %`;
}
