/** What a user must be told beside a verdict. */
import type { FieldPoint } from '../optics/field-points.js';
import { colourWarnings, lensWarnings } from '../optics/limits.js';
import { pixelPitchMm, type Rig } from '../optics/rig.js';
import { isResolved } from './contrast.js';
import { patchPixels } from './decode/sheet.js';
import type { LaidOut } from './evaluate.js';
import type { PixelRule } from './rules.js';

export function taskWarnings({ bench, rules, points }: LaidOut): string[] {
  const { rig } = bench;
  return [
    ...lensWarnings(rig),
    ...pastField(rig, points),
    ...colourWarnings(rig),
    ...rules.flatMap((rule) => ruleWarnings(bench, rule)),
  ];
}

function pastField(rig: Rig, points: readonly FieldPoint[]): string[] {
  const past = points.filter(({ field }) => field > 1 + 1e-9);
  if (past.length === 0) return [];
  const names = past.map(({ place, field }) => place ?? `h = ${field}`).join(', ');
  return [
    `${names}: the image height is past full_field_mm = ${rig.lens.fullFieldMm}, so the lens is used past the field that its figures cover.`,
  ];
}

function ruleWarnings(bench: LaidOut['bench'], rule: PixelRule): string[] {
  const { camera } = bench.rig;
  switch (rule.kind) {
    case 'contrast': {
      if (isResolved(bench, rule.lpPerMm)) return [];
      const nyquist = 0.5 / pixelPitchMm(camera);
      return [
        `contrast: ${rule.lpPerMm.toPrecision(4)} lp/mm is above half a cycle a pixel (${nyquist.toFixed(1)} lp/mm), where the camera shows ` +
          'aliases and not the detail itself; it counts as no contrast.',
      ];
    }
    case 'detect': {
      const { whiteE, fullWellE, darkE } = camera.sensor!; // the layout has asked for it
      if (whiteE + darkE <= fullWellE) return [];
      return [
        `detect: white_e (${whiteE}) fills the well (${fullWellE}): where it is bright, part of the contrast is lost.`,
      ];
    }
    case 'decode': {
      const [width, height] = patchPixels(rule.symbol, rule.modulePx);
      const [sensorWidth, sensorHeight] = camera.pixels;
      if (Math.min(width, height) <= sensorHeight && Math.max(width, height) <= sensorWidth) return [];
      return [
        `decode: a symbol with its quiet zone, turned, takes ${width} x ${height} pixels, more than the sensor has.`,
      ];
    }
    default:
      return [];
  }
}
