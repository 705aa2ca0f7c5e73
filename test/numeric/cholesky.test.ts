import fc from 'fast-check';
import { expect, it } from 'vitest';
import { choleskyFactor } from '../../src/numeric/cholesky.js';

it('factors a matrix by hand', () => {
  expect(
    choleskyFactor([
      [1, 0.6],
      [0.6, 1],
    ]),
  ).toEqual([
    [1, 0],
    [0.6, 0.8],
  ]);
});

it('gives back the matrix, for any correlations that unit vectors have', () => {
  const vectors = fc.array(
    fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 3, maxLength: 3 }),
    {
      minLength: 1,
      maxLength: 5,
    },
  );
  fc.assert(
    fc.property(vectors, (raw) => {
      const unit = raw.map((v) => [...v, 0.1]).map((v) => v.map((x) => x / Math.hypot(...v)));
      const matrix = unit.map((a, i) => unit.map((b, j) => (i === j ? 1 : dot(a, b))));
      const factor = choleskyFactor(matrix)!; // five vectors in four dimensions: singular at times
      for (const [i, row] of matrix.entries())
        for (const [j, entry] of row.entries()) {
          // a pivot of 1e-10 counts as none, and its root of 1e-5 is lost
          expect(Math.abs(dot(factor[i], factor[j]) - entry)).toBeLessThan(3e-5);
        }
    }),
  );
});

it('takes vectors that all but coincide, where rounding leaves a pivot a little below 0', () => {
  const near = [0, 1.0000444499776258e-7, -0.0008441358804702739, 0].map((z) => [z, 0.1]);
  const unit = near.map((v) => v.map((x) => x / Math.hypot(...v)));
  const matrix = unit.map((a, i) => unit.map((b, j) => (i === j ? 1 : dot(a, b))));
  expect(choleskyFactor(matrix)).toBeDefined();
});

it('factors variables that are one, or opposite', () => {
  for (const r of [1, -1])
    expect(
      choleskyFactor([
        [1, r],
        [r, 1],
      ]),
    ).toEqual([
      [1, 0],
      [r, 0],
    ]);
});

it('refuses what no variables can have', () => {
  expect(
    choleskyFactor([
      [1, 0.9, 0.9],
      [0.9, 1, -0.9],
      [0.9, -0.9, 1],
    ]),
  ).toBeUndefined();
});

function dot(a: readonly number[], b: readonly number[]): number {
  return a.reduce((sum, x, i) => sum + x * b[i], 0);
}
