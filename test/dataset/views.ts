/** Views for the tests of this folder. */
import type { Draw } from '../../src/dataset/draws.js';
import { type View, viewOf } from '../../src/dataset/view.js';
import type { Recipe } from '../../src/files/load-recipe.js';
import { parseRig } from '../../src/files/load-rig.js';
import type { Rig } from '../../src/optics/rig.js';

/** A colour rig with strong distortion; `distortionPercent` is at h = 1, a corner of the sensor. */
export function rig(
  options: { distortionPercent?: number; w131?: number; mosaic?: string; pixels?: [number, number] } = {},
): Rig {
  const { distortionPercent = -8, w131 = 0, mosaic = 'none', pixels = [320, 240] } = options;
  return parseRig({
    lens: {
      f_number: 4,
      full_field_mm: (6e-3 * Math.hypot(...pixels)) / 2,
      wavelength_nm: 550,
      relative_illumination: 'none',
      waves: { W131: w131, distortion_percent: distortionPercent },
    },
    camera: { pixels, pixel_pitch_um: 6, mosaic, bands_nm: { red: [620], green: [540], blue: [460] } },
  });
}

export const DRAW: Draw = {
  scene: 0,
  rig: 0,
  values: [],
  windowShares: [0.5, 0.5],
  placeShares: [0.5, 0.5],
  scale: 1,
  quarterTurns: 0,
  seed: 1,
  cameraSeed: 1,
};

export const PLACEMENT: Recipe['placement'] = {
  cover: 'sensor',
  scale: { kind: 'fixed', value: 1 },
  at: 'middle',
  quarterTurns: false,
};

export const OUTPUT: Recipe['output'] = {
  window: 'random',
  format: 'png',
  picture: 'developed',
  labels: 'coco',
  leastLeft: 0.2,
};

export function view(
  options: {
    rig?: Rig;
    draw?: Partial<Draw>;
    placement?: Partial<Recipe['placement']>;
    output?: Partial<Recipe['output']>;
    scene?: { width: number; height: number };
  } = {},
): View {
  return viewOf(
    { placement: { ...PLACEMENT, ...options.placement }, output: { ...OUTPUT, ...options.output } },
    { ...DRAW, ...options.draw },
    options.rig ?? rig(),
    options.scene ?? { width: 320, height: 240 },
  );
}
