/** Concave mirrors, an object at infinity, and the ellipsoid without spherical aberration.
 * Source: Schroeder, Astronomical Optics; Welford, Aberrations of Optical Systems; Born and Wolf, Principles
 * of Optics, 4.2.3 (cited from memory).
 */
import { describe, expect, test } from 'vitest';
import { referenceSums } from '../../src/prescription/coefficients.js';
import { launch, Ray, trace } from '../../src/prescription/exact.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { FieldTracer } from '../../src/prescription/opd.js';
import type { Prescription, Surface } from '../../src/prescription/prescription.js';
import { wavesFromSums } from '../../src/prescription/seidel.js';
import { D_LINE, degrees } from '../prescription/lenses.js';

function mirror(conic: number, stopZ: number, overrides: Partial<Prescription> = {}): Prescription {
  const surface: Surface = { radiusMm: -200, conic, mirror: true };
  return {
    name: 'mirror',
    wavelengthNm: D_LINE,
    surfaces: stopZ === 0 ? [{ ...surface, stop: true }] : [{ stop: true, thicknessMm: -stopZ }, surface],
    aperture: { entrancePupilMm: 40 },
    field: { halfAngleDeg: degrees(0.01) },
    ...overrides,
  };
}

const sums = (lens: Prescription) => {
  const { S_I, S_II, S_III, S_IV, S_V } = referenceSums(lensModel(lens)).total;
  return [S_I, S_II, S_III, S_IV, S_V];
};

describe('concave mirror, R -200, y 20, tan field 0.01', () => {
  test.each<[string, number, number, number[]]>([
    ['sphere, stop at the mirror', 0, 0, [0.04, -0.004, 0.0004, -0.0004, 0]],
    ['paraboloid, stop at the mirror', -1, 0, [0, -0.004, 0.0004, -0.0004, 0]],
    ['sphere, stop at its centre', 0, -200, [0.04, 0, 0, -0.0004, 0]],
    ['paraboloid, stop at its focus', -1, -100, [0, -0.004, 0, -0.0004, 1e-5]],
  ])('%s', (_, conic, stopZ, expected) => {
    sums(mirror(conic, stopZ)).forEach((value, i) => {
      // 1e-9 relative; zeros are differences of terms of the size of 0.04
      expect(Math.abs(value - expected[i])).toBeLessThan(1e-9 * Math.max(Math.abs(expected[i]), 1e-4));
    });
  });

  test('closed forms in the f-number: W040 = f/(512 N^4), W131 = -f theta/(32 N^3), W222 = D^2 theta^2/(8 f), S_IV = -H^2/f', () => {
    const model = lensModel(mirror(0, 0));
    const total = referenceSums(model).total;
    const waves = wavesFromSums(total, 1e6); // counted in mm
    const { workingFNumber: N, focalLengthMm: f, lagrangeMm: H } = model.reference.paraxial;
    expect(Math.abs(f - 100)).toBeLessThan(1e-12 * 100);
    expect(N).toBeCloseTo(2.5, 12);
    expect(Math.abs(waves.W040 / (f / (512 * N ** 4)) - 1)).toBeLessThan(1e-9);
    expect(Math.abs(waves.W131 / ((-f * 0.01) / (32 * N ** 3)) - 1)).toBeLessThan(1e-9);
    expect(Math.abs(waves.W222 / ((40 ** 2 * 0.01 ** 2) / (8 * f)) - 1)).toBeLessThan(1e-9);
    expect(Math.abs(total.S_IV / ((-H * H) / f) - 1)).toBeLessThan(1e-9);
  });

  test('exact marginal ray of the sphere crosses the axis 99.4962184741 before it', () => {
    const { system } = lensModel(mirror(0, 0)).reference;
    const ray = new Ray();
    launch(ray, system, 0, 0, 20);
    expect(trace(ray, system)).toBe(true);
    const crossing = ray.z - (ray.y * ray.N) / ray.M;
    expect(Math.abs(crossing + 99.49621847407879)).toBeLessThan(1e-9);
    // R - R / (2 cos i), sin i = y / R
    expect(Math.abs(crossing + 200 - 100 / Math.sqrt(1 - 0.01))).toBeLessThan(1e-9);
  });

  test('a paraboloid has no spherical aberration at any aperture', () => {
    const tracer = new FieldTracer(lensModel(mirror(-1, 0, { aperture: { fNumber: 0.6 } })).reference, 0);
    for (const rho of [0.2, 0.5, 0.8, 1]) expect(Math.abs(tracer.wavefrontMm(rho, 0))).toBeLessThan(1e-12); // mm; rounding of paths of 100 mm is 1e-14
  });
});

describe('refracting ellipsoid k = -1/n^2, R 50, n 1.5, entrance pupil 20 in front, y 10, tan field 0.1', () => {
  // the image lies in the glass: a flat exit at the image adds nothing, there y is 0
  const ellipsoid = (conic: number): Prescription => ({
    name: 'ellipsoid',
    wavelengthNm: D_LINE,
    surfaces: [
      { stop: true, thicknessMm: 20 },
      { radiusMm: 50, conic, glass: { n: 1.5 }, thicknessMm: 150 },
      { thicknessMm: 0 },
    ],
    aperture: { entrancePupilMm: 20 },
    field: { halfAngleDeg: degrees(0.1) },
  });

  test.each<[string, number, number[]]>([
    [
      'ellipsoid',
      -1 / 1.5 ** 2,
      [0, 0.008888888888888889, 0.008, 0.006666666666666667, 0.010622222222222222],
    ],
    [
      'sphere',
      0,
      [
        0.017777777777777778, 0.012444444444444444, 0.00871111111111111, 0.006666666666666667,
        0.010764444444444445,
      ],
    ],
  ])('%s: sums', (_, conic, expected) => {
    sums(ellipsoid(conic)).forEach((value, i) => {
      expect(Math.abs(value - expected[i])).toBeLessThan(1e-9 * 0.01);
    });
  });

  test('the exact ray at y 10 crosses the axis at 150, as every other does', () => {
    const { system } = lensModel(ellipsoid(-1 / 1.5 ** 2)).reference;
    const ray = new Ray();
    for (const y of [1, 10, 30]) {
      launch(ray, system, 0, 0, y);
      expect(trace(ray, system, 2)).toBe(true);
      expect(Math.abs(ray.z - (ray.y * ray.N) / ray.M - 150)).toBeLessThan(1e-9);
    }
  });
});
