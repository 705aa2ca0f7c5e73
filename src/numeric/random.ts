/** Random numbers that depend on where they are used, never on the order of the work. */
import { InputError } from '../errors.js';
import { logFactorial } from './log-factorial.js';
import { threefry4x32 } from './threefry.js';
import { bell, HALF_WIDTH, INNER_SHARE, TAIL_START } from './ziggurat.js';

const TWO_TO_32 = 2 ** 32;
const PER_WORD = 1 / TWO_TO_32;

/** Means from here on use transformed rejection, which is made for means of 10 and more. */
const LARGE_MEAN = 10;
/** Past this count the tail of a mean below 10 holds less than 1e-70. */
const SMALL_MEAN_COUNTS = 128;
const RECIPROCAL = Float64Array.from({ length: SMALL_MEAN_COUNTS + 1 }, (_, k) => 1 / k);

/** A family of independent random sequences, one for each item (a pixel, a picture), keyed by a seed and a
 * stream.
 *
 * `start(item)` goes to the beginning of that item's own sequence; the draws that follow depend on (seed,
 * stream, item) and on nothing else. So any thread may take any item in any order. Words come from the
 * counter-based Threefry-4x32-20. One object serves one thread.
 */
export class CounterRandom {
  private readonly key0: number;
  private readonly key1: number;
  private readonly key2: number;
  private itemLow = 0;
  private itemHigh = 0;
  private block = 0;
  private readonly words = new Int32Array(4);
  private next = 4;

  /**
   * @param seed    whole number from 0 to 2^53 - 1
   * @param stream  whole number from 0 to 2^32 - 1: what the numbers are for
   * @throws {InputError} for a seed that is no such number
   */
  constructor(seed: number, stream: number) {
    checkSeed(seed);
    this.key0 = seed | 0;
    this.key1 = Math.floor(seed / TWO_TO_32) | 0;
    this.key2 = stream | 0;
  }

  /** Go to the beginning of the sequence of an item.
   * @param item  whole number from 0 to 2^53 - 1 */
  start(item: number): void {
    this.itemLow = item | 0;
    this.itemHigh = Math.floor(item * PER_WORD) | 0;
    this.block = 0;
    this.next = 4;
  }

  /** 32 random bits as a signed integer. */
  word(): number {
    if (this.next === 4) this.refill();
    return this.words[this.next++];
  }

  private refill(): void {
    threefry4x32(this.key0, this.key1, this.key2, 0, this.itemLow, this.itemHigh, this.block, 0, this.words);
    this.block++;
    this.next = 0;
  }

  /** Uniform in 0..1, both ends excluded, in steps of 2^-32. */
  uniform(): number {
    return ((this.word() >>> 0) + 0.5) * PER_WORD;
  }

  /** Uniform in 0..1, both ends excluded, in steps of 2^-52. */
  uniform52(): number {
    const high = this.word() >>> 0;
    const low = this.word() >>> 12; // 20 bits
    return (high * 2 ** 20 + low + 0.5) * 2 ** -52;
  }

  /** Standard normal, by the ziggurat: 8 bits choose the layer, 24 the place in it, in steps below 5e-7. */
  normal(): number {
    const word = this.word();
    const layer = word & 255;
    const u = ((word >> 8) + 0.5) * 2 ** -23; // -1..1
    if (Math.abs(u) < INNER_SHARE[layer]) return u * HALF_WIDTH[layer];
    return this.normalAtEdge(layer, u); // one draw in 80
  }

  /** The rest of the ziggurat: the tail of the lowest layer, the wedges of the others, or another try. */
  private normalAtEdge(layer: number, u: number): number {
    if (layer === 0) return u < 0 ? -this.normalTail() : this.normalTail();
    const x = u * HALF_WIDTH[layer];
    const low = bell(HALF_WIDTH[layer]);
    const high = bell(HALF_WIDTH[layer + 1]);
    return low + this.uniform() * (high - low) < bell(x) ? x : this.normal();
  }

  /** The tail beyond the ziggurat. Source: G. Marsaglia, "Generating a Variable from the Tail of the Normal
   * Distribution", Technometrics 6 (1964) 101 (from memory). */
  private normalTail(): number {
    for (;;) {
      const x = -Math.log(this.uniform()) / TAIL_START;
      const y = -Math.log(this.uniform());
      if (2 * y > x * x) return TAIL_START + x;
    }
  }

  /** A Poisson count, exact up to means of about 1e9 but for the grain of the uniforms (2^-52, 2^-32).
   * @param mean  below or at 0, or not a number: 0 counts */
  poisson(mean: number): number {
    if (!(mean > 0)) return 0;
    return mean < LARGE_MEAN ? this.poissonByInversion(mean) : this.poissonByRejection(mean);
  }

  /** Sequential search up the distribution function. Source: Devroye, Non-Uniform Random Variate Generation
   * (1986), X.3 (from memory). */
  private poissonByInversion(mean: number): number {
    let left = this.uniform52();
    let share = Math.exp(-mean);
    let count = 0;
    while (left > share && count < SMALL_MEAN_COUNTS) {
      left -= share;
      count++;
      share *= mean * RECIPROCAL[count];
    }
    return count;
  }

  /** Transformed rejection with squeeze, PTRS. Source: W. Hörmann, "The transformed rejection method for
   * generating Poisson random variables", Insurance: Mathematics and Economics 12 (1993) 39 (constants from
   * memory; the tests hold the result against the exact distribution). */
  private poissonByRejection(mean: number): number {
    const b = 0.931 + 2.53 * Math.sqrt(mean);
    const a = -0.059 + 0.02483 * b;
    for (;;) {
      const u = this.uniform() - 0.5;
      const v = this.uniform();
      const distance = 0.5 - Math.abs(u);
      const count = Math.floor(((2 * a) / distance + b) * u + mean + 0.43);
      if (distance >= 0.07 && (0.9277 - v) * (b - 2) >= 3.6224) return count;
      if (count < 0 || (distance < 0.013 && v > distance)) continue;
      const inverseAlpha = 1.1239 + 1.1328 / (b - 3.4);
      const proposal = Math.log((v * inverseAlpha) / (a / (distance * distance) + b));
      if (proposal <= count * Math.log(mean) - mean - logFactorial(count)) return count;
    }
  }
}

/** @throws {InputError} for a seed that is not a whole number from 0 to 2^53 - 1 */
export function checkSeed(seed: number, key = 'seed'): void {
  if (Number.isSafeInteger(seed) && seed >= 0) return;
  throw new InputError({
    key,
    message: 'a seed is a whole number',
    found: String(seed),
    allowed: '0 to 9007199254740991',
  });
}
