/** PSFs by the compiled kernels: the same figures as `KernelMaker`, in float32 where that serves. */
import { PSF_REQUEST_BYTES, writePsfRequest } from '../numeric/kernel-requests.js';
import { COMPLEX_ROW_BYTES, type Kernels, LARGEST_KERNEL_FFT } from '../numeric/kernels.js';
import {
  energyBySquareRing,
  type FineWindow,
  fineWindow,
  gridSize,
  KernelMaker,
  type KernelMaking,
  type KernelSampling,
  normalise,
  pupilArea,
  pupilReach,
  type RingMaker,
  type WavefrontLine,
} from '../optics/psf.js';
import { pupilDiameterSamples } from '../optics/sampling.js';
import { rounded, type Scratch } from './scratch.js';

/** Bytes of work space for PSFs on grids of up to `n`. */
export function psfWorkBytes(kernels: Kernels, n: number, kernelPx: number): number {
  const size = Math.min(n, LARGEST_KERNEL_FFT);
  const fine = rounded(4 * (size + MOST_WRAPPED));
  const tables = 8 * 3 * fine; // of each size up to n
  const pupil = kernels.psfScratchBytes(size, size / 2 - 1) >>> 0;
  return (
    tables + rounded(pupil) + rounded(4 * (size + MOST_WRAPPED) ** 2) + rounded(4 * kernelPx ** 2) + 8 * fine
  );
}

/** Fine samples by which a window may be larger than its grid: the taps of a pixel box beyond the pixel. */
const MOST_WRAPPED = 32;

/** What the kernels need to know of one grid size. */
interface GridTables {
  ones: number;
  columnOffsets: number;
  rowOfPosition: number;
}

export class SimdKernelMaker implements KernelMaking {
  readonly #kernels: Kernels;
  readonly #scratch: Scratch;
  readonly #sampling: KernelSampling;
  readonly #window: FineWindow;
  /** Side of the window, a multiple of four. */
  readonly #side: number;
  readonly #taps: number;
  readonly #tapCount: number;
  readonly #lines: number;
  readonly #intensity: number;
  readonly #sum: { address: number; values: Float32Array };
  readonly #request: number;
  readonly #work: number;
  readonly #largestGrid: number;
  readonly #tables = new Map<number, GridTables>();
  /** For grids that the kernels do not know. */
  #reference?: KernelMaker;

  /** @param n the largest grid that is expected; PSFs that need a larger one are computed in float64 */
  constructor(kernels: Kernels, scratch: Scratch, sampling: KernelSampling, n: number) {
    const { kernelPx } = sampling;
    this.#kernels = kernels;
    this.#scratch = scratch;
    this.#sampling = sampling;
    this.#window = fineWindow(sampling);
    const { box, perPixel } = this.#window;
    this.#tapCount = 4 * Math.ceil(box.taps.length / 4);
    this.#side = 4 * Math.ceil(((kernelPx - 1) * perPixel + this.#tapCount) / 4);
    this.#largestGrid = Math.min(n, LARGEST_KERNEL_FFT);
    if (this.#side > this.#largestGrid + MOST_WRAPPED)
      throw new RangeError('the window is larger than the grids');
    const taps = scratch.floats(this.#tapCount);
    taps.values.fill(0);
    taps.values.set(box.taps);
    this.#taps = taps.address;
    this.#lines = scratch.floats(this.#side).address;
    this.#intensity = scratch.floats(this.#side ** 2).address;
    this.#sum = scratch.floats(kernelPx ** 2);
    this.#request = scratch.allocate(PSF_REQUEST_BYTES);
    this.#work = scratch.allocate(
      kernels.psfScratchBytes(this.#largestGrid, this.#largestGrid / 2 - 1) >>> 0,
    );
  }

  bandKernel(lines: readonly WavefrontLine[], out: Float32Array | Float64Array): void {
    const sizes = lines.map((line) => gridSize(this.#window, line, this.#sampling.fNumber));
    if (Math.max(...sizes) > this.#largestGrid) {
      this.#reference ??= new KernelMaker(this.#sampling);
      this.#reference.bandKernel(lines, out);
      return;
    }
    this.#sum.values.fill(0);
    for (const [at, line] of lines.entries()) this.#addLine(line, sizes[at]);
    normalise(this.#sum.values, out);
  }

  #addLine({ nm, weight, wavefront }: WavefrontLine, n: number): void {
    const { fNumber, kernelPx } = this.#sampling;
    const radius = pupilDiameterSamples(n, this.#window.stepUm, nm, fNumber) / 2;
    const half = pupilReach(n, radius);
    writePsfRequest(this.#scratch.memory, this.#request, {
      ...wavefront,
      ...this.#tablesFor(n),
      n,
      half,
      radius,
      scratch: this.#work,
      side: this.#side,
      out: this.#intensity,
    });
    this.#kernels.psfIntensity(this.#request);
    this.#wrapRows(n);
    const scale = weight / (pupilArea(radius, half) * n * n);
    this.#kernels.addPixels(
      this.#intensity,
      this.#side,
      this.#taps,
      this.#tapCount,
      this.#window.perPixel,
      kernelPx,
      scale,
      this.#lines,
      this.#sum.address,
    );
  }

  /** A window larger than its grid sees the first rows again. */
  #wrapRows(n: number): void {
    const side = this.#side;
    if (side <= n) return;
    const intensity = new Float32Array(this.#scratch.memory.buffer, this.#intensity, side * side);
    intensity.copyWithin(n * side, 0, (side - n) * side);
  }

  #tablesFor(n: number): GridTables {
    let tables = this.#tables.get(n);
    if (tables === undefined) {
      const side = this.#side;
      tables = writeTables(this.#kernels, this.#scratch, n, this.#window.start, side);
      this.#tables.set(n, tables);
    }
    return tables;
  }
}

/** Windows larger than the kernels' transforms are worked out in float64. */
const LARGEST_RINGS = LARGEST_KERNEL_FFT;

/** Bytes of work space for `SimdRings`. */
export function ringsWorkBytes(kernels: Kernels): number {
  const size = LARGEST_RINGS;
  const pupil = kernels.psfScratchBytes(size, size / 2 - 1) >>> 0;
  return rounded(pupil) + rounded(4 * size ** 2) + 5 * 3 * rounded(4 * size) + rounded(PSF_REQUEST_BYTES);
}

/** The rings of the latest PSFs of a thread, by all that they depend on: the size of a kernel and what falls outside of it are asked for
 * one after the other. */
const latestRings = new WeakMap<Kernels, Map<string, Float64Array>>();
const MOST_RINGS = 128;

/** Energy of PSFs by square rings, see `energyBySquareRing`, by the compiled kernels. */
export class SimdRings {
  readonly #kernels: Kernels;
  readonly #scratch: Scratch;
  readonly #request: number;
  readonly #work: number;
  readonly #intensity: Float32Array;
  readonly #tables = new Map<number, GridTables>();
  readonly #latest: Map<string, Float64Array>;

  constructor(kernels: Kernels, scratch: Scratch) {
    const n = LARGEST_RINGS;
    this.#kernels = kernels;
    this.#scratch = scratch;
    this.#request = scratch.allocate(PSF_REQUEST_BYTES);
    this.#work = scratch.allocate(kernels.psfScratchBytes(n, n / 2 - 1) >>> 0);
    this.#intensity = scratch.floats(n ** 2).values;
    this.#latest = latestRings.get(kernels) ?? new Map<string, Float64Array>();
    latestRings.set(kernels, this.#latest);
  }

  readonly rings: RingMaker = (wavefront, n, stepUm, nm, fNumber) => {
    if (n > LARGEST_RINGS) return energyBySquareRing(wavefront, n, stepUm, nm, fNumber);
    const { w40, w31, w22, w20, w11, cos, sin } = wavefront;
    const key = `${[w40, w31, w22, w20, w11, cos, sin, n, stepUm, nm, fNumber]}`;
    let rings = this.#latest.get(key);
    if (rings === undefined) {
      if (this.#latest.size >= MOST_RINGS) this.#latest.clear();
      rings = this.#compute(wavefront, n, stepUm, nm, fNumber);
      this.#latest.set(key, rings);
    }
    return rings;
  };

  #compute(...[wavefront, n, stepUm, nm, fNumber]: Parameters<RingMaker>): Float64Array {
    const radius = pupilDiameterSamples(n, stepUm, nm, fNumber) / 2;
    const half = pupilReach(n, radius);
    writePsfRequest(this.#scratch.memory, this.#request, {
      ...wavefront,
      ...this.#tablesFor(n),
      n,
      half,
      radius,
      scratch: this.#work,
      side: n,
      out: this.#intensity.byteOffset,
    });
    this.#kernels.psfIntensity(this.#request);
    const rings = sumBySquareRing(this.#intensity, n);
    const scale = 1 / (pupilArea(radius, half) * n * n);
    for (let r = 0; r < rings.length; r++) rings[r] *= scale;
    return rings;
  }

  #tablesFor(n: number): GridTables {
    let tables = this.#tables.get(n);
    if (tables === undefined) {
      tables = writeTables(this.#kernels, this.#scratch, n, -n / 2, n);
      this.#tables.set(n, tables);
    }
    return tables;
  }
}

/** Sums over the samples with max(|x|, |y|) = r of an n x n plane whose middle is sample (n/2, n/2). */
function sumBySquareRing(plane: Float32Array, n: number): Float64Array {
  const rings = new Float64Array(n / 2 + 1);
  const middle = n / 2;
  for (let row = 0; row < n; row++) {
    const y = Math.abs(row - middle);
    const centre = row * n + middle;
    const last = Math.min(y, middle - 1); // there is no column n
    let inner = 0;
    for (let at = centre - y; at <= centre + last; at++) inner += plane[at];
    rings[y] += inner;
    for (let x = y + 1; x < middle; x++) rings[x] += plane[centre - x] + plane[centre + x];
    if (y < middle) rings[middle] += plane[centre - middle];
  }
  return rings;
}

/** Tables for a window of `side` samples of an n-grid that begins `start` samples from the image point. */
function writeTables(kernels: Kernels, scratch: Scratch, n: number, start: number, side: number): GridTables {
  const ones = scratch.floats(n);
  ones.values.fill(1);
  const columnOffsets = scratch.allocate(4 * side);
  const rowOfPosition = scratch.allocate(4 * n);
  const offsets = new Uint32Array(scratch.memory.buffer, columnOffsets, side);
  const rows = new Int32Array(scratch.memory.buffer, rowOfPosition, n).fill(-1);
  for (let i = 0; i < side; i++) {
    const position = kernels.positionOf((start + i) & (n - 1), n);
    offsets[i] = COMPLEX_ROW_BYTES * position;
    if (i < n) rows[position] = i;
  }
  return { ones: ones.address, columnOffsets, rowOfPosition };
}
