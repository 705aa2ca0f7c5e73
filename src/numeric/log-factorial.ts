/** The logarithm of k!. */

const TABLE = new Float64Array(16);
for (let k = 2; k < TABLE.length; k++) TABLE[k] = TABLE[k - 1] + Math.log(k);

const HALF_LOG_TWO_PI = 0.5 * Math.log(2 * Math.PI);

/** ln k! for a whole k >= 0: a table below 16, Stirling's series above.
 *
 * The first term left out, 1/(1188 k^9), is below 2e-14 there.
 * Source: Abramowitz and Stegun, Handbook of Mathematical Functions, 6.1.41 (from memory).
 */
export function logFactorial(k: number): number {
  if (k < TABLE.length) return TABLE[k];
  const inverse = 1 / k;
  const square = inverse * inverse;
  const series = inverse * (1 / 12 - square * (1 / 360 - square * (1 / 1260 - square / 1680)));
  return (k + 0.5) * Math.log(k) - k + HALF_LOG_TWO_PI + series;
}
