/** Work space of one worker for one job: handed out piece by piece, given back as a whole. */
import { RunError } from '../errors.js';

const ALIGNMENT = 64;

export class Scratch {
  readonly memory: WebAssembly.Memory;
  readonly #end: number;
  #top: number;

  /** @param at address of the work space @param bytes its size */
  constructor(memory: WebAssembly.Memory, at: number, bytes: number) {
    this.memory = memory;
    this.#top = at;
    this.#end = at + bytes;
  }

  /** Address of `bytes` bytes.
   * @throws {RunError} where the job asked for less than it takes: a fault of the program */
  allocate(bytes: number): number {
    const address = this.#top;
    this.#top = Math.ceil((address + bytes) / ALIGNMENT) * ALIGNMENT;
    if (this.#top > this.#end) throw new RunError('a worker ran out of its work space');
    return address;
  }

  floats(count: number): { address: number; values: Float32Array } {
    const address = this.allocate(4 * count);
    return { address, values: new Float32Array(this.memory.buffer, address, count) };
  }

  doubles(values: Float64Array): number {
    const address = this.allocate(8 * values.length);
    new Float64Array(this.memory.buffer, address, values.length).set(values);
    return address;
  }
}

/** Bytes that `allocate` takes for a request. */
export function rounded(bytes: number): number {
  return Math.ceil(bytes / ALIGNMENT) * ALIGNMENT;
}
