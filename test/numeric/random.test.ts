import fc from 'fast-check';
import jstat from 'jstat';
import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.js';
import { logFactorial } from '../../src/numeric/log-factorial.js';
import { CounterRandom } from '../../src/numeric/random.js';
import { threefry4x32 } from '../../src/numeric/threefry.js';

// Seeds are fixed, so each statistical test gives the same figure every time. Its limits are those that a
// right generator would pass with nearly any seed: 4 to 5 standard errors, or a probability of 1e-4 at either
// end.

describe('threefry4x32', () => {
  const PI = [0x243f6a88, 0x85a308d3, 0x13198a2e, 0x03707344, 0xa4093822, 0x299f31d0, 0x082efa98, 0xec4e6c89];

  it.each([
    ['zeros', [0, 0, 0, 0], [0, 0, 0, 0], '9c6ca96a e17eae66 fc10ecd4 5256a7d8'],
    ['ones', [-1, -1, -1, -1], [-1, -1, -1, -1], '2a881696 57012287 f6c7446e a16a6732'],
    ['the digits of pi', PI.slice(0, 4), PI.slice(4), '59cd1dbb b8879579 86b5d00c ac8b6d84'],
  ])('gives the known answer for %s', (_name, counter, key, expected) => {
    // Source: known-answer vectors of the authors' library Random123 for Threefry-4x32 with 20 rounds (from
    // memory)
    const out = new Int32Array(4);
    const [k0, k1, k2, k3] = key.map((word) => word | 0);
    const [c0, c1, c2, c3] = counter.map((word) => word | 0);
    threefry4x32(k0, k1, k2, k3, c0, c1, c2, c3, out);
    expect([...out].map((word) => (word >>> 0).toString(16).padStart(8, '0')).join(' ')).toBe(expected);
  });
});

describe('CounterRandom', () => {
  const draw = (random: CounterRandom, item: number, count: number) => {
    random.start(item);
    return Array.from({ length: count }, () => random.word());
  };

  it('gives each item its own sequence, whatever was drawn before', () => {
    const natural = fc.integer({ min: 0, max: Number.MAX_SAFE_INTEGER });
    fc.assert(
      fc.property(natural, natural, natural, fc.integer({ min: 0, max: 9 }), (seed, item, other, drawn) => {
        const fresh = draw(new CounterRandom(seed, 3), item, 11);
        const used = new CounterRandom(seed, 3);
        draw(used, other, drawn);
        expect(draw(used, item, 11)).toEqual(fresh);
      }),
      { numRuns: 50 },
    );
  });

  it('depends on every part of seed, stream and item', () => {
    const sequences = [
      [0, 0, 0],
      [1, 0, 0],
      [2 ** 32, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
      [0, 0, 2 ** 32],
    ].map(([seed, stream, item]) => draw(new CounterRandom(seed, stream), item, 9).join());
    expect(new Set(sequences).size).toBe(sequences.length);
    // three blocks of four words, none of them repeated
    expect(new Set(draw(new CounterRandom(0, 0), 0, 12)).size).toBe(12);
  });

  it.each([-1, 1.5, Number.NaN, Number.POSITIVE_INFINITY, 2 ** 53])('refuses the seed %s', (seed) => {
    expect(() => new CounterRandom(seed, 0)).toThrow(InputError);
    expect(() => new CounterRandom(seed, 0)).toThrow(`found ${seed}. Allowed: 0 to 9007199254740991`);
  });

  it('has uniforms that fill 0..1 evenly', () => {
    const n = 100_000;
    for (const method of ['uniform', 'uniform52'] as const) {
      const random = new CounterRandom(11, 0);
      const samples = items(n, random, (r) => r[method]());
      // Kolmogorov-Smirnov distance: P(sqrt(n) D > 2.2) = 1.2e-4 (asymptotic formula)
      expect(Math.sqrt(n) * ksDistance(samples, (x) => x)).toBeLessThan(2.2);
      expect(Math.min(...samples.subarray(0, 1000))).toBeGreaterThan(0);
    }
  });

  it('has no bit that leans, and none that follows its neighbour item, word or seed', () => {
    const n = 50_000;
    const random = new CounterRandom(12, 0);
    const nextSeed = new CounterRandom(13, 0);
    const ones = new Float64Array(32);
    const pairs = { item: new Float64Array(256), word: new Float64Array(256), seed: new Float64Array(256) };
    let before = 0;
    for (let i = 0; i < n; i++) {
      random.start(i);
      nextSeed.start(i);
      const word = random.word();
      for (let bit = 0; bit < 32; bit++) ones[bit] += (word >>> bit) & 1;
      const top = word >>> 28;
      pairs.item[16 * before + top]++;
      pairs.word[16 * (random.word() >>> 28) + top]++;
      pairs.seed[16 * (nextSeed.word() >>> 28) + top]++;
      before = top;
    }
    // a count of ones has the standard deviation sqrt(n)/2; 32 bits looked at, so 4.5 of them
    for (const count of ones) expect(Math.abs(count - n / 2)).toBeLessThan((4.5 * Math.sqrt(n)) / 2);
    for (const counts of Object.values(pairs))
      expectPlausible(chiSquare(counts, new Float64Array(256).fill(n / 256)), 255);
  });
});

describe('normal', () => {
  const n = 300_000;
  const samples = items(n, new CounterRandom(21, 0), (r) => r.normal());

  it('follows the normal distribution function', () => {
    // Source of the distribution function: jstat 1.9.6. Limit: P(sqrt(n) D > 2.2) = 1.2e-4
    expect(Math.sqrt(n) * ksDistance(samples, (x) => jstat.normal.cdf(x, 0, 1))).toBeLessThan(2.2);
  });

  it('has the moments 0, 1, 0 and 3', () => {
    const moment = (k: number) => samples.reduce((sum, x) => sum + x ** k, 0) / n;
    // standard errors of the raw moments: sqrt((m_2k - m_k^2) / n) with m_2, m_4, m_6, m_8 = 1, 3, 15, 105
    expect(Math.abs(moment(1))).toBeLessThan(4 * Math.sqrt(1 / n));
    expect(Math.abs(moment(2) - 1)).toBeLessThan(4 * Math.sqrt(2 / n));
    expect(Math.abs(moment(3))).toBeLessThan(4 * Math.sqrt(15 / n));
    expect(Math.abs(moment(4) - 3)).toBeLessThan(4 * Math.sqrt(96 / n));
  });

  it('has tails of the right weight and shape, past where the layers end', () => {
    const random = new CounterRandom(22, 0);
    const edges = [3, 3.4, 3.654, 3.8, 4, 4.4, Number.POSITIVE_INFINITY];
    const counts = new Float64Array(2 * (edges.length - 1));
    const draws = 1_500_000;
    random.start(0);
    for (let i = 0; i < draws; i++) {
      const x = random.normal();
      const size = Math.abs(x);
      if (size < edges[0]) continue;
      const bin = edges.findIndex((edge) => size < edge) - 1;
      counts[2 * bin + (x < 0 ? 1 : 0)]++;
    }
    const expected = counts.map((_, i) => {
      const bin = i >> 1;
      // from the lower tail, where the distribution function does not cancel
      return draws * (jstat.normal.cdf(-edges[bin], 0, 1) - jstat.normal.cdf(-edges[bin + 1], 0, 1));
    });
    expectPlausible(chiSquare(counts, expected), counts.length);
  });
});

describe('poisson', () => {
  // either side of the change of method at 10, the means that a dark, a grey and a full pixel have, and a
  // large well
  const means = [0.1, 1, 4, 9.999, 10, 11.3, 30, 200, 1440, 10_000, 100_000];

  it.each(means)('follows the exact distribution at a mean of %s', (mean) => {
    const n = 200_000;
    const counts = items(n, new CounterRandom(31, 0), (r) => r.poisson(mean));
    const bins = poissonBins(mean, n);
    const observed = new Float64Array(bins.expected.length);
    for (const count of counts) {
      let bin = 0;
      while (count > bins.last[bin]) bin++;
      observed[bin]++;
    }
    expectPlausible(chiSquare(observed, bins.expected), bins.expected.length - 1);
  });

  it.each([10, 12, 40, 300, 10_000])('rejects the right share of the unit square at a mean of %s', (mean) => {
    // The two uniforms of a try come from an even lattice instead of chance: ten times sharper with the same
    // number of tries.
    const n = 250_000;
    const lattice = new LatticePairs();
    const accepted: number[] = [];
    for (let i = 0; i < n; i++) {
      const count = lattice.attempt(mean);
      if (count !== undefined) accepted.push(count);
    }
    const counts = Float64Array.from(accepted).sort();
    let distance = 0;
    counts.forEach((count, i) => {
      if (count === counts[i + 1]) return;
      distance = Math.max(distance, Math.abs((i + 1) / counts.length - poissonCdf(count, mean)));
    });
    // chance would leave about 0.6 / sqrt(n) = 1.2e-3; the lattice leaves 1.0e-4 to 1.4e-4 (measured)
    expect(distance).toBeLessThan(3e-4);
  });

  it.each(means)('has mean, variance, skewness and excess of a mean of %s', (mean) => {
    const n = 200_000;
    const counts = items(n, new CounterRandom(32, 0), (r) => r.poisson(mean));
    // central moments: mean, mean, mean, mean + 3 mean^2 (Abramowitz and Stegun 26.1.22, from memory); each
    // is held to 5 standard errors as found from the sample's own spread
    const exact = [0, mean, mean, mean + 3 * mean * mean];
    const sums = new Float64Array(4);
    const squares = new Float64Array(4);
    for (const count of counts)
      for (let i = 0, power = 1; i < 4; i++) {
        power *= count - mean;
        sums[i] += power;
        squares[i] += power * power;
      }
    exact.forEach((value, i) => {
      const average = sums[i] / n;
      const spread = Math.sqrt(squares[i] / n - average * average);
      expect(Math.abs(average - value)).toBeLessThan((5 * spread) / Math.sqrt(n));
    });
  });

  it.each([0, -1, Number.NaN, -0])('counts nothing at a mean of %s', (mean) => {
    const random = new CounterRandom(1, 0);
    random.start(0);
    expect(random.poisson(mean)).toBe(0);
  });

  it('comes out whole and not negative for any mean', () => {
    const random = new CounterRandom(33, 0);
    fc.assert(
      fc.property(fc.double({ min: 0, max: 1e9, noNaN: true }), fc.nat(), (mean, item) => {
        random.start(item);
        const count = random.poisson(mean);
        expect(Number.isInteger(count) && count >= 0).toBe(true);
        // Chernoff's bound lets no count of this file come near twice the mean and 40
        expect(count).toBeLessThan(2 * mean + 40);
      }),
    );
  });
});

describe('logFactorial', () => {
  it('is the logarithm of the product', () => {
    let product = 1;
    for (let k = 0; k <= 170; k++) {
      if (k > 0) product *= k;
      // 170 roundings of the product and one of the logarithm
      expect(Math.abs(logFactorial(k) - Math.log(product))).toBeLessThan(
        1e-13 * Math.max(1, logFactorial(k)),
      );
    }
  });

  it('is ln gamma(k + 1) for large k', () => {
    // Source: gammaln of jstat 1.9.6, a Lanczos approximation of about 1e-10 relative
    for (const k of [171, 1000, 12_345, 1e6, 1e9])
      expect(logFactorial(k) / jstat.gammaln(k + 1)).toBeCloseTo(1, 9);
  });
});

/** Uniforms in pairs from a Kronecker lattice on the unit square, steps 1/p and 1/p^2 with p the plastic
 * number (root of p^3 = p + 1). */
class LatticePairs extends CounterRandom {
  private pair = 0;
  private drawn = 0;

  constructor() {
    super(0, 0);
  }

  override uniform(): number {
    if (this.drawn === 2) throw SECOND_TRY;
    const step = this.drawn++ === 0 ? 0.7548776662466927 : 0.5698402909980532;
    return (0.5 + this.pair * step) % 1;
  }

  /** The count of the next pair's first try; undefined where the try is rejected. */
  attempt(mean: number): number | undefined {
    this.pair++;
    this.drawn = 0;
    try {
      return this.poisson(mean);
    } catch (error) {
      if (error === SECOND_TRY) return undefined;
      throw error;
    }
  }
}

/** One object for all, because an error collects its stack when it is made. */
const SECOND_TRY = new Error('second try');

/** One draw for each of n items. */
function items(n: number, random: CounterRandom, one: (random: CounterRandom) => number): Float64Array {
  const samples = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    random.start(i);
    samples[i] = one(random);
  }
  return samples;
}

/** Largest distance between the distribution function of a sample and that of a law. */
function ksDistance(samples: Float64Array, cdf: (x: number) => number): number {
  const sorted = samples.slice().sort();
  let distance = 0;
  sorted.forEach((x, i) => {
    const p = cdf(x);
    distance = Math.max(distance, p - i / sorted.length, (i + 1) / sorted.length - p);
  });
  return distance;
}

function chiSquare(observed: Float64Array, expected: Float64Array): number {
  return observed.reduce((sum, count, i) => sum + (count - expected[i]) ** 2 / expected[i], 0);
}

/** A chi-square that chance would bring: neither end of its distribution holds it with less than 1e-4. Source
 * of the distribution function: jstat 1.9.6. */
function expectPlausible(value: number, degreesOfFreedom: number): void {
  const p = jstat.chisquare.cdf(value, degreesOfFreedom);
  expect(p).toBeGreaterThan(1e-4);
  expect(p).toBeLessThan(1 - 1e-4);
}

/** P(count <= k) = 1 - P(k + 1, mean), P the regularised incomplete gamma function (Abramowitz and Stegun
 * 26.4.21, from memory), as computed by jstat 1.9.6. */
function poissonCdf(k: number, mean: number): number {
  return 1 - jstat.lowRegGamma(k + 1, mean);
}

/** Bins of counts with at least 0.5 % and 25 draws each: `last` count of each bin and its share of n. */
function poissonBins(mean: number, n: number): { last: number[]; expected: Float64Array } {
  const least = Math.max(0.005, 25 / n);
  const step = Math.max(1, Math.floor(Math.sqrt(mean) / 10));
  const last: number[] = [];
  const shares: number[] = [];
  let below = 0;
  for (let k = Math.max(0, Math.floor(mean - 5 * Math.sqrt(mean))); 1 - below > 2 * least; k += step) {
    const p = poissonCdf(k, mean);
    if (p - below < least) continue;
    last.push(k);
    shares.push(p - below);
    below = p;
  }
  last.push(Number.POSITIVE_INFINITY);
  shares.push(1 - below);
  return { last, expected: Float64Array.from(shares, (share) => share * n) };
}
