/** Petzval sum of thin lenses, and lenses symmetrical about their stop.
 * Source: Petzval (1843); Born and Wolf, Principles of Optics, 5.5.3; Kingslake, Lens Design Fundamentals
 * (cited from memory).
 */
import { expect, test } from 'vitest';
import { referenceSums } from '../../src/prescription/coefficients.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { FieldTracer } from '../../src/prescription/opd.js';
import { petzvalSum } from '../../src/prescription/paraxial.js';
import type { Prescription } from '../../src/prescription/prescription.js';
import { systemAt } from '../../src/prescription/system.js';
import { D_LINE, thinLensSurfaces } from '../prescription/lenses.js';

test.each<[string, [number, number][], number]>([
  ['f 100, n 1.5', [[100, 1.5]], 1 / 150],
  [
    'f 50, n 1.6 and f -40, n 1.5',
    [
      [50, 1.6],
      [-40, 1.5],
    ],
    -1 / 240,
  ],
  [
    'f 100 and f -100, n 1.5',
    [
      [100, 1.5],
      [-100, 1.5],
    ],
    0,
  ],
])('sum of phi/n: %s', (_, lenses, expected) => {
  for (const q of [-0.7, 0, 2.2]) {
    const surfaces = lenses.flatMap(([focalMm, n]) => thinLensSurfaces({ n }, n, q, focalMm));
    expect(Math.abs(petzvalSum(systemAt(surfaces, D_LINE, undefined, 0)) - expected)).toBeLessThan(1e-12);
  }
});

test('Petzval radius of a lens is n f, and S_IV = H^2 P', () => {
  const [front, back] = thinLensSurfaces({ n: 1.5 }, 1.5, 0.3, 100);
  const model = lensModel({
    name: 'thin lens',
    wavelengthNm: D_LINE,
    surfaces: [
      { ...front, stop: true },
      { ...back, thicknessMm: undefined },
    ],
    aperture: { fNumber: 4 },
    field: { imageHeightMm: 5 },
  });
  const { petzvalRadiusMm, lagrangeMm } = model.reference.paraxial;
  expect(Math.abs(petzvalRadiusMm / 150 - 1)).toBeLessThan(1e-12);
  expect(Math.abs((referenceSums(model).total.S_IV * petzvalRadiusMm) / lagrangeMm ** 2 - 1)).toBeLessThan(
    1e-12,
  );
});

// Invented lens, R 40, 60, -60, -40, used at unit magnification; the object distance makes the rim ray
// parallel to the axis at the stop
const symmetrical: Prescription = {
  name: 'symmetrical',
  wavelengthNm: D_LINE,
  surfaces: [
    { radiusMm: 40, thicknessMm: 4, glass: { nd: 1.6, vd: 60 } }, // n_F - n_C = 0.01
    { radiusMm: 60, thicknessMm: 5 },
    { stop: true, thicknessMm: 5 },
    { radiusMm: -60, thicknessMm: 4, glass: { nd: 1.6, vd: 60 } },
    { radiusMm: -40 },
  ],
  objectDistanceMm: 190.69767441860466,
  aperture: { entrancePupilMm: 12 },
  field: { objectHeightMm: 15 },
};

test('symmetrical lens at -1: S_II = S_V = C_II = 0', () => {
  const model = lensModel(symmetrical);
  const { surfaces, total } = referenceSums(model);
  const { paraxial } = model.reference;
  expect(paraxial.magnification).toBeCloseTo(-1, 12);
  expect(Math.abs(paraxial.entrancePupilMm - 8.149632598530394)).toBeLessThan(1e-12 * 10);
  expect(Math.abs(paraxial.focalLengthMm - 99.42365350856753)).toBeLessThan(1e-12 * 100);
  // 1e-12 of the largest surface term, with room for the rounding of its sum of five
  const largest = Math.max(
    ...surfaces.flatMap(({ S_I, S_II, S_III, S_V }) => [S_I, S_II, S_III, S_V].map(Math.abs)),
  );
  const expected = {
    S_I: 0.016003909240834707,
    S_II: 0,
    S_III: 0.0008185060852770601,
    S_IV: 0.0012803408696022034,
    S_V: 0,
    C_I: 0.005951585913574219,
    C_II: 0,
  };
  for (const [name, value] of Object.entries(expected))
    expect(Math.abs(total[name as keyof typeof expected] - value)).toBeLessThan(1e-12 * largest);
});

test('symmetrical lens at -1: the real chief ray lands at +15 exactly', () => {
  const { reference } = lensModel(symmetrical);
  for (const h of [0.3, 1])
    expect(Math.abs(new FieldTracer(reference, h).chiefHeightMm - 15 * h)).toBeLessThan(1e-11); // mm; aimed to 1e-12 of the stop
});
