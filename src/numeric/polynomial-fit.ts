/** Polynomials through many points, by least squares. */
import { solveLinear } from './solve-linear.js';

/** The coefficients c of the polynomial sum of c[k] t^k that lies nearest to the points (t, value), by the
 * normal equations.
 *
 * Keep t within about -1..1 and the degree small: the equations lose digits as the degree grows.
 * @param degree 0 or more; there must be more than `degree` different t
 */
export function fitPolynomial(t: ArrayLike<number>, values: ArrayLike<number>, degree: number): Float64Array {
  const size = degree + 1;
  const powers = new Float64Array(2 * degree + 1); // sums of t^k
  const right = new Float64Array(size);
  for (let i = 0; i < t.length; i++) {
    for (let k = 0, power = 1; k <= 2 * degree; k++, power *= t[i]) {
      powers[k] += power;
      if (k <= degree) right[k] += power * values[i];
    }
  }
  const matrix = Array.from({ length: size }, (_, row) => powers.slice(row, row + size));
  return solveLinear(matrix, right);
}

/** Value of a polynomial by Horner's rule. */
export function polynomialAt(c: ArrayLike<number>, t: number): number {
  let value = 0;
  for (let k = c.length - 1; k >= 0; k--) value = value * t + c[k];
  return value;
}
