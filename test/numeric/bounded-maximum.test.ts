import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { goldenMaximum } from '../../src/numeric/bounded-maximum.js';
import { nestedMaximum } from '../../src/numeric/nested-maximum.js';

describe('goldenMaximum', () => {
  it('finds the top of a parabola and of a crease, wherever it lies', () => {
    const place = fc.double({ min: -2, max: 3, noNaN: true });
    fc.assert(
      fc.property(place, (top) => {
        for (const f of [(x: number) => -((x - top) ** 2), (x: number) => -Math.abs(x - top)]) {
          const { x, value } = goldenMaximum(f, -2, 3, 1e-6);
          expect(Math.abs(x - top)).toBeLessThan(2e-6);
          expect(value).toBe(f(x));
        }
      }),
    );
  });

  it('needs no exact value at or below the floor', () => {
    const f = (x: number) => -((x - 0.3) ** 2);
    const lazy = (x: number, floor: number) => (f(x) <= floor ? floor - 1 : f(x));
    expect(goldenMaximum(lazy, 0, 1, 1e-6)).toEqual(goldenMaximum(f, 0, 1, 1e-6));
  });
});

describe('nestedMaximum', () => {
  const range = (from: number, to: number, count: number, tolerance = 1e-4) => ({
    samples: Array.from({ length: count }, (_, i) => from + ((to - from) * i) / (count - 1)),
    tolerance,
  });

  it('follows a crease that runs askew to its top', () => {
    // two planes meet along y = x; on that crease the highest point is at (0.7, 0.7)
    const f = ([x, y]: readonly number[]) => Math.min(10 * (y - x), 10 * (x - y)) - 0.1 * (x - 0.7) ** 2;
    const { place } = nestedMaximum(f, [range(0, 1, 3), range(-1, 2, 4)], [0.5, 0]);
    // the inner search leaves 10 x 1e-4 of height, which a parabola of 0.1 takes 0.1 to lose
    expect(place[0]).toBeGreaterThan(0.55);
    expect(place[0]).toBeLessThan(0.85);
    expect(Math.abs(place[1] - place[0])).toBeLessThan(2e-4);
  });

  it('takes the best sample where the search between finds nothing better', () => {
    expect(nestedMaximum(([x]) => -x, [range(1, 2, 3)], [1])).toEqual({ place: [1], value: -1 });
  });

  it('searches three ranges in turn', () => {
    const f = ([x, y, z]: readonly number[]) =>
      -((x - 0.2) ** 2) - (y + 0.4) ** 2 - (z - 0.9) ** 2 + 0.3 * x * y;
    const { place } = nestedMaximum(f, [range(-1, 1, 5), range(-1, 1, 5), range(-1, 1, 5)], [0, 0, 0]);
    // the zero of the gradient: 2x - 0.3y = 0.4, 2y - 0.3x = -0.8, z = 0.9
    const expected = [0.14322, -0.37852, 0.9];
    for (const [i, value] of expected.entries()) expect(Math.abs(place[i] - value)).toBeLessThan(2e-3);
  });
});
