import fc from 'fast-check';
import jstat from 'jstat';
import { describe, expect, it } from 'vitest';
import { fitPolynomial, polynomialAt } from '../../src/numeric/polynomial-fit.js';
import { solveLinear } from '../../src/numeric/solve-linear.js';
import { SplineFit } from '../../src/numeric/spline-fit.js';

const number = fc.double({ min: -5, max: 5, noNaN: true });

describe('solveLinear', () => {
  it('undoes a product of matrix and vector', () => {
    fc.assert(
      fc.property(
        fc.array(number, { minLength: 9, maxLength: 9 }),
        fc.array(number, { minLength: 3, maxLength: 3 }),
        (entries, x) => {
          // a heavy diagonal keeps the matrix far from singular
          const matrix = [0, 1, 2].map((row) =>
            Float64Array.from([0, 1, 2], (column) => entries[3 * row + column] + (row === column ? 20 : 0)),
          );
          const right = Float64Array.from(matrix, (row) =>
            row.reduce((sum, value, i) => sum + value * x[i], 0),
          );
          const solved = solveLinear(matrix, right);
          for (let i = 0; i < 3; i++) expect(solved[i]).toBeCloseTo(x[i], 11);
        },
      ),
    );
  });

  it('takes the largest pivot, so a zero on the diagonal does no harm', () => {
    const solved = solveLinear([Float64Array.of(0, 2), Float64Array.of(3, 1)], Float64Array.of(4, 5));
    expect([...solved]).toEqual([1, 2]);
  });
});

describe('fitPolynomial', () => {
  it('gives back a polynomial of its degree', () => {
    fc.assert(
      fc.property(fc.array(number, { minLength: 3, maxLength: 3 }), (c) => {
        const t = Array.from({ length: 9 }, (_, i) => i / 4 - 1);
        const fit = fitPolynomial(
          t,
          t.map((at) => polynomialAt(c, at)),
          2,
        );
        for (let k = 0; k < 3; k++) expect(fit[k]).toBeCloseTo(c[k], 11);
      }),
    );
  });

  // Source: jstat 1.9, jStat.models.ols, ordinary least squares by QR
  it('is the fit of a general-purpose statistics library', () => {
    const t = Array.from({ length: 40 }, (_, i) => Math.sin(7 * i));
    const values = t.map((at, i) => 3 - 2 * at + 0.5 * at * at + Math.cos(100 * i));
    const theirs = jstat.models.ols(
      values,
      t.map((at) => [1, at, at * at]),
    ).coef;
    const ours = fitPolynomial(t, values, 2);
    for (let k = 0; k < 3; k++) expect(ours[k]).toBeCloseTo(theirs[k], 10);
  });
});

describe('SplineFit', () => {
  /** Many points of a function at uneven places. */
  function fitted(value: (x: number) => number, steps = 40, points = 400): Float64Array {
    const fit = new SplineFit(steps);
    for (let i = 0; i < points; i++) {
      const x = (steps * (i + 0.5 + 0.4 * Math.sin(11 * i))) / points;
      fit.add(x, value(x));
    }
    return fit.valuesAtKnots();
  }

  it('gives back a parabola at its knots', () => {
    const parabola = (x: number) => 1 + 0.3 * x - 0.02 * x ** 2; // has no third difference for the stiffness to work on
    for (const [k, value] of fitted(parabola).entries()) expect(value).toBeCloseTo(parabola(k), 10);
  });

  it.each([5, 9, 20])('keeps a wave of %i steps as well as it says', (wave) => {
    const values = fitted((x) => Math.cos((2 * Math.PI * x) / wave));
    const step = (2 * Math.PI) / wave;
    const bound = step ** 4 / 720 + 1e-3 * (2 * Math.sin(step / 2)) ** 6; // of the spline, and of its stiffness
    for (
      let k = 5;
      k <= 35;
      k++ // away from the ends
    )
      expect(Math.abs(values[k] - Math.cos((2 * Math.PI * k) / wave))).toBeLessThan(2 * bound);
  });

  it('does not care at which places in a step the points stand', () => {
    // all points at one place in each step: a bin would have its mean there, and call it the middle
    const fit = new SplineFit(30);
    for (let k = 0; k < 30; k++) for (const part of [0.1, 0.35]) fit.add(k + part, Math.sin((k + part) / 3));
    const values = fit.valuesAtKnots();
    for (let k = 3; k <= 27; k++) expect(values[k]).toBeCloseTo(Math.sin(k / 3), 4);
  });

  it('carries on smoothly across steps without points', () => {
    const fit = new SplineFit(30);
    for (let x = 0; x <= 30; x += 0.2) if (x < 12 || x > 15) fit.add(x, 0.5 * x);
    for (const [k, value] of fit.valuesAtKnots().entries()) expect(value).toBeCloseTo(0.5 * k, 6);
  });
});
