/** Thin lens: third-order sums against bending and conjugate.
 * Source: Coddington (1829); Jenkins and White, Fundamentals of Optics, ch. 9; Welford, Aberrations of
 * Optical Systems (all cited from memory).
 */
import { describe, expect, test } from 'vitest';
import { referenceSums } from '../../src/prescription/coefficients.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { degrees, thinLensSurfaces } from '../prescription/lenses.js';

const F = 100;
const Y = 10;
const SLOPE = 0.05;

function thinLensSums(n: number, q: number, objectDistanceMm?: number, slope = SLOPE) {
  const [front, back] = thinLensSurfaces({ n }, n, q, F);
  const model = lensModel({
    name: 'thin lens',
    wavelengthNm: 587.5618,
    surfaces: [
      { ...front, stop: true },
      { ...back, thicknessMm: undefined },
    ],
    objectDistanceMm,
    aperture: { entrancePupilMm: 2 * Y },
    field: { halfAngleDeg: degrees(slope) },
  });
  return referenceSums(model).total;
}

describe('thin lens of f 100 at y 10, chief slope 0.05, stop at the lens', () => {
  // [n, q, p, object distance, S_I, S_II] in mm; S_III = H^2/f, S_IV = H^2/(n f), S_V = 0
  const table: [number, number, number, number | undefined, number, number][] = [
    [1.5, -2, -1, undefined, 0.19333333333333333, -0.023333333333333334],
    [1.5, -1, -1, undefined, 0.09, -0.015],
    [1.5, -0.5, -1, undefined, 0.05583333333333333, -0.010833333333333334],
    [1.5, 0, -1, undefined, 0.03333333333333333, -0.006666666666666667],
    [1.5, 0.5, -1, undefined, 0.0225, -0.0025],
    [1.5, 0.7142857142857143, -1, undefined, 0.02142857142857143, -0.0007142857142857143],
    [1.5, 0.8, -1, undefined, 0.0216, 0],
    [1.5, 1, -1, undefined, 0.023333333333333334, 0.0016666666666666668],
    [1.5, 2, -1, undefined, 0.06, 0.01],
    [1.5, 0, 0, 200, 0.0225, 0],
    [1.5, 0.5, 0, 200, 0.028333333333333332, 0.004166666666666667],
    [1.5, 0.5, -0.5, 400, 0.022708333333333334, 0.0008333333333333334],
    [1.7, 1, -1, undefined, 0.013601440576230492, -0.0007983193277310924],
  ];
  test.each(table)('n %f q %f p %f', (n, q, p, objectDistanceMm, spherical, coma) => {
    const sums = thinLensSums(n, q, objectDistanceMm);
    const H = Y * SLOPE;
    // 1e-9 relative; where the value is 0, of the other sums' size
    const close = (value: number, expected: number) =>
      expect(Math.abs(value - expected)).toBeLessThan(1e-9 * Math.max(Math.abs(expected), 1e-3));
    close(sums.S_I, spherical);
    close(sums.S_II, coma);
    close(sums.S_III, (H * H) / F);
    close(sums.S_IV, (H * H) / (n * F));
    close(sums.S_V, 0);
    // the formula itself, from n, q and p
    const formula =
      (Y ** 4 / (4 * F ** 3 * n * (n - 1))) *
      (((n + 2) / (n - 1)) * q * q + 4 * (n + 1) * p * q + (3 * n + 2) * (n - 1) * p * p + n ** 3 / (n - 1));
    close(sums.S_I, formula);
    close(sums.S_II, ((Y ** 2 * H) / (2 * F ** 2)) * (((n + 1) / (n * (n - 1))) * q + ((2 * n + 1) / n) * p));
  });
});

describe('best form for a distant object', () => {
  // [n, q of least spherical aberration, q without coma, LSA / (y^2/f) at the least]
  test.each([
    [1.4, 0.5647058823529412, 0.6333333333333333, 1.4797794117647058],
    [1.5, 0.7142857142857143, 0.8, 1.0714285714285714],
    [1.6, 0.8666666666666667, 0.9692307692307692, 0.8333333333333334],
    [1.7, 1.0216216216216216, 1.1407407407407408, 0.6798124655267512],
    [1.8, 1.1789473684210525, 1.3142857142857143, 0.5736019736842105],
    [1.9, 1.3384615384615384, 1.4896551724137932, 0.4962013295346629],
  ])('n %f', (n, qLeast, qZeroComa, lsa) => {
    // S_I is a parabola in q and S_II a line: three points give the one's vertex, two the other's root
    const [minus, zero, plus] = [-1, 0, 1].map((q) => thinLensSums(n, q));
    const vertex = (minus.S_I - plus.S_I) / (2 * (minus.S_I - 2 * zero.S_I + plus.S_I));
    const root = -zero.S_II / (plus.S_II - zero.S_II);
    expect(Math.abs(vertex / qLeast - 1)).toBeLessThan(1e-9);
    expect(Math.abs(root / qZeroComa - 1)).toBeLessThan(1e-9);
    const longitudinal = thinLensSums(n, qLeast).S_I * (F ** 3 / (2 * Y ** 4)); // LSA = S_I / (2 u'^2), u' = y/f
    expect(Math.abs(longitudinal / lsa - 1)).toBeLessThan(1e-9);
  });

  test('the best form is plano-convex at n 1.68614066', () => {
    const [minus, zero, plus] = [-1, 0, 1].map((q) => thinLensSums(1.6861406616345072, q));
    const vertex = (minus.S_I - plus.S_I) / (2 * (minus.S_I - 2 * zero.S_I + plus.S_I));
    expect(Math.abs(vertex - 1)).toBeLessThan(1e-9);
  });

  test.each([
    [0, 5 / 3],
    [1, 7 / 6],
    [-1, 9 / 2],
    [5 / 7, 15 / 14],
  ])('LSA / (y^2/f) of n 1.5 and q %f', (q, expected) => {
    expect(Math.abs((thinLensSums(1.5, q).S_I * F ** 3) / (2 * Y ** 4) / expected - 1)).toBeLessThan(1e-9);
  });
});
