/** Point spread functions: the pupil, its transform, and the picture samples that a camera takes of it. */
import { Fft2dPlan, FftPlan } from '../numeric/fft.js';
import { type PixelBox, pixelBox } from './pixel-box.js';
import { gridForPhase, LARGEST_GRID, pupilDiameterSamples, samplesPerPixel } from './sampling.js';
import type { LocalWavefront } from './wavefront.js';

/** What a kernel is sampled with: one wavelength range, one stop, one picture grid. */
export interface KernelSampling {
  fNumber: number;
  /** Distance of the picture's samples (the pixel pitch, or a fraction of it where the picture is oversampled). */
  pitchUm: number;
  /** Side of the light-sensitive box of a pixel. */
  boxUm: number;
  /** The shortest wavelength of the camera: it sets the fine grid for all. */
  shortestNm: number;
  /** Side of the kernel in picture samples. Sample i lies at (i - (kernelPx - 1) / 2) * pitchUm from the image point. */
  kernelPx: number;
}

/** One line of a band with the wavefront that it sees. */
export interface WavefrontLine {
  nm: number;
  weight: number;
  wavefront: LocalWavefront;
}

/** What makes kernels. */
export interface KernelMaking {
  /** Kernel of a band at one field point: the weighted sum of its lines' PSFs over the pixel's box, with unit sum.
   * @param out kernelPx x kernelPx samples, row-major, x right and y down */
  bandKernel(lines: readonly WavefrontLine[], out: Float32Array | Float64Array): void;
}

/** The fine samples behind a kernel: how many make a picture sample, and which of them the kernel's pixels take. */
export interface FineWindow {
  /** Side of the kernel in picture samples. */
  pixels: number;
  /** Fine samples a picture sample. */
  perPixel: number;
  /** Step of the fine grid. */
  stepUm: number;
  /** Filter of a pixel. */
  box: PixelBox;
  /** Side of the square of fine samples that the kernel's pixels reach. */
  side: number;
  /** Its first sample, counted from the image point. */
  start: number;
}

/** The window of a sampling. */
export function fineWindow({ pitchUm, boxUm, shortestNm, fNumber, kernelPx }: KernelSampling): FineWindow {
  const perPixel = samplesPerPixel(pitchUm, shortestNm, fNumber);
  const stepUm = pitchUm / perPixel;
  const isBetweenSamples = kernelPx % 2 === 0 && perPixel % 2 === 1;
  const box = pixelBox(boxUm / stepUm, isBetweenSamples);
  return {
    pixels: kernelPx,
    perPixel,
    stepUm,
    box,
    side: (kernelPx - 1) * perPixel + box.taps.length,
    start: -((kernelPx - 1) / 2) * perPixel + box.first,
  };
}

/** Smaller grids save nothing. */
const SMALLEST_GRID = 64;

/** The pupil grid of one line: large enough for the phase and for the window. */
export function gridSize(window: FineWindow, line: WavefrontLine, fNumber: number): number {
  let n = Math.max(SMALLEST_GRID, gridForPhase(line.wavefront, window.stepUm, line.nm, fNumber));
  // the taps of the outermost pixels may wrap around, where next to no light is
  while (n < window.pixels * window.perPixel) n *= 2;
  return Math.min(n, LARGEST_GRID);
}

/** out = sum over its own total. */
export function normalise(sum: Float32Array | Float64Array, out: Float32Array | Float64Array): void {
  let total = 0;
  for (let i = 0; i < sum.length; i++) total += sum[i];
  for (let i = 0; i < sum.length; i++) out[i] = sum[i] / total;
}

/** Reach and area of a pupil of a given radius in samples: it spans -half to half on both axes. */
export function pupilReach(n: number, radius: number): number {
  return Math.min(Math.floor(radius + 0.5), n / 2 - 1);
}

/** Share of a sample that lies inside the rim: soft over one sample. */
export function rimShare(rho: number, radius: number): number {
  return Math.min(1, Math.max(0, (1 - rho) * radius + 0.5));
}

/** The pupil's area in samples: the sum of its amplitudes. Pupils of one stop have few sizes, so that the latest areas are kept. */
export function pupilArea(radius: number, half: number): number {
  const key = `${radius} ${half}`;
  let area = areas.get(key);
  if (area === undefined) {
    area = 0;
    for (let j = -half; j <= half; j++) {
      for (let i = -half; i <= half; i++) area += rimShare(Math.hypot(i, j) / radius, radius);
    }
    if (areas.size >= MOST_AREAS) areas.clear();
    areas.set(key, area);
  }
  return area;
}

const areas = new Map<string, number>();
const MOST_AREAS = 256;

/** Computes pixel-integrated PSFs of one sampling; keeps its scratch between calls, so each worker makes its own.
 *
 * The pupil function is P = A exp(i 2 pi W) with a rim that is soft over one sample, and the PSF is |FT P|^2 with exp(+i ...), which
 * puts its centroid at the mean of eps = -2 N lambda grad W (Goodman, Introduction to Fourier Optics, 6.2 and 6.4, cited from memory). Computed as the
 * forward transform of P's conjugate, which has the same modulus.
 */
export class KernelMaker implements KernelMaking {
  readonly sampling: KernelSampling;
  readonly window: FineWindow;
  readonly #grids = new Map<number, Grid>();
  readonly #columns: Float64Array;

  constructor(sampling: KernelSampling) {
    this.sampling = sampling;
    this.window = fineWindow(sampling);
    this.#columns = new Float64Array(this.window.side * sampling.kernelPx);
  }

  bandKernel(lines: readonly WavefrontLine[], out: Float32Array | Float64Array): void {
    const sum = new Float64Array(out.length);
    for (const line of lines) this.#addLine(line, sum);
    normalise(sum, out);
  }

  #addLine({ nm, weight, wavefront }: WavefrontLine, sum: Float64Array): void {
    const { fNumber } = this.sampling;
    const n = gridSize(this.window, { nm, weight, wavefront }, fNumber);
    const grid = this.#grid(n);
    const area = fillPupil(grid, wavefront, pupilDiameterSamples(n, this.window.stepUm, nm, fNumber));
    const scale = weight / (area * n * n); // Parseval: the whole PSF sums to n^2 times the light through the pupil
    this.#transformAndSum(grid, scale, sum);
  }

  /** Transform the pupil's rows, then its columns one by one; each column of the intensity goes through the pixel's box at once, so
   * that no intensity grid is kept. */
  #transformAndSum(grid: Grid, scale: number, sum: Float64Array): void {
    const { n, rows, rowCount, plan, line, lineOut } = grid;
    const { kernelPx } = this.sampling;
    const half = (rowCount - 1) / 2;
    for (let row = 0; row < rowCount; row++) {
      const view = rows.subarray(2 * n * row, 2 * n * (row + 1));
      plan.transform(lineOut, view, 'minus');
      view.set(lineOut);
    }
    const { side, start, perPixel } = this.window;
    const { taps } = this.window.box;
    const columns = this.#columns;
    const intensity = grid.intensity;
    const mask = n - 1;
    for (let i = 0; i < side; i++) {
      const column = (start + i) & mask; // sample 0 is the image point; negative ones wrap
      line.fill(0);
      for (let row = 0; row < rowCount; row++) {
        const at = 2 * ((row - half) & mask);
        const from = 2 * (n * row + column);
        line[at] = rows[from];
        line[at + 1] = rows[from + 1];
      }
      plan.transform(lineOut, line, 'minus');
      for (let j = 0; j < side; j++) {
        const at = 2 * ((start + j) & mask);
        intensity[j] = lineOut[at] * lineOut[at] + lineOut[at + 1] * lineOut[at + 1];
      }
      for (let pixel = 0; pixel < kernelPx; pixel++) {
        const from = pixel * perPixel;
        let value = 0;
        for (let t = 0; t < taps.length; t++) value += taps[t] * intensity[from + t];
        columns[pixel * side + i] = value;
      }
    }
    for (let row = 0; row < kernelPx; row++) {
      for (let pixel = 0; pixel < kernelPx; pixel++) {
        const from = row * side + pixel * perPixel;
        let value = 0;
        for (let t = 0; t < taps.length; t++) value += taps[t] * columns[from + t];
        sum[row * kernelPx + pixel] += scale * value;
      }
    }
  }

  #grid(n: number): Grid {
    let grid = this.#grids.get(n);
    if (grid === undefined) {
      grid = makeGrid(n, this.window.side);
      this.#grids.set(n, grid);
    }
    return grid;
  }
}

/** Scratch for pupils on an n x n grid. Only the rows that a pupil can reach are kept, row `rowCount >> 1` being the middle one. */
interface Grid {
  n: number;
  plan: FftPlan;
  rows: Float64Array;
  rowCount: number;
  line: Float64Array;
  lineOut: Float64Array;
  intensity: Float64Array;
}

function makeGrid(n: number, fineSide: number): Grid {
  return {
    n,
    plan: new FftPlan(n),
    rows: new Float64Array(0),
    rowCount: 0,
    line: new Float64Array(2 * n),
    lineOut: new Float64Array(2 * n),
    intensity: new Float64Array(fineSide),
  };
}

/** Fill the rows with the conjugate of P = A exp(i 2 pi W); returns the sum of A, the pupil's area in samples.
 *
 * The area is the light that gets through. The sum of A^2 falls short of it by the soft rim, a part of the light that a rim so soft
 * no longer throws far out; normalising by it would brighten the core by a third of a sample over the radius.
 */
function fillPupil(grid: Grid, wavefront: LocalWavefront, diameter: number): number {
  const { n } = grid;
  const radius = diameter / 2;
  const half = pupilReach(n, radius);
  const rowCount = 2 * half + 1;
  if (grid.rows.length < 2 * n * rowCount) grid.rows = new Float64Array(2 * n * rowCount);
  grid.rowCount = rowCount;
  const { rows } = grid;
  rows.fill(0, 0, 2 * n * rowCount);
  const { w40, w31, w22, w20, w11, cos, sin } = wavefront;
  const mask = n - 1;
  let area = 0;
  for (let j = -half; j <= half; j++) {
    const y = j / radius;
    const base = 2 * n * (j + half);
    for (let i = -half; i <= half; i++) {
      const x = i / radius;
      const rho2 = x * x + y * y;
      const amplitude = rimShare(Math.sqrt(rho2), radius);
      if (amplitude === 0) continue;
      const m = x * cos + y * sin;
      const w = rho2 * (w40 * rho2 + w31 * m + w20) + m * (w22 * m + w11);
      const phase = -2 * Math.PI * (w - Math.round(w));
      const at = base + 2 * (i & mask);
      rows[at] = amplitude * Math.cos(phase);
      rows[at + 1] = amplitude * Math.sin(phase);
      area += amplitude;
    }
  }
  return area;
}

/** The kind of function that `energyBySquareRing` is. */
export type RingMaker = typeof energyBySquareRing;

/** Energy of a PSF by square rings about its image point: ring[r] is the share in the samples with max(|x|, |y|) = r fine steps.
 * What is missing from 1 in the sum of all rings fell outside the n-window, so take n well above the size of interest.
 */
export function energyBySquareRing(
  wavefront: LocalWavefront,
  n: number,
  stepUm: number,
  nm: number,
  fNumber: number,
): Float64Array {
  const grid = makeGrid(n, 0);
  const area = fillPupil(grid, wavefront, pupilDiameterSamples(n, stepUm, nm, fNumber));
  const field = new Float64Array(2 * n * n);
  const half = (grid.rowCount - 1) / 2;
  for (let row = 0; row < grid.rowCount; row++) {
    const target = (row - half) & (n - 1);
    field.set(grid.rows.subarray(2 * n * row, 2 * n * (row + 1)), 2 * n * target);
  }
  const isRowZero = (row: number) => row > half && row < n - half;
  new Fft2dPlan(n).transform(field, 'minus', isRowZero);
  const rings = new Float64Array(n / 2 + 1);
  const scale = 1 / (area * n * n);
  for (let row = 0; row < n; row++) {
    const y = Math.min(row, n - row);
    for (let column = 0; column < n; column++) {
      const x = Math.min(column, n - column);
      const at = 2 * (row * n + column);
      rings[Math.max(x, y)] += scale * (field[at] * field[at] + field[at + 1] * field[at + 1]);
    }
  }
  return rings;
}
