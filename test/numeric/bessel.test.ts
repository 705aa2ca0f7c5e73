import { describe, expect, it } from 'vitest';
import { besselJ0J1Squares } from '../../src/numeric/bessel.js';

describe('J0^2 + J1^2', () => {
  // Source: M. Abramowitz and I. A. Stegun, Handbook of Mathematical Functions, table 9.1 (from memory)
  it.each([
    [0, 1, 0],
    [1, 0.7651976866, 0.4400505857],
    [2, 0.2238907791, 0.5767248078],
    [5, -0.1775967713, -0.3275791376],
    [10, -0.2459357645, 0.0434727462],
  ])('at %d', (x, j0, j1) => {
    expect(besselJ0J1Squares(x)).toBeCloseTo(j0 ** 2 + j1 ** 2, 9); // the table has 10 digits
  });

  // Source: Born and Wolf, Principles of Optics, 8.5.2: the energy within the dark rings of an Airy pattern (from memory)
  it.each([
    [1.21966989, 0.83778487],
    [2.23313059, 0.90993054],
    [3.23831548, 0.93764747],
  ])('leaves the energy within the dark ring at %d lambda N', (radius, energy) => {
    expect(1 - besselJ0J1Squares(Math.PI * radius)).toBeCloseTo(energy, 7);
  });

  it('goes over into its asymptotic form', () => {
    // the next term is cos(2x) / (2x) of the first
    for (const x of [64.001, 80, 300]) {
      const wave = (k: number, n: number) => Math.cos(n * k - x * Math.sin(k));
      const mean = (n: number) => {
        let sum = 0;
        for (let i = 0; i < 2000; i++) sum += wave((Math.PI * (i + 0.5)) / 2000, n) / 2000;
        return sum;
      };
      expect(Math.abs(besselJ0J1Squares(x) - mean(0) ** 2 - mean(1) ** 2)).toBeLessThan(
        1 / (Math.PI * x * x),
      );
    }
  });
});
