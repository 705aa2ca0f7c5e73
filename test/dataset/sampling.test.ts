import jstat from 'jstat';
import { describe, expect, it, test } from 'vitest';
import { ValueSampler } from '../../src/dataset/sampling.js';
import type { Distribution } from '../../src/files/load-recipe.js';

const COUNT = 4000;

/** The values of each key over the pictures. */
function sample(
  vary: Record<string, Distribution>,
  correlated: { keys: string[]; matrix: number[][] }[] = [],
  seed = 7,
): Record<string, number[]> {
  const sampler = new ValueSampler({
    seed,
    vary: Object.entries(vary).map(([key, distribution]) => ({ key, distribution })),
    correlated,
  });
  const values: Record<string, number[]> = Object.fromEntries(Object.keys(vary).map((key) => [key, []]));
  for (let picture = 0; picture < COUNT; picture++) {
    for (const { key, value } of sampler.values(picture)) values[key].push(value);
  }
  return values;
}

/** Largest distance of the sample's distribution function from the closed form, times the root of the count.
 * Under the closed form it passes 1.95 with a probability of 0.001: 2 exp(-2 x^2).
 * Source: A. Kolmogorov (1933) and N. Smirnov (1948), as in any handbook of statistics (from memory) */
function kolmogorovSmirnov(values: readonly number[], cdf: (x: number) => number): number {
  const sorted = [...values].sort((a, b) => a - b);
  let largest = 0;
  for (const [index, value] of sorted.entries()) {
    const share = cdf(value);
    largest = Math.max(largest, share - index / sorted.length, (index + 1) / sorted.length - share);
  }
  return largest * Math.sqrt(sorted.length);
}

const UNIFORM = { kind: 'uniform', low: -25, high: 25 } as const;
const NORMAL = { kind: 'normal', mean: 1.1, deviation: 0.3 } as const;
const TRUNCATED = { ...NORMAL, within: [1, 2] } as const;
const LOG = { kind: 'log_uniform', low: 1500, high: 8000 } as const;

const CDFS = {
  uniform: (x: number) => (x + 25) / 50,
  normal: (x: number) => jstat.normal.cdf(x, 1.1, 0.3),
  truncated: (x: number) => {
    const below = (value: number) => jstat.normal.cdf(value, 1.1, 0.3);
    return (below(x) - below(1)) / (below(2) - below(1));
  },
  log: (x: number) => Math.log(x / 1500) / Math.log(8000 / 1500),
};

describe('sampled values follow their distributions', () => {
  const values = sample({ uniform: UNIFORM, normal: NORMAL, truncated: TRUNCATED, log: LOG });
  test.each(Object.entries(CDFS))('%s', (key, cdf) => {
    expect(kolmogorovSmirnov(values[key], cdf)).toBeLessThan(1.95);
  });

  it('and would not follow another one: the test can fail', () => {
    expect(kolmogorovSmirnov(values.normal, (x) => jstat.normal.cdf(x, 1.1, 0.34))).toBeGreaterThan(1.95);
  });

  it('and not each other', () => {
    // of independent samples the correlation lies within 4 / sqrt(n) but once in 16000
    expect(Math.abs(correlation(values.uniform, values.normal))).toBeLessThan(4 / Math.sqrt(COUNT));
  });

  it('a choice takes each of its values as often', () => {
    const { c } = sample({ c: { kind: 'choice', values: [1, 2, 5] } });
    const chi2 = [1, 2, 5]
      .map((value) => c.filter((x) => x === value).length)
      .reduce((sum, n) => sum + (n - COUNT / 3) ** 2 / (COUNT / 3), 0);
    expect(jstat.chisquare.cdf(chi2, 2)).toBeLessThan(0.999);
  });
});

describe('groups', () => {
  const matrix = [
    [1, 0.8, -0.3],
    [0.8, 1, 0],
    [-0.3, 0, 1],
  ];
  const keys = ['normal', 'other', 'third'];
  const values = sample({ normal: NORMAL, other: NORMAL, third: NORMAL, log: LOG, uniform: UNIFORM }, [
    { keys, matrix },
    {
      keys: ['log', 'uniform'],
      matrix: [
        [1, 0.7],
        [0.7, 1],
      ],
    },
  ]);

  it('have the correlations asked for, and every key keeps its distribution', () => {
    for (const [i, a] of keys.entries()) {
      for (const [j, b] of keys.entries()) {
        // the standard error of a correlation r is (1 - r^2) / sqrt(n)
        expect(Math.abs(correlation(values[a], values[b]) - matrix[i][j])).toBeLessThan(4 / Math.sqrt(COUNT));
      }
    }
    expect(kolmogorovSmirnov(values.other, CDFS.normal)).toBeLessThan(1.95);
    expect(kolmogorovSmirnov(values.log, CDFS.log)).toBeLessThan(1.95);
    expect(kolmogorovSmirnov(values.uniform, CDFS.uniform)).toBeLessThan(1.95);
  });

  it('of other distributions have the rank correlation of a Gaussian copula, (6/pi) asin(r/2)', () => {
    // Source: W. Kruskal, Ordinal measures of association, J. Am. Stat. Assoc. 53 (1958) 814 (from memory)
    const expected = (6 / Math.PI) * Math.asin(0.35);
    const found = correlation(ranks(values.log), ranks(values.uniform));
    expect(Math.abs(found - expected)).toBeLessThan(4 / Math.sqrt(COUNT));
  });
});

describe('a value depends on its own key alone', () => {
  const alone = sample({ normal: NORMAL });

  it('not on other keys, nor on their order', () => {
    expect(sample({ uniform: UNIFORM, normal: NORMAL, log: LOG }).normal).toEqual(alone.normal);
  });

  it('but on the seed', () => {
    expect(sample({ normal: NORMAL }, [], 8).normal[0]).not.toBe(alone.normal[0]);
  });

  it('and on the picture, not on those before it', () => {
    const sampler = new ValueSampler({
      seed: 7,
      vary: [{ key: 'normal', distribution: NORMAL }],
      correlated: [],
    });
    expect(sampler.values(3000)[0].value).toBe(alone.normal[3000]);
    expect(sampler.values(2)[0].value).toBe(alone.normal[2]);
    expect(sampler.values(2, 1)[0].value).not.toBe(alone.normal[2]); // drawn anew
    expect(sampler.values(2)[0].value).toBe(alone.normal[2]);
  });
});

function correlation(a: readonly number[], b: readonly number[]): number {
  const [meanA, meanB] = [jstat.mean(a), jstat.mean(b)];
  const product = a.reduce((sum, x, i) => sum + (x - meanA) * (b[i] - meanB), 0) / a.length;
  return product / Math.sqrt(jstat.variance(a) * jstat.variance(b));
}

function ranks(values: readonly number[]): number[] {
  const order = [...values.keys()].sort((a, b) => values[a] - values[b]);
  const rank = new Array<number>(values.length);
  for (const [at, index] of order.entries()) rank[index] = at;
  return rank;
}
