/** The highest point of a smooth function from few of its values. */

/** The place of the maximum of f over [from, to], the ends included.
 *
 * f is replaced by its interpolant at Chebyshev points, on which the search costs nothing. Good where f bends
 * little over the interval: a function whose spectrum ends at k radians a unit is followed to about (k (to -
 * from) / 8)^n / n!, relative to its size.
 * Source: L. N. Trefethen, Approximation Theory and Approximation Practice, ch. 3 and 4 (cited from memory)
 *
 * @param count number of points, n
 */
export function smoothMaximum(f: (x: number) => number, from: number, to: number, count = 11): number {
  const values = new Float64Array(count);
  const middle = 0.5 * (from + to);
  const half = 0.5 * (to - from);
  for (let j = 0; j < count; j++) values[j] = f(middle + half * Math.cos((Math.PI * (j + 0.5)) / count));
  const coefficients = chebyshevCoefficients(values);

  const samples = 8 * count;
  let best = 0;
  let highest = Number.NEGATIVE_INFINITY;
  for (let i = 0; i <= samples; i++) {
    const value = clenshaw(coefficients, -1 + (2 * i) / samples);
    if (value > highest) {
      highest = value;
      best = i;
    }
  }
  const t = goldenMaximum(
    coefficients,
    -1 + (2 * Math.max(0, best - 1)) / samples,
    -1 + (2 * Math.min(samples, best + 1)) / samples,
  );
  return middle + half * t;
}

/** Coefficients of T_0, T_1 ... of the polynomial that has these values at cos(pi (j + 1/2) / n). */
function chebyshevCoefficients(values: Float64Array): Float64Array {
  const n = values.length;
  const coefficients = new Float64Array(n);
  for (let k = 0; k < n; k++) {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += values[j] * Math.cos((Math.PI * k * (j + 0.5)) / n);
    coefficients[k] = ((k === 0 ? 1 : 2) * sum) / n;
  }
  return coefficients;
}

/** Clenshaw's recurrence for the sum of c_k T_k(t). */
function clenshaw(coefficients: Float64Array, t: number): number {
  let b1 = 0;
  let b2 = 0;
  for (let k = coefficients.length - 1; k > 0; k--) {
    const b0 = coefficients[k] + 2 * t * b1 - b2;
    b2 = b1;
    b1 = b0;
  }
  return coefficients[0] + t * b1 - b2;
}

/** Golden-section search; it stops at 1e-8 because rounding hides a maximum more closely than that. */
function goldenMaximum(coefficients: Float64Array, from: number, to: number): number {
  const golden = (Math.sqrt(5) - 1) / 2;
  let a = from;
  let b = to;
  let low = b - golden * (b - a);
  let high = a + golden * (b - a);
  let atLow = clenshaw(coefficients, low);
  let atHigh = clenshaw(coefficients, high);
  while (b - a > 1e-8) {
    if (atLow >= atHigh) {
      b = high;
      high = low;
      atHigh = atLow;
      low = b - golden * (b - a);
      atLow = clenshaw(coefficients, low);
    } else {
      a = low;
      low = high;
      atLow = atHigh;
      high = a + golden * (b - a);
      atHigh = clenshaw(coefficients, high);
    }
  }
  return 0.5 * (a + b);
}
