/** What a user must be told of a rig that is used past what its figures cover. */
import { wavelengthsOutsideTable } from './colour.js';
import type { Rig } from './rig.js';

/** A warning where the picture reaches past h = 1.
 * @param heightMm the largest image height in use */
export function fieldWarning(rig: Rig, heightMm: number): string[] {
  const h = heightMm / rig.lens.fullFieldMm;
  if (h <= 1 + 1e-9) return [];
  return [
    `the sensor's corner lies at h = ${h.toFixed(2)}, past full_field_mm = ${rig.lens.fullFieldMm}: the lens is used past the field ` +
      'that its figures cover.',
  ];
}

/** What is to be said of the lens itself: of its surfaces, where it was traced. */
export function lensWarnings(rig: Rig): string[] {
  return [...(rig.lens.warnings ?? [])];
}

/** A warning where a colour table is held flat. */
export function colourWarnings(rig: Rig): string[] {
  const outside = wavelengthsOutsideTable(rig.lens, rig.camera.bands);
  if (outside.length === 0) return [];
  return [
    `${outside.map((nm) => `${nm} nm`).join(', ')}: the colour tables end before, and their last values are used.`,
  ];
}
