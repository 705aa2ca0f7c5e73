/** The float64 FFT of the optics. The only place that imports fft.js.
 *
 * Rules of the wrapped library, kept here once: sizes are powers of two above 1; numbers are complex, real and imaginary parts interleaved;
 * input and output must differ; a plan holds scratch state during a call, so each worker makes its own.
 */
import FFT from 'fft.js';

/** Sign of the exponent: `minus` is exp(-i 2 pi jk/n), `plus` is exp(+i 2 pi jk/n). Neither is scaled. */
export type ExponentSign = 'minus' | 'plus';

/** One-dimensional complex transforms of one size, unscaled in both directions. */
export class FftPlan {
  readonly size: number;
  readonly #fft: FFT;

  /** @param size power of two, 2 or more */
  constructor(size: number) {
    this.size = size;
    this.#fft = new FFT(size);
  }

  /** out[k] = sum over j of input[j] exp(-+ i 2 pi jk/size). `out` and `input` hold 2 * size numbers and must differ. */
  transform(out: Float64Array, input: Float64Array, sign: ExponentSign): void {
    if (sign === 'minus') {
      this.#fft.transform(out, input);
      return;
    }
    this.#fft.inverseTransform(out, input);
    const scale = this.size; // the library divides by n in this direction; undone, so that both directions are alike
    for (let k = 0; k < out.length; k++) out[k] *= scale;
  }
}

/** Two-dimensional complex transforms of n x n samples, row-major, interleaved, in place, unscaled. */
export class Fft2dPlan {
  readonly size: number;
  readonly #plan: FftPlan;
  readonly #line: Float64Array;
  readonly #lineOut: Float64Array;

  constructor(size: number) {
    this.size = size;
    this.#plan = new FftPlan(size);
    this.#line = new Float64Array(2 * size);
    this.#lineOut = new Float64Array(2 * size);
  }

  /** Transform `data` (2 * n * n numbers) in place.
   * @param isRowZero rows for which this says true hold zeros only and are passed over in the first pass
   */
  transform(data: Float64Array, sign: ExponentSign, isRowZero: (row: number) => boolean = () => false): void {
    const n = this.size;
    const line = this.#line;
    const lineOut = this.#lineOut;
    for (let row = 0; row < n; row++) {
      if (isRowZero(row)) continue;
      const start = 2 * n * row;
      this.#plan.transform(lineOut, data.subarray(start, start + 2 * n), sign);
      data.set(lineOut, start);
    }
    for (let column = 0; column < n; column++) {
      for (let row = 0, at = 2 * column; row < n; row++, at += 2 * n) {
        line[2 * row] = data[at];
        line[2 * row + 1] = data[at + 1];
      }
      this.#plan.transform(lineOut, line, sign);
      for (let row = 0, at = 2 * column; row < n; row++, at += 2 * n) {
        data[at] = lineOut[2 * row];
        data[at + 1] = lineOut[2 * row + 1];
      }
    }
  }
}

/** The smallest power of two that is not below `n`. */
export function nextPowerOfTwo(n: number): number {
  return 2 ** Math.ceil(Math.log2(Math.max(1, n)));
}
