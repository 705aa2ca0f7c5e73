import { describe, expect, it, test } from 'vitest';
import { extremes, isOutOfReach, valueAt } from '../../src/dataset/distribution.js';
import type { Distribution } from '../../src/files/load-recipe.js';
import { normalCdf } from '../../src/numeric/normal.js';

const NORMAL = { kind: 'normal', mean: 3, deviation: 2 } as const;

describe('valueAt', () => {
  test.each<[Distribution, number, number]>([
    [{ kind: 'uniform', low: -2, high: 6 }, 0.25, 0],
    [{ kind: 'log_uniform', low: 10, high: 1000 }, 0.5, 100],
    [{ kind: 'fixed', value: 7 }, 0.9, 7],
    [{ kind: 'choice', values: [4, 5, 9] }, 0.34, 5],
    [{ kind: 'choice', values: [4, 5, 9] }, 1 - 2 ** -53, 9],
    [NORMAL, 0.975, 3 + 2 * 1.9599639845400545],
    [{ ...NORMAL, within: [3, 100] }, 0.5, 3 + 2 * 0.6744897501960817], // the median of the upper half: the upper quartile
    [{ ...NORMAL, deviation: 0 }, 0.7, 3],
  ])('%j at %d', (distribution, u, expected) => {
    expect(valueAt(distribution, u)).toBeCloseTo(expected, 12);
  });

  it('stays within its limits to the last bit, far out in either tail', () => {
    for (const within of [
      [3 - 20, 3 - 16],
      [3 + 16, 3 + 16.001],
      [2, 4],
    ] as const) {
      for (const u of [2 ** -53, 0.1, 0.5, 0.9, 1 - 2 ** -53]) {
        const value = valueAt({ ...NORMAL, within }, u);
        expect(value).toBeGreaterThanOrEqual(within[0]);
        expect(value).toBeLessThanOrEqual(within[1]);
      }
    }
  });

  it('divides the tail evenly there, too', () => {
    const within = [3 + 2 * 6, 3 + 2 * 7] as const; // six to seven deviations out
    const value = valueAt({ ...NORMAL, within }, 0.5);
    const share = (x: number) => normalCdf(-(x - 3) / 2);
    const middle = (share(within[0]) + share(within[1])) / 2;
    expect(share(value) / middle).toBeCloseTo(1, 9);
  });

  it('rises with u', () => {
    const all: Distribution[] = [
      { kind: 'uniform', low: 0, high: 1 },
      { kind: 'log_uniform', low: 1, high: 9 },
      NORMAL,
      { ...NORMAL, within: [0, 4] },
    ];
    for (const distribution of all) {
      const values = Array.from({ length: 99 }, (_, i) => valueAt(distribution, (i + 1) / 100));
      expect(values).toEqual([...values].sort((a, b) => a - b));
    }
  });
});

test('extremes', () => {
  expect(extremes({ kind: 'choice', values: [3, 1, 2] })).toEqual([1, 3]);
  expect(extremes({ kind: 'log_uniform', low: 1, high: 9 })).toEqual([1, 9]);
  expect(extremes({ kind: 'fixed', value: 2 })).toEqual([2, 2]);
  expect(extremes(NORMAL)).toEqual([-5, 11]);
  expect(extremes({ ...NORMAL, within: [0, 4] })).toEqual([0, 4]);
});

test('limits that no value meets', () => {
  expect(isOutOfReach({ ...NORMAL, within: [70, 80] })).toBe(true);
  expect(isOutOfReach({ ...NORMAL, within: [-80, -70] })).toBe(true);
  expect(isOutOfReach({ ...NORMAL, within: [50, 80] })).toBe(false);
  expect(isOutOfReach({ ...NORMAL, deviation: 0, within: [4, 8] })).toBe(true);
  expect(isOutOfReach(NORMAL)).toBe(false);
});
