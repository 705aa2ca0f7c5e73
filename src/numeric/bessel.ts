/** Bessel functions of the first kind. */

/** J0(x)^2 + J1(x)^2 for x >= 0, to about 1e-4 or better: what a circular aperture leaves outside of a radius.
 *
 * Up to 64 by the trapezoidal rule on J_n(x) = (1/pi) integral over 0..pi of cos(n t - x sin t) dt, which converges faster than any power
 * of the step because the integrand is periodic; above, by the first term of the asymptotic series, 2 / (pi x).
 * Source: M. Abramowitz and I. A. Stegun, Handbook of Mathematical Functions, 9.1.21 and 9.2.1 (cited from memory)
 */
export function besselJ0J1Squares(x: number): number {
  if (x > 64) return 2 / (Math.PI * x);
  const steps = 2 * Math.ceil(0.5 * x + 12); // even, so that 0..pi and pi..2pi mirror each other
  let j0 = 0;
  let j1 = 0;
  for (let k = 0; k < steps; k++) {
    const t = (2 * Math.PI * (k + 0.5)) / steps;
    const phase = x * Math.sin(t);
    j0 += Math.cos(phase);
    j1 += Math.cos(t - phase);
  }
  return (j0 * j0 + j1 * j1) / (steps * steps);
}
