/** Exact skew rays through conic and even aspheric surfaces, with an optical path that keeps its digits. */
import { InputError } from '../errors.js';
import type { OpticalSystem } from './system.js';

/** A ray under way: where it is, where it goes, what path it has behind it. One object is used again and
 * again by the hot loops. */
export class Ray {
  /** Point on the surface reached last, from its vertex, mm. */
  x = 0;
  y = 0;
  z = 0;
  /** Direction cosines; N is negative where light runs to the left. */
  L = 0;
  M = 0;
  N = 1;
  /** Optical path so far beyond that along the axis, mm. Path lengths of 100 mm that differ by a millionth of
   * a wave would lose 10 of 16 digits; their excesses over the axis are small from the start. */
  excess = 0;
  /** First surface whose semi-diameter cuts the ray; -1: none. The ray goes on all the same. */
  blockedAt = -1;
  /** Surface that the ray cannot pass; -1: none. */
  failedAt = -1;
  failure: 'miss' | 'total reflection' = 'miss';
}

/** Start a ray of an object point through (x, y) in the plane of the first vertex.
 *
 * @param field  slope of the chief ray for a distant object; for a near one the height of the object over its
 *   distance, both with the sign that images a positive field outward (`Paraxial.fieldScale` times h)
 */
export function launch(ray: Ray, system: OpticalSystem, field: number, x: number, y: number): void {
  const l = system.objectDistance;
  // slopes dx/dz, dy/dz; the object point lies at x = 0, y = -l field
  const p = l === Number.POSITIVE_INFINITY ? 0 : x / l;
  const q = l === Number.POSITIVE_INFINITY ? field : field + y / l;
  ray.N = 1 / Math.sqrt(1 + p * p + q * q);
  ray.L = p * ray.N;
  ray.M = q * ray.N;
  ray.x = x;
  ray.y = y;
  ray.z = 0;
  // from the object point (1/N - 1 without cancellation), or from the plane wave through the vertex
  ray.excess =
    l === Number.POSITIVE_INFINITY
      ? y * ray.M
      : (l * (ray.L * ray.L + ray.M * ray.M)) / (ray.N * (1 + ray.N));
  ray.blockedAt = -1;
  ray.failedAt = -1;
}

/** Trace a launched ray through surfaces 0 to `end - 1`; it ends on the last of them, its direction being
 * that behind it.
 *
 * The start of the conic's intersection and the laws of refraction and reflection in vector form:
 * W. T. Welford, Aberrations of Optical Systems (1986), ch. 4 (cited from memory). The intersection is
 * written so that the sag comes out of the division without cancellation.
 *
 * @returns whether it got through; where not, `ray.failedAt` and `ray.failure` say why. A surface with a
 *   semi-diameter that is missed altogether counts as cutting the ray: `blockedAt` is set too.
 */
export function trace(ray: Ray, system: OpticalSystem, end: number = system.count): boolean {
  const { curvature, conic, aspheric, thickness, index, semiDiameter } = system;
  let { x, y, z, L, M, N, excess } = ray;
  for (let i = 0; i < end; i++) {
    const n = index[i];
    const nAfter = index[i + 1];
    const c = curvature[i];
    const k = conic[i];
    const terms = aspheric[i];
    const t = i === 0 ? 0 : thickness[i - 1];

    // to the plane of the vertex, then to the surface
    const toPlane = (t - z) / N;
    const x0 = x + L * toPlane;
    const y0 = y + M * toPlane;
    const F = c * (x0 * x0 + y0 * y0);
    const G = N - c * (L * x0 + M * y0);
    const discriminant = G * G - c * F * (1 + k * N * N);
    let s = discriminant < 0 ? Number.NaN : F / (G + (N < 0 ? -1 : 1) * Math.sqrt(discriminant));
    if (terms !== undefined) s = meetAsphere(c, k, terms, x0, y0, L, M, N, Number.isNaN(s) ? 0 : s);
    x = x0 + s * L;
    y = y0 + s * M;
    const sag = s * N;
    const root = 1 - (1 + k) * c * sag; // sqrt(1 - (1+k) c^2 r^2) on the conic
    if (!(root > 0 || terms !== undefined) || Number.isNaN(s)) return fail(ray, system, i, 'miss');
    excess += (n * (sag - z)) / Math.abs(N) + (n * t * (L * L + M * M)) / (Math.abs(N) * (1 + Math.abs(N)));
    z = sag;
    if (ray.blockedAt < 0 && x * x + y * y > semiDiameter[i] * semiDiameter[i]) ray.blockedAt = i;
    if (nAfter === n) continue; // nothing happens here: not even rounding

    // unit normal, along (-dz/dx, -dz/dy, 1)
    let gradient = c / root; // dz/d(r^2) times 2
    if (terms !== undefined) gradient = slopeOverRadius(c, k, terms, x * x + y * y);
    const gz = 1 / Math.sqrt(1 + gradient * gradient * (x * x + y * y));
    const gx = -gradient * x * gz;
    const gy = -gradient * y * gz;
    const cosine = L * gx + M * gy + N * gz;
    if (nAfter === -n) {
      L -= 2 * cosine * gx;
      M -= 2 * cosine * gy;
      N -= 2 * cosine * gz;
      continue;
    }
    const ratio = n / nAfter; // of one sign but at a mirror
    const squareAfter = 1 - ratio * ratio * (1 - cosine * cosine);
    if (squareAfter < 0) return fail(ray, system, i, 'total reflection');
    const bend = (cosine < 0 ? -1 : 1) * Math.sqrt(squareAfter) - ratio * cosine;
    L = ratio * L + bend * gx;
    M = ratio * M + bend * gy;
    N = ratio * N + bend * gz;
  }
  ray.x = x;
  ray.y = y;
  ray.z = z;
  ray.L = L;
  ray.M = M;
  ray.N = N;
  ray.excess = excess;
  return true;
}

/** The error for a ray that does not get through. @param which  the ray, in words: `the chief ray of field 1`
 */
export function rayError(ray: Ray, which: string): InputError {
  const surface = ray.failedAt + 1;
  return new InputError({
    key: `surfaces[${ray.failedAt}]`,
    message: `surface ${surface}: ${which} ${ray.failure === 'miss' ? 'misses it' : 'is totally reflected there'}`,
    advice: `Give surface ${surface} or one before it a semi_diameter_mm that cuts such rays, or lower the aperture or the field.`,
  });
}

function fail(ray: Ray, system: OpticalSystem, i: number, failure: Ray['failure']): false {
  ray.failedAt = i;
  ray.failure = failure;
  if (failure === 'miss' && ray.blockedAt < 0 && system.semiDiameter[i] < Number.POSITIVE_INFINITY)
    ray.blockedAt = i;
  return false;
}

/** Newton's iteration for the path s from the vertex plane to an aspheric surface; NaN where it finds none.
 */
function meetAsphere(
  c: number,
  k: number,
  terms: Float64Array,
  x0: number,
  y0: number,
  L: number,
  M: number,
  N: number,
  start: number,
): number {
  let s = start;
  for (let step = 0; step < 50; step++) {
    const x = x0 + s * L;
    const y = y0 + s * M;
    const r2 = x * x + y * y;
    const sag = sagAt(c, k, terms, r2);
    const slope = slopeOverRadius(c, k, terms, r2);
    const change = (s * N - sag) / (N - slope * (x * L + y * M));
    s -= change;
    if (!Number.isFinite(s)) return Number.NaN;
    if (Math.abs(change) <= 4e-16 * (Math.abs(s) + Math.abs(sag))) return s;
    // quadratic convergence: once the step is this small, the next is rounding alone
    if (Math.abs(change) <= 1e-9 * Math.abs(s) && step > 2) return s;
  }
  return Number.NaN;
}

/** z = c r^2 / (1 + sqrt(1 - (1+k) c^2 r^2)) + A4 r^4 + A6 r^6 + ... */
function sagAt(c: number, k: number, terms: Float64Array, r2: number): number {
  let sum = 0;
  for (let j = terms.length - 1; j >= 0; j--) sum = sum * r2 + terms[j];
  return (c * r2) / (1 + Math.sqrt(1 - (1 + k) * c * c * r2)) + sum * r2 * r2;
}

/** (dz/dr) / r of the same surface. */
function slopeOverRadius(c: number, k: number, terms: Float64Array, r2: number): number {
  let sum = 0;
  for (let j = terms.length - 1; j >= 0; j--) sum = sum * r2 + (2 * j + 4) * terms[j];
  return c / Math.sqrt(1 - (1 + k) * c * c * r2) + sum * r2;
}
