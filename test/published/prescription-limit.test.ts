/** Third-order sums against exact rays as aperture and field shrink.
 *
 * The sums are the leading terms of the exact wavefront: what a fit of the five terms to exact rays finds
 * differs from them by terms of two orders more, so by the square of the scale. Source: Hopkins, Wave Theory
 * of Aberrations (1950); Welford, Aberrations of Optical Systems (1986) (cited from memory).
 */
import { describe, expect, test } from 'vitest';
import { bestFit } from '../../src/prescription/best-fit.js';
import { thirdOrderWaves } from '../../src/prescription/coefficients.js';
import { exactField } from '../../src/prescription/exact-field.js';
import type { LensModel } from '../../src/prescription/lens-model.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import type { Prescription } from '../../src/prescription/prescription.js';
import { D_LINE, doublet, packhouseLens, singlet, sixSurfaceLens } from '../prescription/lenses.js';

const FIVE = ['W040', 'W131', 'W222', 'W220', 'W311'] as const;

/** The lens with its f-number over and its image height times `scale`. */
function shrunk(lens: Prescription, scale: number): LensModel {
  const { workingFNumber, imageHeightMm } = lensModel(lens).reference.paraxial;
  return lensModel({
    ...lens,
    aperture: { fNumber: workingFNumber / scale },
    field: { imageHeightMm: imageHeightMm * scale },
  });
}

/** Coefficients of the fit less those of the sums, over the largest of the sums. */
function differences(lens: Prescription, scale: number): number[] {
  const model = shrunk(lens, scale);
  const { wavelengthNm } = model.prescription;
  const sums = thirdOrderWaves(model, model.reference);
  const fit = bestFit(
    [0, 0.5, 0.8, 1].map((h) => exactField(model.reference, h)),
    wavelengthNm,
  );
  const largest = Math.max(...FIVE.map((name) => Math.abs(sums[name])));
  return FIVE.map((name) => (fit[name] - sums[name]) / largest);
}

const worst = (values: number[]) => Math.max(...values.map(Math.abs));

const LENSES: [string, Prescription][] = [
  ['singlet, stop in front', singlet()],
  ['doublet with a conic and an aspheric term, near object', doublet()],
  ['six surfaces', packhouseLens({ aperture: { fNumber: 8 }, field: { imageHeightMm: 2.3 } })],
  [
    'six surfaces, near object',
    packhouseLens({ aperture: { fNumber: 8 }, field: { imageHeightMm: 2.3 }, objectDistanceMm: 300 }),
  ],
  [
    'paraboloid mirror, stop in front',
    {
      name: 'mirror',
      wavelengthNm: D_LINE,
      surfaces: [
        { stop: true, thicknessMm: 130 },
        { radiusMm: -200, conic: -1, mirror: true },
      ],
      aperture: { fNumber: 4 },
      field: { halfAngleDeg: 3 },
    },
  ],
];

describe('fit to exact rays at 1/20 of aperture and field', () => {
  test.each(LENSES)('%s: within 1e-3 of the sums, falling with the square', (_, lens) => {
    const at20 = differences(lens, 1 / 20);
    const at40 = differences(lens, 1 / 40);
    expect(worst(at20)).toBeLessThan(1e-3);
    // what differs is the next order and nothing else: a quarter at half the scale. The order after it is
    // 1/400 of that, rounding 1e-9
    at20.forEach((difference, i) => {
      expect(Math.abs(at40[i] - difference / 4)).toBeLessThan(0.02 * Math.abs(difference) + 1e-8);
    });
  });
});

test('a lens that leans on its higher orders: falls with the square, and one step of extrapolation leaves under 1e-5', () => {
  const lens = sixSurfaceLens();
  const scales = [0.2, 0.1, 0.05, 0.025].map((scale) => differences(lens, scale));
  for (let i = 1; i < scales.length; i++) {
    const ratio = worst(scales[i - 1]) / worst(scales[i]);
    expect(Math.abs(ratio - 4)).toBeLessThan(0.2);
  }
  // Richardson: (4 a - b) / 3 for errors that fall by 4
  const extrapolated = scales[2].map((difference, i) => (4 * scales[3][i] - difference) / 3);
  expect(worst(extrapolated)).toBeLessThan(1e-5);
});

test('down to 1/400 of aperture and field the optical path keeps its digits', () => {
  // paths of 100 mm that differ by 1e-13 mm: only because they are never subtracted
  const lens = sixSurfaceLens();
  const expected = worst(differences(lens, 0.05)) / 400;
  expect(Math.abs(worst(differences(lens, 0.0025)) / expected - 1)).toBeLessThan(0.02);
});
