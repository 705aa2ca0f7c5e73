import { describe, expect, test } from 'vitest';
import { clearPupil } from '../../src/prescription/clear-pupil.js';
import { exactField } from '../../src/prescription/exact-field.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { FieldTracer } from '../../src/prescription/opd.js';
import type { Prescription } from '../../src/prescription/prescription.js';
import { packhouseLens } from './lenses.js';

const pupil = (lens: Prescription, h: number) => clearPupil(new FieldTracer(lensModel(lens).reference, h));

/** A round hole of `semiDiameterMm` 10 mm in front of a stop of radius 5: at the field tan = 1 it sits
 * `offset` stop radii off. */
const holeAndStop = (semiDiameterMm: number): Prescription => ({
  name: 'hole',
  wavelengthNm: 550,
  surfaces: [
    { thicknessMm: 10, semiDiameterMm },
    { stop: true, thicknessMm: 0 },
    { radiusMm: 100, thicknessMm: 0, glass: { n: 1.5 } },
    { radiusMm: -100 },
  ],
  aperture: { entrancePupilMm: 10 },
  field: { halfAngleDeg: 45 },
});

/** Area common to two circles of radii 1 and r at distance d, over pi. */
function overlap(r: number, d: number): number {
  if (d <= Math.abs(1 - r)) return Math.min(1, r) ** 2;
  if (d >= 1 + r) return 0;
  const a = Math.acos((d * d + 1 - r * r) / (2 * d));
  const b = Math.acos((d * d + r * r - 1) / (2 * d * r));
  return (a + r * r * b - d * Math.sin(a)) / Math.PI;
}

describe('vignetting', () => {
  test.each([
    [6, 0.1],
    [6, 0.3],
    [6, 0.8],
    [4.5, 0.05],
    [4.5, 0.4],
    [20, 0.2],
    [5, 0.6],
  ])('hole of %f at tan field %f: the share of two overlapping circles', (semiDiameterMm, h) => {
    const open = pupil(holeAndStop(semiDiameterMm), h);
    // 24 spokes in half a turn: corners of the outline fall between them
    expect(Math.abs((open?.share ?? 0) - overlap(semiDiameterMm / 5, (10 * h) / 5))).toBeLessThan(4e-3);
  });

  test('no light at all', () => {
    expect(pupil(holeAndStop(3), 0.9)).toBeUndefined();
  });

  test('nothing cut: the whole stop', () => {
    expect(pupil(packhouseLens(), 0)?.share).toBeCloseTo(1, 12);
    expect(pupil(packhouseLens(), 0.3)?.share).toBeCloseTo(1, 12);
  });
});

test('samples integrate polynomials over the open stop', () => {
  const { samples } = pupil(packhouseLens(), 0.3) ?? { samples: undefined };
  if (samples === undefined) throw new Error('dark');
  const mean = (f: (m: number, s: number) => number) =>
    samples.m.reduce((sum, m, i) => sum + samples.weight[i] * f(m, samples.s[i]), 0);
  // mean of rho^2k cos^2j over the unit circle
  expect(mean(() => 1)).toBeCloseTo(1, 13);
  expect(mean((m) => m)).toBeCloseTo(0, 13);
  expect(mean((m, s) => m * m + s * s)).toBeCloseTo(1 / 2, 13);
  expect(mean((m, s) => (m * m + s * s) ** 4)).toBeCloseTo(1 / 5, 13);
  expect(mean((m) => m ** 4)).toBeCloseTo(3 / 8 / 3, 13);
});

describe('illuminance', () => {
  const thin = (overrides: Partial<Prescription> = {}): Prescription => ({
    name: 'thin lens',
    wavelengthNm: 550,
    surfaces: [{ radiusMm: 100, thicknessMm: 0, glass: { n: 1.5 }, stop: true }, { radiusMm: -100 }],
    aperture: { fNumber: 50 },
    field: { halfAngleDeg: 45 },
    ...overrides,
  });
  const relative = (lens: Prescription, h: number) => {
    const { reference } = lensModel(lens);
    return exactField(reference, h).illuminance / exactField(reference, 0).illuminance;
  };

  // the stop in front of a thin lens, so neither vignetting nor distortion: the law of cos^4.
  // Source: Born and Wolf, Principles of Optics, 4.8.3 (cited from memory)
  test.each([5, 10, 20])('of a thin lens at %f degrees falls as cos^4', (degrees) => {
    const angle = (degrees * Math.PI) / 180;
    // the two vertices coincide but not the surfaces: the sag of the stop's rim (0.005 mm of 100) shifts and
    // distorts by about 1e-4
    expect(Math.abs(relative(thin(), Math.tan(angle)) / Math.cos(angle) ** 4 - 1)).toBeLessThan(5e-4);
  });

  test('with a near object, too', () => {
    const near = thin({ objectDistanceMm: 200, field: { objectHeightMm: 200 } });
    const angle = Math.atan(0.3);
    expect(Math.abs(relative(near, 0.3) / Math.cos(angle) ** 4 - 1)).toBeLessThan(5e-4);
  });

  test('barrel distortion gathers light: the illuminance is that of cos^4 over the change of area', () => {
    // a paraboloid with its stop in the focus images tan(field) with known distortion; the stop is outside
    // the lens, its size that of the beam
    const lens: Prescription = {
      name: 'mirror',
      wavelengthNm: 550,
      surfaces: [
        { stop: true, thicknessMm: 100 },
        { radiusMm: -200, conic: -1, mirror: true },
      ],
      aperture: { fNumber: 40 },
      field: { halfAngleDeg: 15 },
    };
    const { reference } = lensModel(lens);
    const at = (h: number) => exactField(reference, h);
    const { chiefHeightMm, idealHeightMm } = at(1);
    const slope =
      (at(1).chiefHeightMm - at(0.98).chiefHeightMm) / (at(1).idealHeightMm - at(0.98).idealHeightMm);
    const stretch = (chiefHeightMm / idealHeightMm) * slope;
    expect(Math.abs(stretch - 1)).toBeGreaterThan(0.01); // there is something to see
    const expected = Math.cos((15 * Math.PI) / 180) ** 4 / stretch;
    // the slope above is taken over 2 % of the field
    expect(Math.abs(relative(lens, 1) / expected - 1)).toBeLessThan(2e-3);
  });
});
