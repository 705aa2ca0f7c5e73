/** A radial distortion of third order from measured places. */
import { solveLinear } from '../numeric/solve-linear.js';
import { DistortionMap } from '../optics/distortion.js';

/** An image point's distance from the axis: where it should land and where it does, in mm. */
export interface RadialPair {
  idealMm: number;
  foundMm: number;
}

/** The map r' = a r + c r^3 nearest to the pairs, by least squares: of order 3 from two different radii on,
 * else of order 1. */
export function fitRadialMap(pairs: readonly RadialPair[]): DistortionMap {
  const largest = Math.max(0, ...pairs.map(({ idealMm }) => idealMm));
  if (largest === 0) return new DistortionMap(1, 0);
  // in units of the largest radius, for the sake of the digits
  let [s2, s4, s6, b1, b3] = [0, 0, 0, 0, 0];
  for (const { idealMm, foundMm } of pairs) {
    const r = idealMm / largest;
    const d = (foundMm - idealMm) / largest;
    s2 += r ** 2;
    s4 += r ** 4;
    s6 += r ** 6;
    b1 += r * d;
    b3 += r ** 3 * d;
  }
  const isOneRadius = s2 * s6 - s4 * s4 < 1e-6 * s2 * s6;
  if (isOneRadius) return new DistortionMap(1 + b1 / s2, 0);
  const [a, c] = solveLinear([Float64Array.of(s2, s4), Float64Array.of(s4, s6)], Float64Array.of(b1, b3));
  return new DistortionMap(1 + a, c / largest ** 2);
}

/** A map with nothing but a cubic part, for places not yet looked at: it cannot run away at the radii in
 * between. */
export function cubicMap(pairs: readonly RadialPair[]): DistortionMap {
  let [s6, b3] = [0, 0];
  for (const { idealMm, foundMm } of pairs) {
    s6 += idealMm ** 6;
    b3 += idealMm ** 3 * (foundMm - idealMm);
  }
  return new DistortionMap(1, s6 === 0 ? 0 : b3 / s6);
}
