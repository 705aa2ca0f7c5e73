/** A cubic spline with equal steps through many scattered points, by least squares. */

/** Normal equations of the spline's coefficients: a symmetric matrix with three diagonals on either side of
 * the main one, kept as rows of [main, next, next but one, third]. */
const BAND = 4;

/** Weight of the third differences against the mean weight of the points. It costs a wave of 8 steps 2e-4 of
 * its height, and keeps the noise of few points from swinging up in the gaps between them. */
const STIFFNESS = 1e-3;

/** Fits sum of c[j] B(x - j) to points (x, value), B the cubic B-spline of unit steps.
 *
 * A least-squares spline keeps a wave of f cycles a step to about (2 pi f)^4 / 720: a wave of 9 steps to
 * 3e-4. So there is no bin whose width blurs, and it makes no difference where in the steps the points
 * stand, as long as there are some.
 * Source: C. de Boor, A Practical Guide to Splines (1978), ch. 14, least squares (from memory).
 */
export class SplineFit {
  /** Knots at 0, 1, ... steps. */
  readonly steps: number;
  readonly #matrix: Float64Array;
  readonly #right: Float64Array;
  readonly #weights = new Float64Array(4);
  #points = 0;

  /** @param steps the spline reaches from 0 to `steps` */
  constructor(steps: number) {
    this.steps = steps;
    this.#matrix = new Float64Array(BAND * (steps + 3));
    this.#right = new Float64Array(steps + 3);
  }

  /** Takes a point in; x from 0 to `steps`. */
  add(x: number, value: number): void {
    const left = Math.min(this.steps - 1, Math.floor(x)); // coefficient j belongs to the knot j - 1
    const t = x - left;
    const w = this.#weights;
    w[0] = (1 - t) ** 3 / 6;
    w[1] = (3 * t ** 3 - 6 * t ** 2 + 4) / 6;
    w[2] = (-3 * t ** 3 + 3 * t ** 2 + 3 * t + 1) / 6;
    w[3] = t ** 3 / 6;
    for (let i = 0; i < 4; i++) {
      const row = BAND * (left + i);
      for (let j = i; j < 4; j++) this.#matrix[row + j - i] += w[i] * w[j];
      this.#right[left + i] += w[i] * value;
    }
    this.#points++;
  }

  /** The spline's values at its knots 0, 1, ... `steps`. Uses the sums up. */
  valuesAtKnots(): Float64Array {
    this.#stiffen((STIFFNESS * this.#points) / this.steps);
    const c = solveBanded(this.#matrix, this.#right);
    return Float64Array.from({ length: this.steps + 1 }, (_, k) => (c[k] + 4 * c[k + 1] + c[k + 2]) / 6);
  }

  #stiffen(weight: number): void {
    const difference = [1, -3, 3, -1];
    for (let first = 0; first + 3 < this.#right.length; first++)
      for (let i = 0; i < 4; i++)
        for (let j = i; j < 4; j++)
          this.#matrix[BAND * (first + i) + j - i] += weight * difference[i] * difference[j];
  }
}

/** Solve by Cholesky's factors within the band: matrix = L D L^T. Both are used up. */
function solveBanded(matrix: Float64Array, right: Float64Array): Float64Array {
  const size = right.length;
  for (let k = 0; k < size; k++) {
    const pivot = matrix[BAND * k];
    const reach = Math.min(BAND - 1, size - 1 - k);
    for (let i = 1; i <= reach; i++) {
      const factor = matrix[BAND * k + i] / pivot;
      for (let j = i; j <= reach; j++) matrix[BAND * (k + i) + j - i] -= factor * matrix[BAND * k + j];
      right[k + i] -= factor * right[k];
    }
  }
  for (let k = size - 1; k >= 0; k--) {
    const reach = Math.min(BAND - 1, size - 1 - k);
    for (let i = 1; i <= reach; i++) right[k] -= matrix[BAND * k + i] * right[k + i];
    right[k] /= matrix[BAND * k];
  }
  return right;
}
