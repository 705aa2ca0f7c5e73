/** Aplanatic conjugates of a refracting sphere.
 * Source: Born and Wolf, Principles of Optics, 4.2.3; Welford, Aberrations of Optical Systems (cited from
 * memory).
 */
import { expect, test } from 'vitest';
import { referenceSums } from '../../src/prescription/coefficients.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { FieldTracer } from '../../src/prescription/opd.js';
import { D_LINE } from '../prescription/lenses.js';

/** A sphere from air to n, virtual object at `objectMm` behind the vertex, entrance pupil of radius 5 at z
 * -10, object height 4. The image lies in the glass: a flat exit at the image adds nothing, there y is 0. */
function sphereModel(n: number, radiusMm: number, objectMm: number, imageMm: number) {
  return lensModel({
    name: 'sphere',
    wavelengthNm: D_LINE,
    surfaces: [
      { stop: true, thicknessMm: 10 },
      { radiusMm, glass: { n }, thicknessMm: imageMm },
      { thicknessMm: 0 },
    ],
    objectDistanceMm: -(objectMm + 10),
    aperture: { entrancePupilMm: 10 },
    field: { objectHeightMm: 4 },
  });
}

function sums(model: ReturnType<typeof sphereModel>): number[] {
  const { S_I, S_II, S_III, S_IV, S_V } = referenceSums(model).total;
  return [S_I, S_II, S_III, S_IV, S_V];
}

test.each<[number, number, number[]]>([
  [1.5, 50, [0, 0, 0, 0.00014631915866483768, 9.364426154549612e-5]],
  [1.8, 30, [0, 0, 0, 0.000670657076270476, 0.00039742641556768946]],
])('virtual object at R (1 + n): n %f, R %f', (n, radius, expected) => {
  const model = sphereModel(n, radius, radius * (1 + n), (radius * (1 + n)) / n);
  expect(Math.abs(model.defocusMm)).toBeLessThan(1e-12 * radius);
  sums(model).forEach((value, i) => {
    expect(Math.abs(value - expected[i])).toBeLessThan(1e-12);
  });
});

test('no spherical aberration at any aperture', () => {
  for (const [n, radius] of [
    [1.5, 50],
    [1.8, 30],
  ]) {
    const { prescription } = sphereModel(n, radius, radius * (1 + n), (radius * (1 + n)) / n);
    const wide = lensModel({ ...prescription, aperture: { entrancePupilMm: radius } });
    const tracer = new FieldTracer(wide.reference, 0);
    for (const rho of [0.3, 0.7, 1]) expect(Math.abs(tracer.wavefrontMm(rho, 0))).toBeLessThan(1e-12); // mm
  }
});

test('object at the centre of curvature: S_I = S_II = 0, S_III = -S_IV', () => {
  const expected = [0, 0, -0.0007407407407407407, 0.0007407407407407407, 0.0009481481481481482];
  sums(sphereModel(1.5, 50, 50, 50)).forEach((value, i) => {
    expect(Math.abs(value - expected[i])).toBeLessThan(1e-12);
  });
});
