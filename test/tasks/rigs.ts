/** Rigs for judging, by what is special about them. */
import { parseRig } from '../../src/files/load-rig.js';
import type { Rig } from '../../src/optics/rig.js';
import { type Bench, benchFor, type Place } from '../../src/tasks/bench.js';

export interface RigParts {
  lens?: object;
  waves?: object;
  camera?: object;
  mount?: object;
}

/** 640 x 480 pixels of 5 um behind a lens at f/4 without aberrations; h = 1 at 2 mm, a corner. */
export function taskRig({ lens, waves, camera, mount }: RigParts = {}): Rig {
  return parseRig({
    lens: {
      name: 'test lens',
      focal_length_mm: 12,
      f_number: 4,
      full_field_mm: 2,
      wavelength_nm: 550,
      waves: { ...waves },
      relative_illumination: 'none',
      ...lens,
    },
    camera: { pixels: [640, 480], pixel_pitch_um: 5, bands_nm: { mono: [550] }, ...camera },
    mount: { object_pixel_mm: 0.1, ...mount },
  });
}

export const SENSOR = {
  white_e: 8000,
  full_well_e: 10000,
  dark_noise_e: 5,
  prnu_percent: 0.7,
  dsnu_e: 1.5,
  bit_depth: 12,
};

export const COLOUR = { bands_nm: { red: [620], green: [540], blue: [460] } };

/** A place at h along +x. */
export function placeAt(rig: Rig, h: number): Place {
  return { xMm: h * rig.lens.fullFieldMm, yMm: 0 };
}

/** A place on a bench of its own, for the rules' functions. */
export function benchAt(parts: RigParts, h: number): [bench: Bench, place: Place] {
  const rig = taskRig(parts);
  return [benchFor(rig), placeAt(rig, h)];
}
