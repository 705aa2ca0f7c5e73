/** The door to the compiled kernels of `src/kernels`: loads them and gives their functions types.
 *
 * All of them work on one shared memory that the caller owns, by addresses (byte offsets, multiples of 16 unless said otherwise).
 * The module keeps no data there but what `prepare` writes. Addresses above 2^31 must be passed as they are; JavaScript's numbers hold
 * them, and the kernels read them as unsigned.
 *
 * Shapes: a "complex row" is 32 bytes, the real parts of four neighbouring columns and then their imaginary parts; a "panel" is n complex
 * rows, four columns of a transform side by side. Spectra lie in digit-reversed order: frequency k in row `positionOf(k, n)`.
 */
import { readFileSync } from 'node:fs';

/** Sizes that the transforms know: powers of two between these. */
export const SMALLEST_KERNEL_FFT = 64;
export const LARGEST_KERNEL_FFT = 2048;

/** Bytes of a complex row. */
export const COMPLEX_ROW_BYTES = 32;

/** The functions of the kernels. See `src/kernels` for the equations. */
export interface Kernels {
  /** Bytes that `prepare` fills. */
  tablesBytes(): number;
  /** Fill the tables at an address that stays reserved; once for each instance, before anything else. */
  prepare(at: number): void;

  /** Row of frequency k in a spectrum of n. */
  positionOf(k: number, n: number): number;
  /** Transform a panel forward, exp(-i), unscaled. Row r is multiplied by weights[r]; rows from `used` on count as zero and are not
   * read. @param weights address of `used` float32 numbers. @param target may be `source` */
  forward(source: number, weights: number, used: number, target: number, n: number): void;
  /** As `forward`, worked out in `panel` and written as lines: positions 4m ... 4m + 3 become the lanes of line m, which starts at
   * lines + m * lineBytes and takes one complex row for each of the four columns. */
  forwardToLines(
    source: number,
    weights: number,
    used: number,
    panel: number,
    n: number,
    lines: number,
    lineBytes: number,
  ): void;
  /** Transform a panel back, exp(+i), unscaled. `source` is overwritten; `target` may be `source`. */
  inverse(source: number, target: number, n: number): void;
  /** As `inverse`, the spectrum read from lines as `forwardToLines` writes them. */
  inverseFromLines(lines: number, lineBytes: number, panel: number, n: number): void;
}

let compiled: WebAssembly.Module | undefined;

/** The compiled kernels, read from the build. Compiled once in each thread, or sent to workers, who then share the machine code.
 * @throws {Error} where the build is missing */
export function kernelModule(): WebAssembly.Module {
  if (compiled === undefined) {
    const file = new URL('../../dist/kernels/foreglass.wasm', import.meta.url);
    let bytes: Uint8Array;
    try {
      bytes = readFileSync(file);
    } catch (cause) {
      throw new Error(`the compiled kernels are missing (${file.pathname}); run 'npm run build'`, { cause });
    }
    compiled = new WebAssembly.Module(bytes);
  }
  return compiled;
}

/** An instance of the kernels on a shared memory, at once; `prepare` is left to the caller. Each thread needs its own. */
export function instantiateKernels(
  memory: WebAssembly.Memory,
  module: WebAssembly.Module = kernelModule(),
): Kernels {
  const instance = new WebAssembly.Instance(module, {
    env: { memory, 'Math.sin': Math.sin, 'Math.cos': Math.cos },
  });
  return instance.exports as unknown as Kernels;
}
