/** What `render` is asked for, and the refusals that need no work. */
import { availableParallelism } from 'node:os';
import { type Fault, InputError } from '../errors.js';
import {
  formatOf,
  type PictureFormat,
  refuseLargeSide,
  refuseLinearFormat,
} from '../files/pictures/index.js';
import { assertWritable } from '../files/write-whole.js';
import type { Raster } from '../imaging/raster.js';
import type { SceneSheet } from '../imaging/warp.js';
import type { Engine } from '../imaging/work.js';
import type { Rig } from '../optics/rig.js';
import { checkSheet } from './render-sheet.js';

export interface RenderOptions {
  rig: Rig;
  /** A picture file, or a picture in linear light: one plane (mono) or three (red, green, blue). */
  scene: string | Raster;
  /** The picture to write; left out: it is returned only. */
  out?: string;
  /** Write `out` as 16-bit linear light (PNG or TIFF) instead of 8-bit sRGB. */
  linear?: boolean;
  /** File for the sensor's own numbers (16-bit PNG or TIFF); a camera without mosaic must have one band. */
  raw?: string;
  /** Hand the sensor's own numbers back, beside the picture. */
  keepRaw?: boolean;
  /** File for the record (.json, .yaml). */
  recordFile?: string;
  /** File for a sheet that shows scene, picture and PSFs side by side (.png, .svg). */
  sheet?: string;
  /** The scene's numbers are linear light, not sRGB. */
  sceneLinear?: boolean;
  /** Blur on a grid of so many samples a pixel on each side, 1 to 16. Default: 1. */
  oversample?: number;
  /** Samples by which the scene reaches past the sensor on each side, to be thrown in by distortion: it is then resized to cover those,
   * too. Default: none; past its border a scene goes on with its edge. */
  sceneMargin?: { left: number; top: number; right: number; bottom: number };
  /** Largest error by blending PSFs, as a share of full scale, above 0. Default: 0.004. */
  tolerance?: number;
  /** Largest share of a PSF's light outside its kernel, above 0. Default: 0.005. */
  kernelTolerance?: number;
  /** Draws the noise. Default: 1. */
  seed?: number;
  /** Draws PRNU and DSNU, the camera's own pattern. Default: 1. */
  cameraSeed?: number;
  /** Worker threads. Default: one a core. The picture does not depend on it. */
  threads?: number;
  /** What does the arithmetic: the compiled kernels (`simd`, the default), or plain TypeScript in float64 (`reference`), slower by far. */
  engine?: Engine;
  signal?: AbortSignal;
  onProgress?: (progress: { stage: string; done: number; total: number }) => void;
}

/** Options with their defaults, checked. */
export interface Settings {
  rig: Rig;
  oversample: number;
  sheet: SceneSheet;
  tolerances: { blend: number; kernel: number };
  seeds: { seed: number; cameraSeed: number };
  signal?: AbortSignal;
}

/** Each thread takes work space of its own out of 4 GiB. */
const MOST_THREADS = 64;

/** Threads and engine, checked.
 * @throws {InputError} */
export function settleCrew(options: Pick<RenderOptions, 'threads' | 'engine'>): {
  threads: number;
  engine: Engine;
} {
  const { threads = Math.min(MOST_THREADS, availableParallelism()), engine = 'simd' } = options;
  const faults: Fault[] = [];
  if (!Number.isInteger(threads) || threads < 1 || threads > MOST_THREADS) {
    const allowed = `a whole number from 1 to ${MOST_THREADS}`;
    faults.push({ key: 'threads', message: 'is out of range', found: String(threads), allowed });
  }
  if (engine !== 'simd' && engine !== 'reference') {
    faults.push({
      key: 'engine',
      message: 'is not known',
      found: String(engine),
      allowed: 'simd, reference',
    });
  }
  if (faults.length > 0) throw new InputError(faults);
  return { threads, engine };
}

/** Check options and fill in defaults.
 * @throws {InputError} with every option that is out of range */
export function settle(options: RenderOptions): Settings {
  const faults: Fault[] = [];
  const check = (key: string, value: number, isAllowed: boolean, allowed: string) => {
    if (!isAllowed) faults.push({ key, message: 'is out of range', found: String(value), allowed });
    return value;
  };
  const { oversample = 1, tolerance = 0.004, kernelTolerance = 0.005, seed = 1, cameraSeed = 1 } = options;
  const isWhole = (value: number, least: number, most: number) =>
    Number.isInteger(value) && value >= least && value <= most;
  const isShare = (value: number) => value > 0 && value <= 1;
  check('oversample', oversample, isWhole(oversample, 1, 16), 'a whole number from 1 to 16');
  check('tolerance', tolerance, isShare(tolerance), 'a number above 0, up to 1');
  check('kernelTolerance', kernelTolerance, isShare(kernelTolerance), 'a number above 0, up to 1');
  check('seed', seed, isWhole(seed, 0, Number.MAX_SAFE_INTEGER), 'a whole number from 0 up');
  check(
    'cameraSeed',
    cameraSeed,
    isWhole(cameraSeed, 0, Number.MAX_SAFE_INTEGER),
    'a whole number from 0 up',
  );
  const { left = 0, top = 0, right = 0, bottom = 0 } = options.sceneMargin ?? {};
  for (const [side, samples] of Object.entries({ left, top, right, bottom }))
    check(`sceneMargin.${side}`, samples, isWhole(samples, 0, 65535), 'a whole number from 0 up');
  if (faults.length > 0) throw new InputError(faults);
  const [width, height] = options.rig.camera.pixels.map((side) => side * oversample);
  return {
    rig: options.rig,
    oversample,
    sheet: { width: left + width + right, height: top + height + bottom, left, top },
    tolerances: { blend: tolerance, kernel: kernelTolerance },
    seeds: { seed, cameraSeed },
    signal: options.signal,
  };
}

/** Formats of the pictures to write, after every refusal that needs no work.
 * @throws {InputError} */
export function checkOutputs(options: RenderOptions): { out?: PictureFormat; raw?: PictureFormat } {
  const { out, raw, recordFile, linear, rig } = options;
  const outFormat = out === undefined ? undefined : formatOf(out, '--out');
  const rawFormat = raw === undefined ? undefined : formatOf(raw, '--raw');
  if (outFormat !== undefined && linear) refuseLinearFormat(outFormat, '--out');
  if (rawFormat !== undefined) refuseLinearFormat(rawFormat, '--raw');
  if (raw !== undefined && rig.camera.mosaic === 'none' && rig.camera.bands.length > 1) {
    throw new InputError({
      key: '--raw',
      message: 'a sensor that sees several bands at every pixel has no single raw picture',
      found: 'camera.mosaic: none',
      allowed: 'a mosaic (rggb, bggr, grbg, gbrg), or a camera of one band',
      advice: 'State the mosaic of the camera, or write --out with --linear.',
    });
  }
  if (outFormat !== undefined)
    refuseLargeSide(outFormat, rig.camera.pixels[0], rig.camera.pixels[1], '--out');
  if (out !== undefined) assertWritable(out, '--out');
  if (raw !== undefined) assertWritable(raw, '--raw');
  if (recordFile !== undefined) assertWritable(recordFile, '--record');
  if (options.sheet !== undefined) checkSheet(options.sheet);
  return { out: outFormat, raw: rawFormat };
}
