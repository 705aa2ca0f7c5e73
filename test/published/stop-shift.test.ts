/** Stop-shift equations. Source: Welford, Aberrations of Optical Systems; Hopkins, Wave Theory of Aberrations
 * (1950) (cited from memory). */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { referenceSums } from '../../src/prescription/coefficients.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import type { SeidelSums } from '../../src/prescription/seidel.js';
import { sixSurfaceLens, withStopAt } from '../prescription/lenses.js';

type FiveSums = Pick<SeidelSums, 'S_I' | 'S_II' | 'S_III' | 'S_IV' | 'S_V'>;

function shifted({ S_I, S_II, S_III, S_IV, S_V }: FiveSums, Q: number): FiveSums {
  return {
    S_I,
    S_II: S_II + Q * S_I,
    S_III: S_III + 2 * Q * S_II + Q ** 2 * S_I,
    S_IV,
    S_V: S_V + Q * (3 * S_III + S_IV) + 3 * Q ** 2 * S_II + Q ** 3 * S_I,
  };
}

describe('six-surface lens, entrance pupil moved, its radius kept at 6.25', () => {
  // [z of the entrance pupil from surface 1, Q, S_I ... S_V in mm], computed apart from this code in 60-digit
  // arithmetic
  test.each<[number, number, number[]]>([
    [
      0,
      0.5391061436314727,
      [
        0.01362385125166642, 0.007902169760919868, 0.00235150034143363, 0.006507055758453506,
        0.00662417863595112,
      ],
    ],
    [
      -10,
      1.0589776576041228,
      [
        0.01362385125166642, 0.014984821937261873, 0.014249795365846847, 0.006507055758453506,
        0.021995721243133592,
      ],
    ],
    [
      20,
      -0.5006368843138276,
      [
        0.01362385125166642, -0.006263134591764144, 0.0006473249517468205, 0.006507055758453506,
        0.002838312613504502,
      ],
    ],
  ])('to z %f', (z, Q, expected) => {
    const before = lensModel(sixSurfaceLens());
    const after = lensModel(withStopAt(sixSurfaceLens(), z));
    const start = before.reference.paraxial;
    const end = after.reference.paraxial;
    for (let i = 0; i < 6; i++) {
      const q = (end.chief.y[i + 1] - start.chief.y[i]) / start.marginal.y[i]; // surface 1 of `after` is the stop
      expect(Math.abs(q - Q)).toBeLessThan(1e-9);
    }
    const { S_I, S_II, S_III, S_IV, S_V } = referenceSums(after).total;
    const formula = shifted(referenceSums(before).total, Q);
    // relative to the sums themselves, the smallest of which is 6e-4
    [S_I, S_II, S_III, S_IV, S_V].forEach((value, i) => {
      expect(Math.abs(value / expected[i] - 1)).toBeLessThan(1e-9);
      expect(Math.abs(value / Object.values(formula)[i] - 1)).toBeLessThan(1e-9);
    });
  });
});

test('any lens, any two places of the stop', () => {
  const surface = fc.record({
    radiusMm: fc.oneof(
      fc.double({ min: 15, max: 300, noNaN: true }),
      fc.double({ min: -300, max: -15, noNaN: true }),
    ),
    conic: fc.double({ min: -2, max: 1, noNaN: true }),
    thicknessMm: fc.double({ min: 0.5, max: 6, noNaN: true }),
  });
  const lens = fc.record({
    elements: fc.array(fc.tuple(surface, surface, fc.double({ min: 1.45, max: 1.9, noNaN: true })), {
      minLength: 1,
      maxLength: 3,
    }),
    from: fc.double({ min: -20, max: 20, noNaN: true }),
    to: fc.double({ min: -20, max: 20, noNaN: true }),
    objectDistanceMm: fc.option(fc.double({ min: 300, max: 3000, noNaN: true }), { nil: undefined }),
  });
  fc.assert(
    fc.property(lens, ({ elements, from, to, objectDistanceMm }) => {
      const surfaces = elements.flatMap(([front, back, n]) => [{ ...front, glass: { n } }, back]);
      const at = (z: number) =>
        withStopAt(
          {
            name: 'random',
            wavelengthNm: 550,
            surfaces: surfaces.map((s, i) =>
              i === surfaces.length - 1 ? { ...s, thicknessMm: undefined } : s,
            ),
            objectDistanceMm,
            aperture: { fNumber: 5 },
            field: { imageHeightMm: 8 },
          },
          z,
        );
      let before: ReturnType<typeof lensModel>;
      try {
        before = lensModel(at(from));
      } catch {
        fc.pre(false); // forms no real image
        return;
      }
      const after = lensModel(at(to));
      const Q =
        (after.reference.paraxial.chief.y[1] - before.reference.paraxial.chief.y[1]) /
        before.reference.paraxial.marginal.y[1];
      const start = referenceSums(before);
      const end = referenceSums(after);
      const expected = shifted(start.total, Q);
      for (const name of Object.keys(expected) as (keyof FiveSums)[]) {
        // the terms that cancel in the sums set the rounding
        const size = Math.max(
          ...[...start.surfaces.map((sums) => shifted(sums, Q)), ...start.surfaces, ...end.surfaces].map(
            (sums) => Math.max(...Object.keys(expected).map((key) => Math.abs(sums[key as keyof FiveSums]))),
          ),
        );
        expect(Math.abs(end.total[name] - expected[name])).toBeLessThan(1e-9 * size);
      }
    }),
    { numRuns: 200, seed: 5 },
  );
});
