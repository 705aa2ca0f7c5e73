/** Plane-parallel plate in a converging beam.
 * Source: Welford, Aberrations of Optical Systems; Smith, Modern Optical Engineering (cited from memory).
 */
import { expect, test } from 'vitest';
import { thirdOrderWaves } from '../../src/prescription/coefficients.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { D_LINE } from '../prescription/lenses.js';

/** The beam converges to a virtual object 100 behind the stop; the plate stands somewhere in between. */
function plateModel(gapMm: number, t: number, n: number, u: number, uBar: number) {
  return lensModel({
    name: 'plate',
    wavelengthNm: D_LINE,
    surfaces: [{ stop: true, thicknessMm: gapMm }, { glass: { n }, thicknessMm: t }, {}],
    objectDistanceMm: -100,
    aperture: { fNumber: 1 / (2 * Math.abs(u)) },
    field: { objectHeightMm: 100 * uBar },
  });
}

test('plate of t 5, n 1.5168 at u -1/7, chief slope 3/14: waves at the d line, and the shift of the focus', () => {
  for (const gap of [10, 60]) {
    const model = plateModel(gap, 5, 1.5168, -1 / 7, 3 / 14);
    const waves = thirdOrderWaves(model, model.reference);
    const expected = {
      W040: -0.16512793692512823,
      W131: 0.9907676215507694,
      W222: -1.486151432326154,
      W220: -0.743075716163077,
      W311: 2.229227148489231,
    };
    for (const [name, value] of Object.entries(expected))
      expect(Math.abs(waves[name as keyof typeof expected] / value - 1)).toBeLessThan(1e-9);
    const shift = model.reference.paraxial.imageDistanceMm + gap + 5 - 100;
    expect(Math.abs(shift / 1.7035864978902953 - 1)).toBeLessThan(1e-9);
  }
});

test('closed forms for other plates', () => {
  for (const [t, n, u, uBar] of [
    [1, 1.52, -0.1, 0.2],
    [20, 1.8, -0.25, 0.1],
    [3, 1.45, -0.05, 0.4],
  ]) {
    const model = plateModel(10, t, n, u, uBar);
    const waves = thirdOrderWaves(model, model.reference);
    const scale = (-(n * n - 1) * t) / (2 * n ** 3) / (D_LINE * 1e-6);
    const expected = {
      W040: (scale * u ** 4) / 4,
      W131: scale * u ** 3 * uBar,
      W222: scale * u ** 2 * uBar ** 2,
      W220: (scale * u ** 2 * uBar ** 2) / 2,
      W311: scale * u * uBar ** 3,
    };
    for (const [name, value] of Object.entries(expected))
      expect(Math.abs(waves[name as keyof typeof expected] / value - 1)).toBeLessThan(1e-9);
  }
});
