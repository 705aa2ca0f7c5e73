import fc from 'fast-check';
import { expect, test } from 'vitest';
import type { Waves } from '../../src/optics/rig.js';
import { bestFit } from '../../src/prescription/best-fit.js';
import { type ExactField, exactField, modelWavefront } from '../../src/prescription/exact-field.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { packhouseLens } from './lenses.js';

const { reference } = lensModel(packhouseLens());
const traced = [0, 0.4, 0.7, 1].map((h) => exactField(reference, h));

/** Field points whose wavefront is that of the coefficients, with a tilt a h^3 and any piston. */
function synthetic(waves: Waves, tilt = waves.W311, piston = 0.3): ExactField[] {
  return traced.map((field) => ({
    ...field,
    wavefrontMm: modelWavefront(field, waves).map(
      (value, i) => (value + tilt * field.h ** 3 * field.samples.m[i] + piston * field.h) * 550e-6,
    ),
  }));
}

const coefficient = fc.double({ min: -5, max: 5, noNaN: true });

test('finds the coefficients that a wavefront is made of, whatever its piston, also over a vignetted pupil', () => {
  expect(traced[3].openShare).toBeLessThan(0.999);
  fc.assert(
    fc.property(
      fc.record({
        W040: coefficient,
        W131: coefficient,
        W222: coefficient,
        W220: coefficient,
        W311: coefficient,
        W020: coefficient,
        W111: fc.constant(0),
      }),
      (waves) => {
        const found = bestFit(synthetic(waves), 550);
        // columns as alike as rho^4 and rho^2 lose three digits
        for (const name of Object.keys(waves) as (keyof Waves)[])
          expect(Math.abs(found[name] - waves[name])).toBeLessThan(1e-11);
      },
    ),
    { numRuns: 50, seed: 2 },
  );
});

test('leaves less of the exact wavefront, weighed as it weighs, than any coefficients near by', () => {
  const best = bestFit(traced, 550);
  const cost = (waves: Waves) =>
    traced.reduce((sum, field) => {
      const exact = field.wavefrontMm.map((value) => value / 550e-6);
      const left = modelWavefront(field, waves).map((value, i) => exact[i] - value);
      return sum + variance(field, left) / (variance(field, exact) + 1 / 14 ** 2);
    }, 0);
  const least = cost(best);
  for (const name of ['W040', 'W131', 'W222', 'W220', 'W020'] as const)
    for (const step of [-0.02, 0.02])
      expect(cost({ ...best, [name]: best[name] + step })).toBeGreaterThan(least);
});

/** Variance over the pupil with the tilt of best fit out, by another way than the code's: projection on m. */
function variance({ samples }: ExactField, values: Float64Array): number {
  const { m, weight } = samples;
  const mean = (f: (i: number) => number) => weight.reduce((sum, w, i) => sum + w * f(i), 0);
  const mM = mean((i) => m[i]);
  const mV = mean((i) => values[i]);
  const covariance = mean((i) => m[i] * values[i]) - mM * mV;
  return mean((i) => values[i] ** 2) - mV ** 2 - covariance ** 2 / (mean((i) => m[i] ** 2) - mM ** 2);
}

test('refuses a single field point, and dark ones', () => {
  expect(() => bestFit([traced[1], traced[1]], 550)).toThrow(/at least two field points.*found 0.4, 0.4/);
  const dark = { ...traced[2], wavefrontMm: new Float64Array(0) };
  expect(() => bestFit([traced[1], dark], 550)).toThrow(/at least two field points/);
});
