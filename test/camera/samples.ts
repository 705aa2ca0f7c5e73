import type { Exposure } from '../../src/camera/exposure.js';
import { exposureFor, type Seeds } from '../../src/camera/exposure.js';
import { CounterRandom } from '../../src/numeric/random.js';
import type { Camera, Mosaic, Sensor } from '../../src/optics/rig.js';

export const SENSOR: Sensor = {
  whiteE: 8000,
  fullWellE: 10_000,
  darkNoiseE: 5,
  darkE: 0,
  prnuPercent: 0.7,
  dsnuE: 1.5,
  bitDepth: 12,
};

/** A sensor of which only the converter is left. */
export const QUIET: Sensor = { ...SENSOR, darkNoiseE: 0, prnuPercent: 0, dsnuE: 0 };

export const ORDERS: readonly Exclude<Mosaic, 'none'>[] = ['rggb', 'bggr', 'grbg', 'gbrg'];

const BANDS = {
  mono: [{ name: 'mono', lines: [{ nm: 550, weight: 1 }] }],
  colour: [
    { name: 'red', lines: [{ nm: 620, weight: 1 }] },
    { name: 'green', lines: [{ nm: 540, weight: 1 }] },
    { name: 'blue', lines: [{ nm: 460, weight: 1 }] },
  ],
};

export function camera(
  pixels: readonly [number, number],
  options: { sensor?: Sensor; mosaic?: Mosaic; bands?: keyof typeof BANDS } = {},
): Camera {
  const { sensor, mosaic = 'none', bands = mosaic === 'none' ? 'mono' : 'colour' } = options;
  return { pixels, pixelPitchUm: 3.45, fillFactor: 1, bands: BANDS[bands], mosaic, sensor };
}

export function exposure(
  pixels: readonly [number, number],
  options: Parameters<typeof camera>[1] = {},
  seeds: Seeds = { seed: 1, cameraSeed: 1 },
): Exposure {
  return exposureFor(camera(pixels, options), seeds);
}

export function flat(pixels: readonly [number, number], value: number): Float32Array {
  return new Float32Array(pixels[0] * pixels[1]).fill(value);
}

/** A plane of even random values from 0 to 1. */
export function speckle(pixels: readonly [number, number], seed: number): Float32Array {
  const random = new CounterRandom(seed, 0);
  random.start(0);
  return flat(pixels, 0).map(() => random.uniform());
}
