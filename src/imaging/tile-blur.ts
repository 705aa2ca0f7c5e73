/** The varying blur in plain TypeScript over the float64 FFT: the reference that faster engines are held against. */
import { FftPlan, nextPowerOfTwo } from '../numeric/fft.js';
import { type BlurGrid, blendWeights, kernelReach } from './blur-grid.js';
import type { NodeKernels } from './node-kernels.js';

/** Spectra kept for reuse by neighbouring tiles, in bytes a worker. */
const SPECTRA_BYTES = 192 * 2 ** 20;

/** Blurs tiles of one grid. Holds scratch, so each worker makes its own.
 *
 *     out = sum over nodes j of IFFT( FFT(tile * w_j) * FFT(K_j) ),   w_j(x, y) = wx_j(x) wy_j(y)
 *
 * The weights lie on the source side: every sample spreads with the kernel of its own place. They factor, so rows need one
 * transform a node column, and only then columns one a node. Results overlap into the neighbouring tiles and are added up there
 * (overlap-add; Oppenheim and Schafer, Discrete-Time Signal Processing, cited from memory).
 */
export class TileBlur {
  readonly #grid: BlurGrid;
  readonly #fftSize: number;
  readonly #bins: number;
  readonly #plan: FftPlan;
  readonly #line: Float64Array;
  readonly #lineOut: Float64Array;
  readonly #sum: Float64Array;
  readonly #weightsX: Float64Array;
  readonly #weightsY: Float64Array;
  /** Row spectra: [node column][row][bin], interleaved. */
  readonly #rowSpectra: Float64Array;
  /** Blurred tile: [row][bin], interleaved, rows transformed back by columns only. */
  readonly #mixed: Float64Array;
  readonly #kernelSpectra = new Map<number, Float64Array>();

  constructor(grid: BlurGrid) {
    const { tilePx, kernelPx, order } = grid;
    this.#grid = grid;
    this.#fftSize = blurFftSize(tilePx, kernelPx);
    this.#bins = this.#fftSize / 2 + 1;
    this.#plan = new FftPlan(this.#fftSize);
    this.#line = new Float64Array(2 * this.#fftSize);
    this.#lineOut = new Float64Array(2 * this.#fftSize);
    this.#sum = new Float64Array(2 * this.#fftSize);
    this.#weightsX = new Float64Array((order + 1) * tilePx);
    this.#weightsY = new Float64Array((order + 1) * tilePx);
    this.#rowSpectra = new Float64Array(2 * (order + 1) * tilePx * this.#bins);
    this.#mixed = new Float64Array(2 * (tilePx + kernelPx - 1) * this.#bins);
  }

  /** Blur one tile of `source` and add the result to `out` (planes of the grid's size, row-major). */
  blurTile(
    tileX: number,
    tileY: number,
    source: Float32Array,
    out: Float32Array,
    kernels: NodeKernels,
  ): void {
    this.#weigh(tileX, tileY);
    this.#transformRows(tileX, tileY, source);
    this.#mixColumns(this.#spectra(tileX, tileY, kernels), (i, j, bin) => this.#transformColumn(i, j, bin));
    this.#addRows(tileX, tileY, out);
  }

  /** Blur one tile of a scene of ones and add the result to `out`. The spectrum of such a tile is the product of its weights' own. */
  blurOnes(tileX: number, tileY: number, out: Float32Array, kernels: NodeKernels): void {
    const { tilePx, order } = this.#grid;
    this.#weigh(tileX, tileY);
    const spectraX = lineSpectra(this.#plan, this.#weightsX, order + 1, tilePx);
    const spectraY = lineSpectra(this.#plan, this.#weightsY, order + 1, tilePx);
    this.#mixColumns(this.#spectra(tileX, tileY, kernels), (i, j, bin) =>
      scaled(spectraY[j], spectraX[i][2 * bin], spectraX[i][2 * bin + 1], this.#lineOut),
    );
    this.#addRows(tileX, tileY, out);
  }

  #weigh(tileX: number, tileY: number): void {
    const { originX, originY, tilePx, order, width, height } = this.#grid;
    blendWeights(tileX, originX, tilePx, order, width, this.#weightsX);
    blendWeights(tileY, originY, tilePx, order, height, this.#weightsY);
  }

  #spectra(tileX: number, tileY: number, kernels: NodeKernels): Float64Array[] {
    const { order } = this.#grid;
    const spectra: Float64Array[] = [];
    for (let j = 0; j <= order; j++) {
      for (let i = 0; i <= order; i++)
        spectra.push(this.#spectrum(kernels, tileX * order + i, tileY * order + j));
    }
    return spectra;
  }

  #transformRows(tileX: number, tileY: number, source: Float32Array): void {
    const { originX, originY, tilePx, order, width, height } = this.#grid;
    const line = this.#line;
    const left = originX + tileX * tilePx;
    const top = originY + tileY * tilePx;
    for (let node = 0; node <= order; node++) {
      for (let row = 0; row < tilePx; row++) {
        const from = width * Math.min(height - 1, Math.max(0, top + row));
        line.fill(0);
        for (let i = 0; i < tilePx; i++) {
          const column = Math.min(width - 1, Math.max(0, left + i)); // past the frame its edge goes on
          line[2 * i] = this.#weightsX[node * tilePx + i] * source[from + column];
        }
        this.#plan.transform(this.#lineOut, line, 'minus');
        const to = 2 * this.#bins * (node * tilePx + row);
        this.#rowSpectra.set(this.#lineOut.subarray(0, 2 * this.#bins), to);
      }
    }
  }

  /** Multiply the weighted tile's columns with the kernels', add up over the nodes, and transform back along the columns.
   * @param columnOf column `bin` of the tile's spectrum under the weights of node (i, j) */
  #mixColumns(spectra: Float64Array[], columnOf: (i: number, j: number, bin: number) => Float64Array): void {
    const { tilePx, kernelPx, order } = this.#grid;
    const rowCount = tilePx + kernelPx - 1;
    const bins = this.#bins;
    const sum = this.#sum;
    for (let bin = 0; bin < bins; bin++) {
      sum.fill(0);
      for (let j = 0; j <= order; j++) {
        for (let i = 0; i <= order; i++) {
          multiplyAdd(sum, columnOf(i, j, bin), spectra[j * (order + 1) + i], 2 * bin * this.#fftSize);
        }
      }
      this.#plan.transform(this.#lineOut, sum, 'plus');
      for (let row = 0; row < rowCount; row++) {
        const at = 2 * (row * bins + bin);
        this.#mixed[at] = this.#lineOut[2 * row];
        this.#mixed[at + 1] = this.#lineOut[2 * row + 1];
      }
    }
  }

  #transformColumn(i: number, j: number, bin: number): Float64Array {
    const { tilePx } = this.#grid;
    const line = this.#line;
    line.fill(0);
    for (let row = 0; row < tilePx; row++) {
      const weight = this.#weightsY[j * tilePx + row];
      const at = 2 * (this.#bins * (i * tilePx + row) + bin);
      line[2 * row] = weight * this.#rowSpectra[at];
      line[2 * row + 1] = weight * this.#rowSpectra[at + 1];
    }
    this.#plan.transform(this.#lineOut, line, 'minus');
    return this.#lineOut;
  }

  #addRows(tileX: number, tileY: number, out: Float32Array): void {
    const { originX, originY, tilePx, kernelPx, width, height } = this.#grid;
    const reach = kernelReach(kernelPx);
    const left = originX + tileX * tilePx - reach;
    const top = originY + tileY * tilePx - reach;
    const side = tilePx + kernelPx - 1;
    const scale = 1 / (this.#fftSize * this.#fftSize);
    const first = Math.max(0, -left);
    const last = Math.min(side, width - left);
    for (let row = Math.max(0, -top); row < Math.min(side, height - top); row++) {
      const line = this.#line;
      line.set(this.#mixed.subarray(2 * row * this.#bins, 2 * (row + 1) * this.#bins));
      for (let bin = 1; bin < this.#bins - 1; bin++) {
        line[2 * (this.#fftSize - bin)] = line[2 * bin]; // a real row: the other half is the conjugate
        line[2 * (this.#fftSize - bin) + 1] = -line[2 * bin + 1];
      }
      this.#plan.transform(this.#lineOut, line, 'plus');
      const to = (top + row) * width + left;
      for (let i = first; i < last; i++) out[to + i] += scale * this.#lineOut[2 * i];
    }
  }

  /** Half spectrum of a kernel, column by column: [bin][frequency down], interleaved. */
  #spectrum(kernels: NodeKernels, nodeX: number, nodeY: number): Float64Array {
    const key = kernels.key(nodeX, nodeY);
    const kept = this.#kernelSpectra.get(key);
    if (kept !== undefined) {
      this.#kernelSpectra.delete(key); // to the end of the queue: the oldest is dropped first
      this.#kernelSpectra.set(key, kept);
      return kept;
    }
    const spectrum = this.#computeSpectrum(kernels.kernel(nodeX, nodeY));
    const least = (this.#grid.order + 1) ** 2;
    const most = Math.max(least, Math.floor(SPECTRA_BYTES / spectrum.byteLength));
    for (const oldest of this.#kernelSpectra.keys()) {
      if (this.#kernelSpectra.size < most) break;
      this.#kernelSpectra.delete(oldest);
    }
    this.#kernelSpectra.set(key, spectrum);
    return spectrum;
  }

  #computeSpectrum(kernel: Float32Array): Float64Array {
    const { kernelPx } = this.#grid;
    const size = this.#fftSize;
    const rows = new Float64Array(2 * kernelPx * this.#bins);
    const line = this.#line;
    for (let row = 0; row < kernelPx; row++) {
      line.fill(0);
      for (let i = 0; i < kernelPx; i++) line[2 * i] = kernel[row * kernelPx + i];
      this.#plan.transform(this.#lineOut, line, 'minus');
      rows.set(this.#lineOut.subarray(0, 2 * this.#bins), 2 * row * this.#bins);
    }
    const spectrum = new Float64Array(2 * this.#bins * size);
    for (let bin = 0; bin < this.#bins; bin++) {
      line.fill(0);
      for (let row = 0; row < kernelPx; row++) {
        line[2 * row] = rows[2 * (row * this.#bins + bin)];
        line[2 * row + 1] = rows[2 * (row * this.#bins + bin) + 1];
      }
      this.#plan.transform(spectrum.subarray(2 * bin * size, 2 * (bin + 1) * size), line, 'minus');
    }
    return spectrum;
  }
}

/** The FFT size that holds a tile and the reach of its kernel on both sides. */
export function blurFftSize(tilePx: number, kernelPx: number): number {
  return nextPowerOfTwo(Math.max(16, tilePx + kernelPx - 1));
}

/** sum += a * b, complex and interleaved, `b` from `offset` on. */
function multiplyAdd(sum: Float64Array, a: Float64Array, b: Float64Array, offset: number): void {
  for (let k = 0; k < sum.length; k += 2) {
    const re = b[offset + k];
    const im = b[offset + k + 1];
    sum[k] += a[k] * re - a[k + 1] * im;
    sum[k + 1] += a[k] * im + a[k + 1] * re;
  }
}

/** Spectra of real lines of `length` samples each, stored one after the other. */
function lineSpectra(plan: FftPlan, lines: Float64Array, count: number, length: number): Float64Array[] {
  return Array.from({ length: count }, (_, k) => {
    const line = new Float64Array(2 * plan.size);
    for (let i = 0; i < length; i++) line[2 * i] = lines[k * length + i];
    const spectrum = new Float64Array(2 * plan.size);
    plan.transform(spectrum, line, 'minus');
    return spectrum;
  });
}

/** out = (re + i im) * a, complex and interleaved. */
function scaled(a: Float64Array, re: number, im: number, out: Float64Array): Float64Array {
  for (let k = 0; k < a.length; k += 2) {
    out[k] = a[k] * re - a[k + 1] * im;
    out[k + 1] = a[k] * im + a[k + 1] * re;
  }
  return out;
}
