/** The square root of a correlation matrix. */

/** The lower triangle L with L L^T = matrix (Cholesky), or undefined where the matrix is not positive
 * semidefinite. A zero pivot is allowed if its column is zero, too: variables that follow from others.
 * @param matrix  n x n, symmetric
 */
export function choleskyFactor(matrix: readonly (readonly number[])[]): number[][] | undefined {
  const n = matrix.length;
  const factor = matrix.map((row) => row.map(() => 0));
  for (let column = 0; column < n; column++) {
    for (let row = column; row < n; row++) {
      let left = matrix[row][column];
      for (let k = 0; k < column; k++) left -= factor[row][k] * factor[column][k];
      const pivot = factor[column][column];
      if (row === column) {
        if (left < -INDEFINITE) return undefined;
        factor[row][row] = left > ROUNDING ? Math.sqrt(left) : 0;
      } else if (pivot > 0) {
        factor[row][column] = left / pivot;
      } else if (Math.abs(left) > Math.sqrt(ROUNDING)) {
        return undefined;
      }
    }
  }
  return factor;
}

/** What rounding may leave of a pivot that is 0; the diagonal is 1. */
const ROUNDING = 1e-10;

/** Rounding, divided by the smallest pivot that counts, may leave a later pivot of 0 this far below it. */
const INDEFINITE = 1e-5;
