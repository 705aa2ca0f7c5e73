/** `render`: what the camera will record of a scene. */
import { availableParallelism } from 'node:os';
import { type Fault, InputError, InterruptedError } from '../errors.js';
import {
  type AllocatePlanes,
  checkPicture,
  encodePicture,
  encodeRaw,
  fitToSensor,
  formatOf,
  limitPictureThreads,
  type PictureFormat,
  readScene,
  refuseLargeSide,
  refuseLinearFormat,
  sharedPlanes,
  toBands,
} from '../files/pictures/index.js';
import { resultData } from '../files/result-data.js';
import { dataText } from '../files/write-data.js';
import { assertWritable, type Output, writeAllWhole } from '../files/write-whole.js';
import { Crew } from '../imaging/crew.js';
import { formImage, refuseUnformable } from '../imaging/form-image.js';
import type { Raster } from '../imaging/raster.js';
import { recordImage } from '../imaging/record-image.js';
import type { Engine } from '../imaging/work.js';
import { colourWarnings, fieldWarning } from '../optics/limits.js';
import type { Rig } from '../optics/rig.js';
import { VERSION } from '../version.js';

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
  /** File for the record (.json, .yaml). */
  recordFile?: string;
  /** The scene's numbers are linear light, not sRGB. */
  sceneLinear?: boolean;
  /** Blur on a grid of so many samples a pixel on each side, 1 to 16. Default: 1. */
  oversample?: number;
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

/** How a picture was made. */
export interface RenderRecord {
  foreglass: string;
  rig: Rig;
  seed: number;
  cameraSeed: number;
  threads: number;
  oversample: number;
  image: { width: number; height: number; bands: string[] };
  accuracy: { blendBound: number; energyOutsideKernel: number; cells: [number, number]; kernelPx: number };
  /** What the raw numbers mean, where `raw` was asked for. */
  rawLevels?: { blackLevel: number; whiteLevel: number; sceneWhite: number; gainDnPerE: number };
  /** `total` leaves out decode and encode. */
  seconds: {
    decode: number;
    psf: number;
    warp: number;
    blur: number;
    camera: number;
    encode: number;
    total: number;
  };
  warnings: string[];
}

export interface RenderResult {
  record: RenderRecord;
  /** The recorded picture in linear light, one plane a band; not clipped where there is noise. */
  picture: Raster;
}

/** Render a scene through a rig.
 *
 * @returns the picture and how it was made
 * @throws {InputError}       before any work: options out of range, files that cannot be written, a scene that cannot be read, a lens whose
 *                            distortion folds or whose wavefront is too steep to sample
 * @throws {RunError}         out of memory, disk full
 * @throws {InterruptedError} when `signal` fires; nothing is half-written
 */
export async function render(options: RenderOptions): Promise<RenderResult> {
  const settings = settle(options);
  const { rig, oversample, seeds, threads, signal } = settings;
  const outputs = checkOutputs(options);
  refuseUnformable(rig, oversample);
  limitPictureThreads(threads);
  const crew = new Crew(threads, options.engine); // its workers start while the scene is read
  try {
    const decodeStart = performance.now();
    const scene = await readInto(crew, options, settings);
    const start = performance.now();
    if (signal?.aborted) throw new InterruptedError();
    const formed = await formImage(crew, rig, scene.planes, oversample, settings.tolerances, {
      signal,
      onProgress: (stage, done, total) => options.onProgress?.({ stage, done, total }),
    });
    const cameraStart = performance.now();
    const recorded = await recordImage(crew, rig.camera, formed.planes, seeds, options.raw !== undefined, {
      signal,
      onProgress: (done, total) => options.onProgress?.({ stage: 'camera', done, total }),
    });
    const encodeStart = performance.now();
    const [width, height] = rig.camera.pixels;
    const picture: Raster = { width, height, planes: recorded.picture };
    const { levels } = recorded;
    const record: RenderRecord = {
      foreglass: VERSION,
      rig,
      seed: seeds.seed,
      cameraSeed: seeds.cameraSeed,
      threads,
      oversample,
      image: { width, height, bands: rig.camera.bands.map(({ name }) => name) },
      accuracy: formed.accuracy,
      ...(options.raw !== undefined && {
        rawLevels: {
          blackLevel: levels.blackLevelDn,
          whiteLevel: levels.whiteLevelDn,
          sceneWhite: levels.sceneWhiteDn,
          gainDnPerE: levels.gainDnPerE,
        },
      }),
      seconds: {
        decode: (start - decodeStart) / 1000,
        ...formed.seconds,
        camera: (encodeStart - cameraStart) / 1000,
        encode: 0,
        total: (encodeStart - start) / 1000,
      },
      warnings: [...scene.warnings, ...warningsFor(settings, formed.accuracy)],
    };
    const files: Output[] = [];
    if (options.out !== undefined && outputs.out !== undefined) {
      options.onProgress?.({ stage: 'encode', done: 0, total: 1 });
      const data = await encodePicture(picture, outputs.out, { linear: options.linear });
      files.push({ path: options.out, data });
    }
    if (options.raw !== undefined && outputs.raw !== undefined && recorded.raw !== undefined) {
      files.push({ path: options.raw, data: await encodeRaw(recorded.raw[0], width, height, outputs.raw) });
    }
    record.seconds.encode = (performance.now() - encodeStart) / 1000;
    if (options.recordFile !== undefined) {
      files.push({ path: options.recordFile, data: dataText(options.recordFile, resultData(record)) });
    }
    if (signal?.aborted) throw new InterruptedError();
    await writeAllWhole(files);
    return { record, picture };
  } finally {
    await crew.close();
  }
}

interface Settings {
  rig: Rig;
  oversample: number;
  tolerances: { blend: number; kernel: number };
  seeds: { seed: number; cameraSeed: number };
  threads: number;
  signal?: AbortSignal;
}

function settle(options: RenderOptions): Settings {
  const faults: Fault[] = [];
  const check = (key: string, value: number, isAllowed: boolean, allowed: string) => {
    if (!isAllowed) faults.push({ key, message: 'is out of range', found: String(value), allowed });
    return value;
  };
  const { oversample = 1, tolerance = 0.004, kernelTolerance = 0.005, seed = 1, cameraSeed = 1 } = options;
  const { threads = availableParallelism() } = options;
  const isWhole = (value: number, least: number, most: number) =>
    Number.isInteger(value) && value >= least && value <= most;
  const isShare = (value: number) => value > 0 && value <= 1;
  check('oversample', oversample, isWhole(oversample, 1, 16), 'a whole number from 1 to 16');
  check('tolerance', tolerance, isShare(tolerance), 'a number above 0, up to 1');
  check('kernelTolerance', kernelTolerance, isShare(kernelTolerance), 'a number above 0, up to 1');
  check('threads', threads, isWhole(threads, 1, 256), 'a whole number from 1 to 256');
  check('seed', seed, isWhole(seed, 0, Number.MAX_SAFE_INTEGER), 'a whole number from 0 up');
  check(
    'cameraSeed',
    cameraSeed,
    isWhole(cameraSeed, 0, Number.MAX_SAFE_INTEGER),
    'a whole number from 0 up',
  );
  if (faults.length > 0) throw new InputError(faults);
  return {
    rig: options.rig,
    oversample,
    tolerances: { blend: tolerance, kernel: kernelTolerance },
    seeds: { seed, cameraSeed },
    threads,
    signal: options.signal,
  };
}

/** Formats of the pictures to write, after every refusal that needs no work. */
function checkOutputs(options: RenderOptions): { out?: PictureFormat; raw?: PictureFormat } {
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
  return { out: outFormat, raw: rawFormat };
}

/** The scene in the crew's memory: of the sensor's size times the oversampling, one plane a band. */
async function readInto(
  crew: Crew,
  { scene, sceneLinear }: RenderOptions,
  { rig, oversample }: Settings,
): Promise<Raster & { warnings: string[] }> {
  const { arena } = crew;
  const [width, height] = rig.camera.pixels.map((side) => side * oversample);
  const allocate: AllocatePlanes = (planeWidth, planeHeight, count) =>
    planeWidth === width && planeHeight === height
      ? Array.from({ length: count }, () =>
          arena.floats(arena.allocateFloats(width * height), width * height),
        )
      : sharedPlanes(planeWidth, planeHeight, count); // a picture of another size is on its way to be fitted
  const read =
    typeof scene === 'string'
      ? await readScene(scene, { sceneLinear, allocate })
      : { raster: copyInto(allocate, scene), warnings: [] };
  const bandNames = rig.camera.bands.map(({ name }) => name);
  const resized = (raster: Raster) => fitToSensor(raster, width, height, { allocate });
  // colours that the camera does not tell apart are added up before they are resized, not after
  const isFewer = read.raster.planes.length > bandNames.length;
  const bands = isFewer
    ? resized(toBands(read.raster, bandNames, { allocate }))
    : toBands(resized(read.raster), bandNames, { allocate });
  return { ...bands, warnings: read.warnings };
}

function copyInto(allocate: AllocatePlanes, scene: Raster): Raster {
  checkPicture(scene);
  const planes = allocate(scene.width, scene.height, scene.planes.length);
  for (const [at, plane] of planes.entries()) plane.set(scene.planes[at]);
  return { ...scene, planes };
}

function warningsFor({ rig, tolerances }: Settings, accuracy: RenderRecord['accuracy']): string[] {
  const [width, height] = rig.camera.pixels;
  const [axisX, axisY] = rig.mount.axisPx;
  const pitchMm = rig.camera.pixelPitchUm / 1000;
  const cornerMm =
    pitchMm * Math.hypot(Math.max(axisX, width - 1 - axisX), Math.max(axisY, height - 1 - axisY));
  const warnings = [...fieldWarning(rig, cornerMm), ...colourWarnings(rig)];
  if (accuracy.energyOutsideKernel > tolerances.kernel) {
    warnings.push(
      `${(100 * accuracy.energyOutsideKernel).toFixed(2)} % of a PSF's light falls outside the largest kernel ` +
        `(${accuracy.kernelPx} pixels) and is spread evenly by normalising: wide veils look weaker than they are.`,
    );
  }
  if (accuracy.blendBound > tolerances.blend) {
    warnings.push(
      `blending PSFs may be wrong by ${accuracy.blendBound.toPrecision(2)} of full scale: no grid of cells meets --tolerance.`,
    );
  }
  return warnings;
}
