/** Polynomials through many points, by least squares. */

/** The coefficients c of the polynomial sum of c[k] t^k that lies nearest to the points (t, value), by the normal equations.
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

/** Solve matrix x = right by Gauss's elimination with the largest pivot of the column; both are used up. */
export function solveLinear(matrix: Float64Array[], right: Float64Array): Float64Array {
  const size = right.length;
  for (let column = 0; column < size; column++) {
    let pivot = column;
    for (let row = column + 1; row < size; row++)
      if (Math.abs(matrix[row][column]) > Math.abs(matrix[pivot][column])) pivot = row;
    [matrix[column], matrix[pivot]] = [matrix[pivot], matrix[column]];
    [right[column], right[pivot]] = [right[pivot], right[column]];
    for (let row = column + 1; row < size; row++) {
      const factor = matrix[row][column] / matrix[column][column];
      for (let k = column; k < size; k++) matrix[row][k] -= factor * matrix[column][k];
      right[row] -= factor * right[column];
    }
  }
  for (let row = size - 1; row >= 0; row--) {
    for (let k = row + 1; k < size; k++) right[row] -= matrix[row][k] * right[k];
    right[row] /= matrix[row][row];
  }
  return right;
}
