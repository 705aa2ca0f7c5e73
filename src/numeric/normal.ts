/** The standard normal distribution: its distribution function and the inverse. */

/** The share of a standard normal below x, to a relative error below 1e-13 in both tails.
 *
 * Near the middle the series Phi(x) = 1/2 + phi(x) (x + x^3/3 + x^5/(3 5) + ...), in the tails the continued
 * fraction of Mills' ratio, Phi(-x) = phi(x) / (x + 1/(x + 2/(x + 3/(x + ...)))).
 * Source: Abramowitz and Stegun, Handbook of Mathematical Functions, 26.2.11 and 26.2.14 (from memory).
 */
export function normalCdf(x: number): number {
  if (x < -MIDDLE) return lowerTail(-x);
  if (x > MIDDLE) return 1 - lowerTail(x);
  let term = x;
  let sum = x;
  for (let n = 3; Math.abs(term) > 1e-17 * Math.abs(sum); n += 2) {
    term *= (x * x) / n;
    sum += term;
  }
  return 0.5 + density(x) * sum;
}

/** Up to here the series loses no more than two digits to the 1/2 that it starts from. */
const MIDDLE = 2;

function density(x: number): number {
  return Math.exp(-0.5 * x * x) / Math.sqrt(2 * Math.PI);
}

/** Phi(-x) for x > MIDDLE; 160 levels of the fraction are enough from 2 on. */
function lowerTail(x: number): number {
  let below = x;
  for (let n = 160; n >= 1; n--) below = x + n / below;
  return density(x) / below;
}

/** The x below which the share p of a standard normal lies: the inverse of `normalCdf`, to a relative error
 * below 1e-13.
 *
 * Wichura's rational approximation (seven digits), then one step of Halley's method on the distribution
 * function.
 * @param p  above 0, below 1; else an infinity
 * Source: M. J. Wichura, Algorithm AS 241, PPND7, Applied Statistics 37 (1988) 477 (constants from memory; the
 * tests hold the result against published quantiles and against `normalCdf`)
 */
export function normalQuantile(p: number): number {
  if (!(p > 0)) return Number.NEGATIVE_INFINITY;
  if (p >= 1) return Number.POSITIVE_INFINITY;
  if (p > 0.5) return -refined(1 - p);
  return refined(p);
}

function refined(p: number): number {
  const x = approximateQuantile(p);
  const step = (normalCdf(x) - p) / density(x);
  return x - step / (1 + 0.5 * x * step);
}

function approximateQuantile(p: number): number {
  const q = p - 0.5;
  if (Math.abs(q) <= 0.425) {
    const r = 0.180625 - q * q;
    const above = ((59.10937472 * r + 159.29113202) * r + 50.434271938) * r + 3.3871327179;
    const below = ((67.1875636 * r + 78.757757664) * r + 17.895169469) * r + 1;
    return (q * above) / below;
  }
  const r = Math.sqrt(-Math.log(p));
  if (r <= 5) {
    const s = r - 1.6;
    const above = ((0.17023821103 * s + 1.3067284816) * s + 2.75681539) * s + 1.4234372777;
    return -above / ((0.12021132975 * s + 0.7370016425) * s + 1);
  }
  const s = r - 5;
  const above = ((0.017337203997 * s + 0.42868294337) * s + 3.081226386) * s + 6.657905115;
  return -above / ((0.012258202635 * s + 0.24197894225) * s + 1);
}
