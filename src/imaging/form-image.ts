/** From the ideal scene to what the pixels receive: warp, illumination and blur, band by band. */
import { InputError } from '../errors.js';
import { MOST_WARP_PLANES } from '../numeric/kernel-requests.js';
import type { Rig } from '../optics/rig.js';
import type { BlurGrid } from './blur-grid.js';
import type { Crew, JobWatch } from './crew.js';
import { type BandKernels, type BlurTolerances, prepareKernels, refuseUnsampled } from './plan-blur.js';
import { cornerMm, sensorFrame } from './sensor-frame.js';
import { columnCount, isFolded } from './simd-blur.js';
import type { SceneSheet } from './warp.js';
import type { BandSetup, TileColumn } from './work.js';

export interface FormedImage {
  /** One plane a band in shared memory, of the camera's pixels, row-major, in linear light. */
  planes: Float32Array[];
  accuracy: {
    blendBound: number;
    energyOutsideKernel: number;
    /** Tiles in x and y of the band that needs the most. */
    cells: [number, number];
    kernelPx: number;
  };
  seconds: { warp: number; blur: number };
}

/** Stages that a watcher hears of. */
export type ImageStage = 'psf' | 'warp' | 'blur';

export interface ImageWatch {
  signal?: AbortSignal;
  onProgress?: (stage: ImageStage, done: number, total: number) => void;
}

const ROWS_PER_TASK = 32;

/** Refuse a rig whose picture cannot be formed, before anything is read or computed.
 * @throws {InputError} distortion that folds over the sensor, a wavefront too steep to sample */
export function refuseUnformable(rig: Rig, oversample: number): void {
  for (const [bandIndex, band] of rig.camera.bands.entries()) {
    const frame = sensorFrame(rig, band, oversample);
    const corner = cornerMm(frame);
    if (corner >= frame.map.foldMm) {
      const largest = largestBarrelWaves(rig, corner);
      throw new InputError({
        key: 'lens.waves.W311',
        message: `the distortion folds the picture over itself ${frame.map.foldMm.toFixed(2)} mm from the axis, inside the sensor, whose corner lies at ${corner.toFixed(2)} mm`,
        found: `${rig.lens.waves.W311} waves`,
        allowed: `less than about ${largest.toPrecision(3)} waves for this sensor`,
        advice: 'Lower W311 (or distortion_percent), or use a smaller sensor.',
      });
    }
    if (bandIndex === 0) refuseUnsampled({ rig, bandIndex, oversample });
  }
}

/** Kernels of every band, in the order of the camera's bands. They lie in the crew's arena where its stack stood.
 * @throws {InputError} a wavefront that cannot be sampled */
export async function prepareBands(
  crew: Crew,
  rig: Rig,
  oversample: number,
  tolerances: BlurTolerances,
  watch: ImageWatch = {},
): Promise<BandKernels[]> {
  const bands: BandKernels[] = [];
  let earlier: BandKernels | undefined;
  for (const bandIndex of shortestFirst(rig)) {
    const setup: BandSetup = { rig, bandIndex, oversample };
    earlier = await prepareKernels(crew, setup, tolerances, stageWatch('psf', watch), earlier);
    bands[bandIndex] = earlier;
  }
  return bands;
}

/** Form the picture.
 * @param scene one plane a band in the crew's arena, oversample times the camera's pixels on each side; overwritten
 * @param bands kernels as `prepareBands` made them
 * @param sheet size of the scene's planes, where they reach past the picture
 * @returns planes that live in the crew's arena, in place of the scene's where that is possible */
export async function formImage(
  crew: Crew,
  rig: Rig,
  scene: readonly Float32Array[],
  oversample: number,
  bands: readonly BandKernels[],
  watch: ImageWatch = {},
  sheet?: SceneSheet,
): Promise<FormedImage> {
  const { arena } = crew;
  const [width, height] = rig.camera.pixels;
  const samples = width * height * oversample ** 2;
  const isFine = oversample > 1;
  const isAsLarge = sheet === undefined || sheet.width * sheet.height === samples;
  // the scene is done with when it is warped, and its planes can take the picture, unless bands share one
  const isReusable =
    !isFine && isAsLarge && new Set(scene.map((plane) => plane.byteOffset)).size === scene.length;
  const planes = rig.camera.bands.map((_, band) =>
    isReusable ? scene[band] : arena.floats(arena.allocateFloats(width * height), width * height),
  );
  const mark = arena.mark();
  const warpedAt = rig.camera.bands.map(() => arena.allocateFloats(samples));
  const flatAt = arena.allocateFloats(samples);
  const fineAt = isFine ? arena.allocateFloats(samples) : 0;
  const seconds = { warp: 0, blur: 0 };
  const timed = async (stage: 'warp' | 'blur', work: (jobWatch: JobWatch) => Promise<void>) => {
    const start = performance.now();
    await work(stageWatch(stage, watch));
    seconds[stage] += (performance.now() - start) / 1000;
  };
  for (const alike of bandsMovedAlike(rig, oversample)) {
    const moved = alike.map((band) => ({ sceneAt: scene[band].byteOffset, outAt: warpedAt[band] }));
    await timed('warp', (jobWatch) =>
      warpPlanes(crew, { rig, bandIndex: alike[0], oversample }, moved, sheet, jobWatch),
    );
  }
  for (const [bandIndex, kernels] of bands.entries()) {
    const blurredAt = isFine ? fineAt : planes[bandIndex].byteOffset;
    await timed('blur', (jobWatch) =>
      blurPlane(crew, kernels, warpedAt[bandIndex], blurredAt, flatAt, jobWatch),
    );
    if (isFine) takePixels(arena.floats(blurredAt, samples), width, height, oversample, planes[bandIndex]);
  }
  arena.release(mark);
  return { planes, accuracy: accuracyOf(bands), seconds };
}

/** Bands in groups that distortion and lateral colour move in the same way: all of them, where there is no lateral colour. */
function bandsMovedAlike(rig: Rig, oversample: number): number[][] {
  const groups = new Map<string, number[]>();
  for (const [bandIndex, band] of rig.camera.bands.entries()) {
    const { a, c } = sensorFrame(rig, band, oversample).map;
    const key = `${a} ${c}`;
    const group = groups.get(key);
    if (group !== undefined && group.length < MOST_WARP_PLANES) group.push(bandIndex);
    else groups.set(group === undefined ? key : `${key} ${bandIndex}`, [bandIndex]);
  }
  return [...groups.values()];
}

async function warpPlanes(
  crew: Crew,
  setup: BandSetup,
  planes: { sceneAt: number; outAt: number }[],
  sheet: SceneSheet | undefined,
  watch: JobWatch,
): Promise<void> {
  const { height } = sensorFrame(setup.rig, setup.rig.camera.bands[setup.bandIndex], setup.oversample);
  const count = Math.ceil(height / ROWS_PER_TASK);
  await crew.run({ kind: 'warp', setup, planes, sheet, rowsPerTask: ROWS_PER_TASK, count }, watch);
}

/** The figures of the band that is the worst in each. */
function accuracyOf(bands: readonly BandKernels[]): FormedImage['accuracy'] {
  const worst = (figure: (band: BandKernels) => number) => Math.max(...bands.map(figure));
  const { grid } = bands.reduce((most, band) => (band.grid.tilesX > most.grid.tilesX ? band : most));
  return {
    blendBound: worst(({ blendBound }) => blendBound),
    energyOutsideKernel: worst(({ energyOutsideKernel }) => energyOutsideKernel),
    cells: [grid.tilesX, grid.tilesY],
    kernelPx: worst((band) => band.grid.kernelPx),
  };
}

function stageWatch(stage: ImageStage, { signal, onProgress }: ImageWatch): JobWatch {
  return { signal, onProgress: onProgress && ((done, total) => onProgress(stage, done, total)) };
}

/** Bands with the shortest wavelength first: PSFs change the fastest there, so the grid that serves it serves the others. */
function shortestFirst(rig: Rig): number[] {
  const shortest = (index: number) => Math.min(...rig.camera.bands[index].lines.map(({ nm }) => nm));
  return [...rig.camera.bands.keys()].sort((a, b) => shortest(a) - shortest(b));
}

/** Blur one plane.
 *
 * Where the PSFs' centroids wander over the field, as coma's do, scene points draw together or apart, and a plane of ones would come
 * out as `flat`, a part in a thousand from 1. Relative illumination is by definition all that happens to a uniform scene, so the
 * plane is divided by `flat`.
 * */
async function blurPlane(
  crew: Crew,
  kernels: BandKernels,
  sourceAt: number,
  outAt: number,
  flatAt: number,
  watch: JobWatch,
): Promise<void> {
  const { grid, isMirrored, kernelsAt } = kernels;
  const isFoldedHere = crew.engine === 'simd' && isFolded(grid, isMirrored);
  const columns = crew.engine === 'simd' ? columnCount(grid, isMirrored) : grid.tilesX;
  const count = Math.ceil(grid.height / ROWS_PER_TASK);
  const rows = { rowsPerTask: ROWS_PER_TASK, count };
  await crew.run({ kind: 'clear', grid, planes: [outAt, flatAt], ...rows }, { signal: watch.signal });
  const isDone = new Int32Array(new SharedArrayBuffer(4 * columns));
  await crew.run(
    {
      kind: 'blur',
      grid,
      isMirrored,
      kernelsAt,
      sourceAt,
      outAt,
      flatAt,
      columns: columnsInTurns(grid, columns),
      isDone,
    },
    watch,
  );
  await crew.run(
    { kind: 'flatten', grid, isFolded: isFoldedHere, outAt, flatAt, ...rows },
    { signal: watch.signal },
  );
}

/** Columns of tiles in an order that is the same whatever the number of threads: results of neighbours overlap, so columns far enough
 * apart come first, then their neighbours, each waiting for those before it that it overlaps with. */
function columnsInTurns(grid: BlurGrid, columns: number): TileColumn[] {
  const turns = Math.ceil((grid.tilePx + grid.kernelPx - 1) / grid.tilePx);
  const list: TileColumn[] = [];
  for (let turn = 0; turn < turns; turn++) {
    for (let column = turn; column < columns; column += turns) {
      const waitFor: number[] = [];
      for (let other = 0; other < columns; other++) {
        if (other % turns < turn && overlaps(grid, turns, column, other)) waitFor.push(other);
      }
      list.push({ column, waitFor });
    }
  }
  return list;
}

/** Whether two columns, or one and the mirror image of the other, lie closer than results reach. */
function overlaps({ tilesX }: BlurGrid, turns: number, column: number, other: number): boolean {
  return Math.abs(column - other) < turns || Math.abs(tilesX - 1 - column - other) < turns;
}

/** Take the pixels out of an oversampled plane. Its kernels hold the whole pixel, so the sample at a pixel's middle is the pixel; with
 * an even oversampling the plane stands half a sample further on, see `KernelSource`. */
function takePixels(
  fine: Float32Array,
  width: number,
  height: number,
  oversample: number,
  out: Float32Array,
): void {
  const middle = Math.floor((oversample - 1) / 2);
  const stride = width * oversample;
  for (let row = 0; row < height; row++) {
    const from = (row * oversample + middle) * stride + middle;
    for (let column = 0; column < width; column++)
      out[row * width + column] = fine[from + column * oversample];
  }
}

/** The largest barrel W311 whose map still rises up to the corner, all else as in the rig: r' of the fold goes as W311^(-1/2). */
function largestBarrelWaves(rig: Rig, cornerSensorMm: number): number {
  const oneWave = sensorFrame(
    { ...rig, lens: { ...rig.lens, waves: { ...rig.lens.waves, W311: 1 }, wavesByWavelength: undefined } },
    rig.camera.bands[0],
    1,
  );
  return (oneWave.map.foldMm / cornerSensorMm) ** 2;
}
