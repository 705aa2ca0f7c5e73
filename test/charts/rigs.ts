/** Small rigs for charts. */
import { parseRig } from '../../src/files/load-rig.js';
import type { Rig } from '../../src/optics/rig.js';

/** A rig of so many pixels of 5 um; `change` is put into its file's mount. */
export function chartRig(pixels: [number, number], mount: object = {}): Rig {
  return parseRig({
    lens: {
      name: 'chart lens',
      focal_length_mm: 12,
      f_number: 4,
      full_field_mm: 2,
      wavelength_nm: 550,
      waves: { W311: 0 },
    },
    camera: { pixels, pixel_pitch_um: 5, bands_nm: { mono: [550] } },
    mount,
  });
}
