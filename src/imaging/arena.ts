/** One shared block of memory for planes, kernels and scratch, seen by every worker (and by the WebAssembly kernels) under the same addresses. */
import { RunError } from '../errors.js';

const PAGE_BYTES = 65536;
const LARGEST_PAGES = 65536; // 4 GiB, the reach of a 32-bit address
/** Rows and planes start on a cache line. */
const ALIGNMENT = 64;

/** A stack of allocations: `mark` before a piece of work, `release` after it. */
export class Arena {
  readonly memory: WebAssembly.Memory;
  #top: number;

  /** @param memory shared memory of another thread's arena; left out: a new one */
  constructor(memory?: WebAssembly.Memory) {
    this.memory = memory ?? new WebAssembly.Memory({ initial: 1, maximum: LARGEST_PAGES, shared: true });
    this.#top = ALIGNMENT; // address 0 stays free, to mean "none"
  }

  /** Reserve bytes and return their address. New pages are zero; pages used before hold what they held.
   * @throws {RunError} where the memory is used up */
  allocate(bytes: number): number {
    const address = this.#top;
    this.#top = Math.ceil((address + bytes) / ALIGNMENT) * ALIGNMENT;
    const missing = this.#top - this.memory.buffer.byteLength;
    if (missing > 0) {
      try {
        this.memory.grow(Math.ceil(missing / PAGE_BYTES));
      } catch {
        this.#top = address;
        throw new RunError(
          `out of memory: the picture needs more than ${Math.round((address + bytes) / 2 ** 20)} MiB of working memory. ` +
            'Use fewer pixels, a lower --oversample or a larger --tolerance.',
        );
      }
    }
    return address;
  }

  /** Reserve float32 numbers and return their address. */
  allocateFloats(count: number): number {
    return this.allocate(4 * count);
  }

  /** Float32 numbers at an address. The view stays good when the memory grows. */
  floats(address: number, count: number): Float32Array {
    return new Float32Array(this.memory.buffer, address, count);
  }

  /** 16-bit whole numbers at an address. */
  shorts(address: number, count: number): Uint16Array {
    return new Uint16Array(this.memory.buffer, address, count);
  }

  /** Where the stack stands now, for `release`. */
  mark(): number {
    return this.#top;
  }

  /** Give back everything that was reserved since `mark`. */
  release(mark: number): void {
    this.#top = mark;
  }
}
