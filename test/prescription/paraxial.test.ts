import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { InputError } from '../../src/errors.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { paraxial } from '../../src/prescription/paraxial.js';
import type { Prescription, Surface } from '../../src/prescription/prescription.js';
import { doublet, packhouseLens, singlet, sixSurfaceLens } from './lenses.js';

const properties = (lens: Prescription) => lensModel(lens).reference.paraxial;
const relative = (value: number, expected: number) => Math.abs(value / expected - 1);

/** A thick biconvex lens with its stop at the first surface. */
const thick = (overrides: Partial<Prescription> = {}): Prescription => ({
  name: 'thick lens',
  wavelengthNm: 550,
  surfaces: [{ radiusMm: 60, thicknessMm: 12, glass: { n: 1.6 }, stop: true }, { radiusMm: -90 }],
  aperture: { fNumber: 6 },
  field: { halfAngleDeg: 5 },
  ...overrides,
});

test('thick lens: power, foci and principal planes', () => {
  // phi = phi1 + phi2 - (t/n) phi1 phi2; planes at f phi2 t/n from the first and -f phi1 t/n from the last
  // vertex.
  // Source: Born and Wolf, Principles of Optics, 4.4.3 (cited from memory)
  const phi1 = 0.6 / 60;
  const phi2 = 0.6 / 90;
  const f = 1 / (phi1 + phi2 - (12 / 1.6) * phi1 * phi2);
  const found = properties(thick());
  expect(relative(found.focalLengthMm, f)).toBeLessThan(1e-14);
  expect(relative(found.frontPrincipalMm, (f * phi2 * 12) / 1.6)).toBeLessThan(1e-12);
  expect(relative(found.rearPrincipalMm, (-f * phi1 * 12) / 1.6)).toBeLessThan(1e-12);
  expect(relative(found.backFocusMm, f * (1 - (phi1 * 12) / 1.6))).toBeLessThan(1e-13);
  expect(relative(found.frontFocusMm, -f * (1 - (phi2 * 12) / 1.6))).toBeLessThan(1e-13);
  expect(relative(found.imageDistanceMm, found.backFocusMm)).toBeLessThan(1e-14);
});

test('near object: lens equation from the principal planes, magnification, height of the object', () => {
  const found = properties(thick({ objectDistanceMm: 300 }));
  const s = 300 + found.frontPrincipalMm;
  const sImage = found.imageDistanceMm - found.rearPrincipalMm;
  expect(Math.abs(1 / s + 1 / sImage - 1 / found.focalLengthMm)).toBeLessThan(1e-15);
  expect(relative(found.magnification, -sImage / s)).toBeLessThan(1e-12);
  expect(relative(found.imageHeightMm / found.objectHeightMm, sImage / s)).toBeLessThan(1e-12);
});

describe('aperture', () => {
  test('entrance pupil, f-number and object NA ask for the same beam', () => {
    const byF = properties(doublet());
    const { entrancePupilRadiusMm } = byF;
    const byPupil = properties(doublet({ aperture: { entrancePupilMm: 2 * entrancePupilRadiusMm } }));
    const angle = Math.atan(entrancePupilRadiusMm / (500 + byF.entrancePupilMm));
    const byNa = properties(doublet({ aperture: { objectNa: Math.sin(angle) } }));
    for (const other of [byPupil, byNa]) {
      expect(relative(other.workingFNumber, 7)).toBeLessThan(1e-12);
      expect(relative(other.stopRadiusMm, byF.stopRadiusMm)).toBeLessThan(1e-12);
    }
  });

  test('of a distant object: N is the focal length over the pupil', () => {
    const found = properties(packhouseLens());
    expect(relative(found.focalLengthMm / (2 * found.entrancePupilRadiusMm), 4)).toBeLessThan(1e-12);
  });
});

test('field: image height, angle and object height ask for the same chief ray', () => {
  const byAngle = properties(doublet());
  const byImage = properties(doublet({ field: { imageHeightMm: byAngle.imageHeightMm } }));
  const byObject = properties(doublet({ field: { objectHeightMm: byAngle.objectHeightMm } }));
  expect(relative(byAngle.halfFieldDeg, 4)).toBeLessThan(1e-12);
  for (const other of [byImage, byObject]) {
    expect(relative(other.halfFieldDeg, 4)).toBeLessThan(1e-12);
    expect(relative(other.lagrangeMm, byAngle.lagrangeMm)).toBeLessThan(1e-12);
  }
});

describe('pupils at infinity', () => {
  /** Thin lens of f 100 mm, stop in its focus on the object side (image side telecentric) or on the image
   * side. */
  const telecentric = (side: 'object' | 'image'): Prescription => {
    const lens: Surface = { radiusMm: 50, thicknessMm: 0, glass: { n: 1.5 } };
    return {
      name: 'telecentric',
      wavelengthNm: 550,
      surfaces:
        side === 'image'
          ? [{ stop: true, thicknessMm: 100 }, lens, {}]
          : [lens, { thicknessMm: 100 }, { stop: true }],
      objectDistanceMm: 200,
      aperture: { objectNa: 0.05 },
      field: { objectHeightMm: 4 },
    };
  };

  test('on the image side', () => {
    const found = properties(telecentric('image'));
    expect(Math.abs(found.exitPupilMm)).toBe(Number.POSITIVE_INFINITY);
    expect(found.exitPupilRadiusMm).toBe(Number.POSITIVE_INFINITY);
    expect(found.entrancePupilMm).toBe(0);
    expect(found.imageHeightMm).toBeGreaterThan(0);
  });

  test('on the object side', () => {
    const found = properties(telecentric('object'));
    expect(Math.abs(found.entrancePupilMm)).toBe(Number.POSITIVE_INFINITY);
    expect(found.halfFieldDeg).toBe(0);
    expect(relative(found.imageHeightMm, 4)).toBeLessThan(1e-12); // 200 in front of f 100: unit magnification
  });

  test('refuses a diameter of, or an angle at, an entrance pupil at infinity', () => {
    const lens = telecentric('object');
    expect(() => lensModel({ ...lens, aperture: { entrancePupilMm: 5 } })).toThrow(
      /entrance pupil .* at infinity.*object_na/,
    );
    expect(() => lensModel({ ...lens, field: { halfAngleDeg: 3 } })).toThrow(
      /parallel to the axis.*object_height_mm/,
    );
    expect(() => lensModel({ ...lens, field: { halfAngleDeg: 3 } })).toThrow(InputError);
  });
});

test('a relay that images upright: outward turns', () => {
  const relay: Prescription = {
    name: 'relay',
    wavelengthNm: 550,
    surfaces: [
      { radiusMm: 25, thicknessMm: 0, glass: { n: 1.5 }, stop: true },
      { thicknessMm: 110 },
      { radiusMm: 12, thicknessMm: 0, glass: { n: 1.5 } },
      {},
    ],
    aperture: { fNumber: 8 },
    field: { halfAngleDeg: 1 },
  };
  const found = properties(relay);
  expect(found.outward).toBe(-1);
  expect(found.imageHeightMm).toBeGreaterThan(0);
  expect(found.lagrangeMm).toBeGreaterThan(0);
});

test('laws on random lenses: H is the same everywhere, and the image height follows from it', () => {
  const surface = fc.record({
    radiusMm: fc.oneof(
      fc.double({ min: 20, max: 300, noNaN: true }),
      fc.double({ min: -300, max: -20, noNaN: true }),
    ),
    thicknessMm: fc.double({ min: 0.5, max: 8, noNaN: true }),
    n: fc.double({ min: 1.3, max: 2, noNaN: true }),
  });
  fc.assert(
    fc.property(fc.array(surface, { minLength: 1, maxLength: 6 }), fc.nat(5), (list, stop) => {
      const surfaces: Surface[] = list.map(({ n, ...rest }, i) => ({
        ...rest,
        glass: { n },
        stop: i === stop % list.length,
      }));
      surfaces.push({});
      let model: ReturnType<typeof lensModel>;
      try {
        model = lensModel({
          name: 'random',
          wavelengthNm: 550,
          surfaces,
          aperture: { fNumber: 4 },
          field: { halfAngleDeg: 3 },
        });
      } catch (error) {
        if (error instanceof InputError) fc.pre(false); // forms no real image
        throw error;
      }
      const { index, count } = model.reference.system;
      const { marginal, chief, lagrangeMm, imageHeightMm, workingFNumber } = model.reference.paraxial;
      for (let i = 0; i < count; i++) {
        const H = index[i + 1] * (chief.u[i + 1] * marginal.y[i] - marginal.u[i + 1] * chief.y[i]);
        const size = Math.abs(index[i + 1] * chief.u[i + 1] * marginal.y[i]) + lagrangeMm;
        expect(Math.abs(H - lagrangeMm)).toBeLessThan(1e-11 * size);
      }
      expect(relative(imageHeightMm, 2 * workingFNumber * lagrangeMm)).toBeLessThan(1e-9);
    }),
    { numRuns: 200, seed: 7 },
  );
});

test('scaling to a focal length scales every length, and A_j with the power 1 - j', () => {
  const plain = doublet({ scaleToFocalLengthMm: undefined, objectDistanceMm: undefined });
  const f = properties(plain).focalLengthMm;
  const model = lensModel({ ...plain, scaleToFocalLengthMm: 3 * f });
  expect(relative(model.reference.paraxial.focalLengthMm, 3 * f)).toBeLessThan(1e-13);
  const [first, , last] = model.prescription.surfaces;
  expect(first.radiusMm).toBeCloseTo(3 * 37.5, 10);
  expect(first.thicknessMm).toBeCloseTo(15, 10);
  expect(relative(last.asphericMm?.A4 ?? 0, 2e-7 / 27)).toBeLessThan(1e-12);
  expect(last.conic).toBe(-3);
});

test('a last thickness that is given stays, and its defocus is known', () => {
  const lens = sixSurfaceLens();
  const focus = properties(lens).imageDistanceMm;
  const surfaces = lens.surfaces.map((s, i) => (i === 5 ? { ...s, thicknessMm: focus + 0.05 } : s));
  const model = lensModel({ ...lens, surfaces });
  expect(model.defocusMm).toBeCloseTo(0.05, 12);
  expect(lensModel(lens).defocusMm).toBe(0);
  // the ideal image height is that in the plane of the sensor
  const { chief, imageHeightMm, imageDistanceMm } = model.reference.paraxial;
  expect(relative(imageHeightMm, chief.y[5] + chief.u[6] * (imageDistanceMm + 0.05))).toBeLessThan(1e-12);
});

test('the sensor may stand a little in front of the focus, behind the last surface or not', () => {
  // a flat exit of the glass right at the sensor, the focus 0.02 mm inside the glass
  const image = properties(singlet()).imageDistanceMm;
  const { surfaces } = lensModel(singlet()).prescription;
  const cemented: Prescription = {
    ...singlet({ scaleToFocalLengthMm: undefined }),
    surfaces: [
      ...surfaces.slice(0, 2),
      { ...surfaces[2], thicknessMm: image - 1 },
      { glass: { n: 1.5 }, thicknessMm: 1.5 + 0.02 },
      { thicknessMm: 0 },
    ],
  };
  expect(lensModel(cemented).defocusMm).toBeCloseTo(0.02 / 1.5, 9);
});

test('paraxial refuses nothing that only a wavelength changes', () => {
  const model = lensModel(packhouseLens());
  const { stopRadiusMm, fieldScale } = model.reference.paraxial;
  const again = paraxial(model.reference.system, { stopRadiusMm }, { fieldScale });
  expect(relative(again.workingFNumber, 4)).toBeLessThan(1e-13);
  expect(relative(again.imageHeightMm, 4.6)).toBeLessThan(1e-13);
});
