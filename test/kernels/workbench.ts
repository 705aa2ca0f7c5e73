/** Memory with an instance of the kernels on it, and ways to put columns in and read spectra out. */
import { instantiateKernels, type Kernels } from '../../src/numeric/kernels.js';

const PAGE_BYTES = 65536;

/** Four complex columns of n rows, or their spectra in natural order: interleaved float64. */
export type Columns = Float64Array[];

export class Workbench {
  readonly memory: WebAssembly.Memory;
  readonly kernels: Kernels;
  #top: number;

  /** @param base first address in use */
  constructor(base = 1024) {
    const pages = Math.ceil(base / PAGE_BYTES) + 1;
    this.memory = new WebAssembly.Memory({ initial: pages, maximum: 65536, shared: true });
    this.kernels = instantiateKernels(this.memory);
    this.#top = base;
    this.kernels.prepare(this.allocate(this.kernels.tablesBytes()));
  }

  allocate(bytes: number): number {
    const address = this.#top;
    this.#top = Math.ceil((address + bytes) / 64) * 64;
    const missing = this.#top - this.memory.buffer.byteLength;
    if (missing > 0) this.memory.grow(Math.ceil(missing / PAGE_BYTES));
    return address;
  }

  floats(address: number, count: number): Float32Array {
    return new Float32Array(this.memory.buffer, address, count);
  }

  /** Float32 numbers, copied in. */
  place(values: ArrayLike<number>): number {
    const address = this.allocate(4 * values.length);
    this.floats(address, values.length).set(values);
    return address;
  }

  /** A panel of four columns; `rows` says how many are written, the others hold NaN. */
  placePanel(columns: Columns, rows = columns[0].length / 2): number {
    const n = columns[0].length / 2;
    const values = new Float32Array(8 * n).fill(Number.NaN);
    for (let row = 0; row < rows; row++) {
      for (let lane = 0; lane < 4; lane++) {
        values[8 * row + lane] = columns[lane][2 * row];
        values[8 * row + 4 + lane] = columns[lane][2 * row + 1];
      }
    }
    return this.place(values);
  }

  /** The four columns of a panel, row by row as they lie. */
  readPanel(address: number, n: number): Columns {
    const values = this.floats(address, 8 * n);
    return [0, 1, 2, 3].map((lane) => {
      const column = new Float64Array(2 * n);
      for (let row = 0; row < n; row++) {
        column[2 * row] = values[8 * row + lane];
        column[2 * row + 1] = values[8 * row + 4 + lane];
      }
      return column;
    });
  }

  /** The four spectra of a panel, brought from digit-reversed into natural order. */
  readSpectra(address: number, n: number): Columns {
    return this.readPanel(address, n).map((column) => {
      const spectrum = new Float64Array(2 * n);
      for (let k = 0; k < n; k++) {
        const at = 2 * this.kernels.positionOf(k, n);
        spectrum[2 * k] = column[at];
        spectrum[2 * k + 1] = column[at + 1];
      }
      return spectrum;
    });
  }
}

/** Root of the summed squared differences over that of the summed squares of `expected`. */
export function relativeError(found: ArrayLike<number>, expected: ArrayLike<number>): number {
  let error = 0;
  let power = 0;
  for (let i = 0; i < expected.length; i++) {
    error += (found[i] - expected[i]) ** 2;
    power += expected[i] ** 2;
  }
  return Math.sqrt(error / power);
}

/** Numbers in -1 ... 1 that float32 holds exactly, the same for the same seed (linear congruential generator with the constants of
 * Numerical Recipes, from memory). */
export function noise(count: number, seed: number): Float64Array {
  const values = new Float64Array(count);
  let state = (seed * 2654435761) >>> 0;
  for (let i = 0; i < count; i++) {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    values[i] = Math.fround((state >>> 8) / 2 ** 23 - 1);
  }
  return values;
}
