/** The choice of kernel, tile and order of interpolation for one band, and the proof that it holds. */
import { fineWindow, gridSize } from '../optics/psf.js';
import { isSymmetric } from '../optics/rig.js';
import { largestSlope, refuseTooSteep } from '../optics/sampling.js';
import { wavefrontAt } from '../optics/wavefront.js';
import { type BlurGrid, makeBlurGrid, tileEdge } from './blur-grid.js';
import { probeCount, type TileSpan } from './certificate.js';
import type { Crew, JobWatch } from './crew.js';
import { kernelSide } from './kernel-size.js';
import { kernelSampling } from './kernel-source.js';
import { slotCount } from './node-kernels.js';
import { idealPoint, sensorFrame } from './sensor-frame.js';
import { blurFftSize } from './tile-blur.js';
import type { BandSetup } from './work.js';

/** What the user asks of the blur. */
export interface BlurTolerances {
  /** Largest error by blending, as a share of a 0..1 scene's range. */
  blend: number;
  /** Largest share of light outside the kernel. */
  kernel: number;
  /** Side of the kernel, in place of the one that `kernel` asks for: for tests and benches. */
  kernelPx?: number;
}

/** Kernels of a band in shared memory, with what was measured of them. */
export interface BandKernels {
  grid: BlurGrid;
  isMirrored: boolean;
  kernelsAt: number;
  /** The certificate: largest measured blending error over all tiles that were probed. */
  blendBound: number;
  energyOutsideKernel: number;
  /** Where the PSF is the widest. */
  widestPlace: [number, number];
}

/** The error changes smoothly over the field, a fifth of it apart, and is the largest far out as a rule: grids of many tiles are checked on
 * an even spread of about this many, and along the ring of outermost whole tiles on about as many (of a quadrant, where they mirror
 * each other). */
const CHECKED_TILES = 24;
/** Part of the tolerance that a planned grid aims at; the check of the finished grid has the last word. */
const AIM = 0.94;
const LARGEST_FFT = 2048;
/** Places on each side of the lattice on which the need of grids is looked up. */
const LATTICE = 9;

/** Plan, compute and certify the kernels of a band.
 * @param earlier the kernels of another band, which settle the order of interpolation and are a first guess at the tile
 * @throws {InputError} where the wavefront cannot be sampled */
export async function prepareKernels(
  crew: Crew,
  setup: BandSetup,
  tolerances: BlurTolerances,
  watch: JobWatch,
  earlier?: BandKernels,
): Promise<BandKernels> {
  // where light spreads the widest in one band, it does so in the others
  const places = earlier === undefined ? steepestPlaces(setup) : [earlier.widestPlace];
  const { kernelPx, energyOutsideKernel, widestPlace } = await chooseKernel(
    crew,
    setup,
    places,
    tolerances,
    watch,
  );
  const { largestGrid, psfWork } = pupilGrids(setup, kernelPx);
  const task = { setup, kernelPx, largestGrid, psfWork };
  let { tilePx, order } = await chooseTile(crew, task, tolerances.blend, watch, earlier?.grid);
  const isMirrored = isSymmetric(setup.rig);
  const { width, height } = frameOf(setup);
  const mark = crew.arena.mark();
  for (;;) {
    const grid = makeBlurGrid(width, height, kernelPx, tilePx, order);
    crew.arena.release(mark);
    const count = slotCount(grid, isMirrored);
    const kernelsAt = crew.arena.allocateFloats(count * kernelPx ** 2);
    await crew.run({ kind: 'kernels', setup, largestGrid, grid, isMirrored, kernelsAt, count }, watch);
    const tiles = tilesToCheck(grid, isMirrored);
    const errors = await crew.run(
      { kind: 'tiles', setup, largestGrid, grid, isMirrored, kernelsAt, tiles },
      watch,
    );
    const blendBound = largest(errors.subarray(0, tiles.length));
    if (blendBound <= tolerances.blend || grid.tilePx <= 1) {
      return {
        grid,
        isMirrored,
        kernelsAt,
        blendBound,
        energyOutsideKernel,
        widestPlace,
      };
    }
    tilePx = shrinkTile(grid.tilePx, order, blendBound, tolerances.blend);
  }
}

/** Refuse, in no time, a rig whose PSFs cannot be computed somewhere on its sensor. */
export function refuseUnsampled(setup: BandSetup): void {
  const { pitchUm } = kernelSampling(setup.rig, setup.oversample, 1);
  const frame = frameOf(setup);
  const points = samplePlaces(setup).map(([x, y]) => idealPoint(frame, x, y));
  refuseTooSteep(setup.rig, points, pitchUm);
}

const FARTHER_QUARTERS: [number, number][] = [
  [0.75, 0.25],
  [0.25, 0.75],
  [0.75, 0.75],
];

/** Places where a PSF's extent is looked at: axis, sides, corners and between. */
function samplePlaces(setup: BandSetup): [number, number][] {
  const { width, height, axisX, axisY } = frameOf(setup);
  const isMirrored = isSymmetric(setup.rig);
  const shares = isMirrored ? [0, 0.5] : [0, 0.5, 1];
  const places = shares.flatMap((v) => shares.map((u): [number, number] => [u, v]));
  places.push([0.25, 0.25], ...(isMirrored ? [] : FARTHER_QUARTERS));
  const grid = places.map(([u, v]): [number, number] => [u * width - 0.5, v * height - 0.5]);
  const inside = axisX >= -0.5 && axisX <= width - 0.5 && axisY >= -0.5 && axisY <= height - 0.5;
  return inside ? [...grid, [axisX, axisY]] : grid;
}

/** How many places are looked at for the widest PSF. */
const STEEPEST = 3;

/** Of the places, those from which rays are thrown the farthest: where the light spreads the widest is one of them. */
function steepestPlaces(setup: BandSetup): [number, number][] {
  const { rig, bandIndex } = setup;
  const band = rig.camera.bands[bandIndex];
  const frame = frameOf(setup);
  const reach = ([x, y]: [number, number]) => {
    const [xMm, yMm] = idealPoint(frame, x, y);
    return Math.max(...band.lines.map(({ nm }) => nm * largestSlope(wavefrontAt(rig, xMm, yMm, nm, band))));
  };
  return samplePlaces(setup)
    .map((place) => ({ place, reach: reach(place) }))
    .sort((a, b) => b.reach - a.reach)
    .slice(0, STEEPEST)
    .map(({ place }) => place);
}

/** What PSFs of a band are computed with. */
interface PsfTask {
  setup: BandSetup;
  kernelPx: number;
  largestGrid: number;
  /** Work of a PSF, on average over the field, in butterflies of the blur's transforms. */
  psfWork: number;
}

/** A PSF's transforms skip what is dark, but its pupil and pixels take their time, too: measured, three times the butterflies
 * of a whole transform of the grid. */
const PSF_OVERHEAD = 3;

/** The pupil grids that the PSFs of a band take, looked up on a lattice of places. */
function pupilGrids(
  { rig, bandIndex, oversample }: BandSetup,
  kernelPx: number,
): { largestGrid: number; psfWork: number } {
  const band = rig.camera.bands[bandIndex];
  const frame = sensorFrame(rig, band, oversample);
  const sampling = kernelSampling(rig, oversample, kernelPx);
  const window = fineWindow(sampling);
  const shares = Array.from({ length: LATTICE }, (_, i) => i / (LATTICE - 1));
  let largestGrid = 0;
  let work = 0;
  for (const v of shares) {
    for (const u of shares) {
      const [xMm, yMm] = idealPoint(frame, u * frame.width - 0.5, v * frame.height - 0.5);
      for (const { nm, weight } of band.lines) {
        const wavefront = wavefrontAt(rig, xMm, yMm, nm, band);
        const n = gridSize(window, { nm, weight, wavefront }, sampling.fNumber);
        largestGrid = Math.max(largestGrid, n);
        work += n ** 2 * Math.log2(n);
      }
    }
  }
  return { largestGrid, psfWork: (PSF_OVERHEAD * work) / LATTICE ** 2 };
}

async function chooseKernel(
  crew: Crew,
  setup: BandSetup,
  places: [number, number][],
  tolerances: BlurTolerances,
  watch: JobWatch,
): Promise<{ kernelPx: number; energyOutsideKernel: number; widestPlace: [number, number] }> {
  const { signal } = watch;
  const extents = await crew.run({ kind: 'extent', setup, places, tolerance: tolerances.kernel }, { signal });
  const extent = largest(extents);
  const kernelPx = tolerances.kernelPx ?? kernelSide(setup.rig, setup.oversample, extent);
  const widest = places.filter((_, at) => extents[at] === extent); // where the most falls outside
  const outside = await crew.run(
    { kind: 'outside', setup, places: widest, kernelPx, tolerance: tolerances.kernel },
    { signal },
  );
  return { kernelPx, energyOutsideKernel: largest(outside), widestPlace: widest[0] };
}

/** The tile and order that promise the certificate for the least work. */
async function chooseTile(
  crew: Crew,
  task: PsfTask,
  tolerance: number,
  watch: JobWatch,
  earlier?: BlurGrid,
): Promise<{ tilePx: number; order: number }> {
  if (earlier !== undefined) {
    // the order that is best for one band is as good as the best for the others
    const { order } = earlier;
    if (!paysToMeasure(task, earlier))
      return { tilePx: cheapestTile(task, order, earlier.tilePx).tilePx, order };
    const allowedPx = await largestTile(crew, task, order, tolerance, watch, earlier.tilePx, 1);
    return { tilePx: cheapestTile(task, order, allowedPx).tilePx, order };
  }
  const { width, height } = frameOf(task.setup);
  let best = { tilePx: 1, order: 1, cost: Number.POSITIVE_INFINITY };
  let allowedPx = FIRST_GUESS_PX;
  const isLongWay = paysToMeasure(task, { tilePx: FIRST_GUESS_PX, order: 1 });
  for (const order of [1, 2, 3]) {
    // a higher order allows tiles about twice as large: one round of measuring is enough to tell whether it pays
    const [guessPx, rounds] = order === 1 ? [allowedPx, isLongWay ? 2 : 1] : [2 * allowedPx, 1];
    allowedPx = await largestTile(crew, task, order, tolerance, watch, guessPx, rounds);
    const candidate = cheapestTile(task, order, allowedPx);
    if (candidate.cost < best.cost) best = { ...candidate, order };
    // higher orders pay only where tiles are small against the kernel, and the picture has more than one
    if (allowedPx > 1.5 * task.kernelPx || allowedPx >= Math.max(width, height)) break;
  }
  return best;
}

/** Whether the errors of single tiles are worth their measuring: larger tiles save a part of the blur, and of a small picture it is too
 * small a part. The finished grid is checked in any case. */
function paysToMeasure(task: PsfTask, { tilePx, order }: Pick<BlurGrid, 'tilePx' | 'order'>): boolean {
  const { setup, kernelPx, psfWork } = task;
  const { width, height } = frameOf(setup);
  const measuring = sampleSpans(setup, tilePx).length * ((order + 1) ** 2 + probeCount(order)) * psfWork;
  const blur = costPerSample(task, tilePx, order, blurFftSize(tilePx, kernelPx)) * width * height;
  return measuring < HOPED_FOR * blur;
}

/** Part of the blur that larger tiles may save. */
const HOPED_FOR = 0.2;

/** Side of the tile whose error is measured first. */
const FIRST_GUESS_PX = 64;

/** The tile, none larger than allowed, that costs the least work per sample. */
function cheapestTile(task: PsfTask, order: number, allowedPx: number): { tilePx: number; cost: number } {
  const { kernelPx } = task;
  let best = { tilePx: 1, cost: Number.POSITIVE_INFINITY };
  for (let fftSize = blurFftSize(1, kernelPx); fftSize <= LARGEST_FFT; fftSize *= 2) {
    const tilePx = Math.min(Math.floor(allowedPx), fftSize - kernelPx + 1);
    if (tilePx < 1 || blurFftSize(tilePx, kernelPx) !== fftSize) continue;
    const cost = costPerSample(task, tilePx, order, fftSize);
    if (cost < best.cost) best = { tilePx, cost };
  }
  return best;
}

/** Side of the largest tile that should meet the tolerance, from measured errors of single tiles: e grows as tile^(order + 1). */
async function largestTile(
  crew: Crew,
  task: PsfTask,
  order: number,
  tolerance: number,
  watch: JobWatch,
  guessPx: number,
  rounds: number,
): Promise<number> {
  const { setup } = task;
  const { width, height } = frameOf(setup);
  const longest = Math.max(width, height) + task.kernelPx; // all that the blur sees
  let tilePx = Math.min(guessPx, longest);
  for (let round = 0; round < rounds; round++) {
    const all = sampleSpans(setup, tilePx);
    // where the change is the fastest as a rule; the others where much depends on the last word
    const isLastWord = round === rounds - 1 && paysToMeasure(task, { tilePx: Math.floor(tilePx), order });
    const spans = isLastWord ? all : all.slice(0, 1);
    const { kernelPx, largestGrid } = task;
    const job = { kind: 'spans', setup, kernelPx, largestGrid, order, spans } as const;
    const error = largest(await crew.run(job, { signal: watch.signal }));
    const factor = error === 0 ? 8 : ((AIM * tolerance) / error) ** (1 / (order + 1));
    tilePx = Math.min(longest, Math.max(1, tilePx * Math.min(8, factor)));
  }
  return tilePx;
}

/** Spans at the places where PSFs change the fastest: corners, sides, and half-way out, the farthest from the axis first. Where the sensor
 * is not tilted, PSFs depend on the distance from the axis but for their direction, and a few of the spans tell. */
function sampleSpans(setup: BandSetup, tilePx: number): TileSpan[] {
  const { width, height, axisX, axisY } = frameOf(setup);
  const span = (size: number, share: number): [number, number] => {
    const side = Math.min(tilePx, size);
    const near = share * (size - side) - 0.5;
    return [near, near + side];
  };
  const shares: [number, number][] = [
    [0, 0],
    [0.5, 0],
    [0, 0.5],
    [0.25, 0.25],
  ];
  if (!isSymmetric(setup.rig)) shares.push([1, 0], [0, 1], [1, 1], [0.5, 1], [1, 0.5], [0.5, 0.5]);
  const spans = new Map<string, TileSpan>(); // in a small picture several are the same
  for (const [u, v] of shares) {
    const [nearX, farX] = span(width, u);
    const [nearY, farY] = span(height, v);
    spans.set(`${nearX} ${nearY}`, { nearX, farX, nearY, farY });
  }
  const distance = ({ nearX, farX, nearY, farY }: TileSpan) =>
    Math.hypot((nearX + farX) / 2 - axisX, (nearY + farY) / 2 - axisY);
  const outerFirst = [...spans.values()].sort((a, b) => distance(b) - distance(a));
  const [aboutX, aboutY] = setup.rig.mount.sensorTiltDeg;
  if (aboutX !== 0 || aboutY !== 0 || outerFirst.length <= FEW_SPANS) return outerFirst;
  return [...outerFirst.slice(0, FEW_SPANS - 1), outerFirst[outerFirst.length - 1]];
}

const FEW_SPANS = 4;

/** Work per sample of the picture, in butterflies: transforms of tiles, of ones and of kernels, and the PSFs themselves. Two tiles share
 * each complex transform; mirrored quadrants share kernels. The counts are those of `src/kernels/blur.ts`. */
function costPerSample(
  { setup, kernelPx, psfWork }: PsfTask,
  tilePx: number,
  order: number,
  fftSize: number,
): number {
  const line = fftSize * Math.log2(fftSize);
  const along = order + 1;
  const sharing = isSymmetric(setup.rig) ? 4 : 1;
  const tile = (along * tilePx + along ** 2 * fftSize + fftSize + tilePx + kernelPx) / 2;
  const ones = tile / (sharing === 4 ? 8 : 1);
  const spectra = (order * along * (kernelPx + fftSize / 2)) / sharing;
  const psf = ((order ** 2 + probeCount(order) / 4) / sharing) * psfWork; // most tiles are not checked
  return (line * (tile + ones + spectra) + psf) / tilePx ** 2;
}

/** Tiles of the grid (of its upper left quadrant where the quadrants mirror each other) whose blend is measured. */
export function tilesToCheck(grid: BlurGrid, isMirrored: boolean): [number, number][] {
  const columns = isMirrored ? Math.ceil(grid.tilesX / 2) : grid.tilesX;
  const rows = isMirrored ? Math.ceil(grid.tilesY / 2) : grid.tilesY;
  const isInFrame = (tile: number, origin: number, size: number) =>
    tileEdge(tile + 1, origin, grid.tilePx, size) > tileEdge(tile, origin, grid.tilePx, size);
  const xs = range(columns).filter((x) => isInFrame(x, grid.originX, grid.width));
  const ys = range(rows).filter((y) => isInFrame(y, grid.originY, grid.height));
  // the first tile of a row is cut by the frame, the second is the first whole one
  const isOnRing = (at: number, count: number) =>
    at === Math.min(1, count - 1) || (!isMirrored && at === count - 2);
  const all = ys.flatMap((y, atY) => xs.map((x, atX) => ({ x, y, atX, atY })));
  const ring = all.filter(({ atX, atY }) => isOnRing(atX, xs.length) || isOnRing(atY, ys.length));
  const stride = Math.max(1, Math.round(Math.sqrt(all.length / CHECKED_TILES)));
  const spread = all.filter(({ atX, atY }) => atX % stride === 0 && atY % stride === 0);
  const corners = ring.filter(({ atX, atY }) => isOnRing(atX, xs.length) && isOnRing(atY, ys.length));
  const checked = new Set([...spread, ...corners, ...everyFew(ring, CHECKED_TILES)]);
  return all.filter((tile) => checked.has(tile)).map(({ x, y }): [number, number] => [x, y]);
}

/** About `count` of the items, evenly spread. */
function everyFew<T>(items: readonly T[], count: number): T[] {
  const step = Math.max(1, Math.ceil(items.length / count));
  return items.filter((_, at) => at % step === 0);
}

function range(count: number): number[] {
  return Array.from({ length: count }, (_, i) => i);
}

function shrinkTile(tilePx: number, order: number, error: number, tolerance: number): number {
  const factor = ((0.95 * tolerance) / error) ** (1 / (order + 1));
  return Math.max(1, Math.min(tilePx - 1, Math.floor(tilePx * factor)));
}

function frameOf(setup: BandSetup) {
  return sensorFrame(setup.rig, setup.rig.camera.bands[setup.bandIndex], setup.oversample);
}

function largest(values: Float64Array): number {
  return values.reduce((most, value) => Math.max(most, value), 0);
}
