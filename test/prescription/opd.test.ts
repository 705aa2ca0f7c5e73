import { describe, expect, test } from 'vitest';
import { InputError } from '../../src/errors.js';
import { thirdOrderWaves } from '../../src/prescription/coefficients.js';
import { launch, Ray, trace } from '../../src/prescription/exact.js';
import { type LensModel, lensModel } from '../../src/prescription/lens-model.js';
import { FieldTracer } from '../../src/prescription/opd.js';
import type { Prescription } from '../../src/prescription/prescription.js';
import { doublet, packhouseLens, singlet, sixSurfaceLens } from './lenses.js';

/** W of the five terms in mm, image shifts included. */
function thirdOrderMm(model: LensModel, h: number, m: number, s: number): number {
  const { W040, W131, W222, W220, W311, W020 } = thirdOrderWaves(model, model.reference);
  const rho2 = m * m + s * s;
  const waves =
    W040 * rho2 ** 2 +
    W131 * h * rho2 * m +
    W222 * h * h * m * m +
    (W220 * h * h + W020) * rho2 +
    W311 * h ** 3 * m;
  return waves * model.prescription.wavelengthNm * 1e-6;
}

/** Lens with aperture and field shrunk until only the third order is left. */
function small(lens: Prescription, scale = 1 / 40): LensModel {
  const { workingFNumber, imageHeightMm } = lensModel(lens).reference.paraxial;
  const aperture = { fNumber: workingFNumber / scale };
  return lensModel({ ...lens, aperture, field: { imageHeightMm: imageHeightMm * scale } });
}

const POINTS = [
  [1, 0],
  [-1, 0],
  [0, 1],
  [0.5, 0.6],
  [-0.7, 0.2],
];

function expectThirdOrder(model: LensModel, limit: number) {
  for (const h of [0, 0.6, 1]) {
    const tracer = new FieldTracer(model.reference, h);
    for (const [m, s] of POINTS) {
      const size = Math.max(...POINTS.map(([a, b]) => Math.abs(thirdOrderMm(model, 1, a, b))));
      expect(Math.abs(tracer.wavefrontMm(m, s) - thirdOrderMm(model, h, m, s))).toBeLessThan(limit * size);
    }
  }
}

describe('point by point the wavefront of small aperture and field is the five terms', () => {
  test.each<[string, Prescription]>([
    ['singlet', singlet()],
    ['doublet, near object', doublet()],
    ['packing hall lens', packhouseLens()],
    ['six surfaces', sixSurfaceLens()],
    [
      'two mirrors',
      {
        name: 'two mirrors',
        wavelengthNm: 550,
        surfaces: [
          { radiusMm: -300, conic: -1, mirror: true, thicknessMm: -100, stop: true },
          { radiusMm: -180, conic: -3, mirror: true },
        ],
        aperture: { fNumber: 8 },
        field: { halfAngleDeg: 1 },
      },
    ],
    [
      'a lens telecentric on the image side',
      {
        name: 'telecentric',
        wavelengthNm: 550,
        surfaces: [
          { stop: true, thicknessMm: 40 },
          { radiusMm: 40, thicknessMm: 0, glass: { n: 1.5 } },
          { radiusMm: -40 },
        ],
        aperture: { fNumber: 8 },
        field: { halfAngleDeg: 5 },
      },
    ],
    [
      'a relay that images upright',
      {
        name: 'relay',
        wavelengthNm: 550,
        surfaces: [
          { radiusMm: 25, thicknessMm: 0, glass: { n: 1.5 }, stop: true },
          { thicknessMm: 110 },
          { radiusMm: 12, thicknessMm: 0, glass: { n: 1.5 } },
          {},
        ],
        aperture: { fNumber: 20 },
        field: { halfAngleDeg: 0.5 },
      },
    ],
  ])('%s', (_, lens) => {
    // the next order is some 1e-3 at 1/40 for the lens that leans on it most, far less for the others
    expectThirdOrder(small(lens), 3e-3);
  });
});

test('a telecentric lens really has its exit pupil at infinity in that list', () => {
  const lens: Prescription = {
    name: 'telecentric',
    wavelengthNm: 550,
    surfaces: [
      { stop: true, thicknessMm: 40 },
      { radiusMm: 40, thicknessMm: 0, glass: { n: 1.5 } },
      { radiusMm: -40 },
    ],
    aperture: { fNumber: 8 },
    field: { halfAngleDeg: 5 },
  };
  expect(Math.abs(lensModel(lens).reference.paraxial.exitPupilMm)).toBeGreaterThan(1e12);
});

test('defocus of a sensor off the focus: W020 = delta / (8 N^2 lambda)', () => {
  const lens = packhouseLens({ scaleToFocalLengthMm: undefined });
  const { surfaces } = lens;
  const { imageDistanceMm } = lensModel(lens).reference.paraxial;
  const last = { ...surfaces[6], thicknessMm: imageDistanceMm + 0.01 };
  const off = { ...lens, surfaces: [...surfaces.slice(0, 6), last] };
  expect(thirdOrderWaves(lensModel(off), lensModel(off).reference).W020).toBeCloseTo(
    0.01 / (8 * 16 * 550e-6),
    9,
  );
  // f/160: the third order is 1e-3 of the defocus there
  expectThirdOrder(small(off), 3e-3);
});

test('rays land where the slope of the wavefront says: eps = -2 N lambda grad W', () => {
  // exact at any aperture in the direction cosines; in stop coordinates only as the third order allows, so
  // f/40
  const model = small(packhouseLens(), 1 / 10);
  const { system, paraxial } = model.reference;
  const tracer = new FieldTracer(model.reference, 1);
  const ray = new Ray();
  const step = 1e-3;
  for (const [m, s] of POINTS) {
    const slopeM = (tracer.wavefrontMm(m + step, s) - tracer.wavefrontMm(m - step, s)) / (2 * step);
    const slopeS = (tracer.wavefrontMm(m, s + step) - tracer.wavefrontMm(m, s - step)) / (2 * step);
    // paraxial start is good enough for where the ray lands: at f/40 it passes the stop within 1e-3
    const { marginal, chief } = paraxial;
    launch(ray, system, paraxial.fieldScale, s * marginal.y[0], chief.y[0] + m * marginal.y[0]);
    trace(ray, system);
    const reach = (system.thickness[6] - ray.z) / ray.N;
    // field curvature of 3.8 waves, 1e-4 of it at this scale
    const size = 2 * paraxial.workingFNumber * 8 * 3.8 * 550e-6 * 1e-4;
    expect(
      Math.abs(ray.y + ray.M * reach - paraxial.imageHeightMm + 2 * paraxial.workingFNumber * slopeM),
    ).toBeLessThan(0.02 * size);
    expect(Math.abs(ray.x + ray.L * reach + 2 * paraxial.workingFNumber * slopeS)).toBeLessThan(0.02 * size);
  }
});

test('the wavefront is even across the field', () => {
  const tracer = new FieldTracer(lensModel(packhouseLens()).reference, 0.8);
  for (const [m, s] of POINTS)
    expect(Math.abs(tracer.wavefrontMm(m, s) - tracer.wavefrontMm(m, -s))).toBeLessThan(1e-14);
});

test('the chief ray has W = 0 and passes the middle of the stop', () => {
  const { reference } = lensModel(packhouseLens());
  const tracer = new FieldTracer(reference, 1);
  expect(tracer.wavefrontMm(0, 0)).toBe(0);
});

test('a chief ray that cannot pass is an error that names the surface', () => {
  // a field of 80 degrees past a steep ball
  const lens: Prescription = {
    name: 'ball',
    wavelengthNm: 550,
    surfaces: [
      { radiusMm: 5, thicknessMm: 10, glass: { n: 1.5 } },
      { radiusMm: -5, thicknessMm: 12 },
      { stop: true, radiusMm: 4, thicknessMm: 2, glass: { n: 1.7 } },
      { radiusMm: -30 },
    ],
    aperture: { fNumber: 8 },
    field: { halfAngleDeg: 50 },
  };
  const { reference } = lensModel(lens);
  expect(() => new FieldTracer(reference, 1)).toThrow(InputError);
  expect(() => new FieldTracer(reference, 1)).toThrow(/field 1/);
});

test('a rim ray that misses an uncut surface is an error that names it; with a semi-diameter it is vignetted', () => {
  const steep = (semiDiameterMm?: number): Prescription => ({
    name: 'steep',
    wavelengthNm: 550,
    surfaces: [
      { stop: true, thicknessMm: 3 },
      { radiusMm: 6, thicknessMm: 4, glass: { n: 1.5 }, semiDiameterMm },
      {},
    ],
    aperture: { entrancePupilMm: 12.5 },
    field: { halfAngleDeg: 3 },
  });
  const bare = new FieldTracer(lensModel(steep()).reference, 1);
  expect(() => bare.passes(1, 0)).toThrow(
    /surface 2: the ray of field 1 through \(1\.000, 0\.000\) of the stop misses it/,
  );
  expect(() => bare.wavefrontMm(1, 0)).toThrow(InputError);
  expect(bare.passes(0.2, 0)).toBe(true);
  const cut = new FieldTracer(lensModel(steep(3)).reference, 1);
  expect(cut.passes(1, 0)).toBe(false);
  expect(cut.passes(0.2, 0)).toBe(true);
});
