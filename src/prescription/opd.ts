/** Exact rays of one field point: where they land and how their optical paths differ. */
import { InputError } from '../errors.js';
import { aim, paraxialStart } from './aim.js';
import { launch, Ray, rayError, trace } from './exact.js';
import type { LensAt } from './lens-model.js';

/** The rays of one field point. Pupil coordinates are places in the stop over its radius: m along the field,
 * outward; s across it. */
export class FieldTracer {
  readonly lens: LensAt;
  readonly h: number;
  /** Where the chief ray lands on the sensor, mm, + outward. */
  readonly chiefHeightMm: number;
  readonly #ray = new Ray();
  readonly #start = new Float64Array(2);
  readonly #chiefStart = new Float64Array(2);
  readonly #chiefPath: number;
  /** Centre of the reference sphere in its own meridian (signed as rays are) and 1 over its radius. */
  readonly #centreY: number;
  readonly #sphereCurvature: number;

  /** @throws {InputError} where the chief ray finds no way through the lens */
  constructor(lens: LensAt, h: number) {
    const { system, paraxial } = lens;
    this.lens = lens;
    this.h = h;
    this.#centreY = h * paraxial.outward * paraxial.imageHeightMm;
    const axialMm = (system.thickness[system.count - 1] - paraxial.exitPupilMm) * system.index[system.count];
    this.#sphereCurvature = Number.isFinite(axialMm)
      ? Math.sign(axialMm) / Math.hypot(axialMm, this.#centreY)
      : 0;
    paraxialStart(lens, h, 0, 0, this.#start);
    const found = this.#find(0, 0) && this.#through();
    this.#chiefStart.set(this.#start);
    if (!found) throw this.#error(0, 0);
    this.#chiefPath = this.#pathToSphere();
    this.chiefHeightMm = this.#landing() * paraxial.outward;
  }

  /** Trace the ray through (m, s) of the stop.
   *
   * @returns whether it reaches the sensor with nothing in its way. False also where surfaces in front bend
   *   all light away from that place of the stop, so that no ray goes there
   * @throws {InputError} where it misses a surface without semi-diameter, or is totally reflected where no
   *   semi-diameter cuts it before
   */
  passes(m: number, s: number): boolean {
    const found = this.#seek(m, s);
    if (this.#ray.blockedAt >= 0) return false;
    if (!found && this.#ray.failedAt < 0) return false;
    if (!found) throw this.#error(m, s);
    return true;
  }

  /** W = path of the chief ray less that of the ray through (m, s), to the reference sphere, in mm: positive
   * for an undercorrected lens.
   *
   * The sphere is centred on the ideal image point, h times `Paraxial.imageHeightMm` in the plane of the
   * sensor, and passes through the centre of the exit pupil. So W holds the tilt of distortion and the
   * defocus of a sensor that is off the focus. Vignetting is not looked at.
   * Source: W. T. Welford, Aberrations of Optical Systems (1986), ch. 7 (cited from memory).
   * @throws {InputError} where the ray misses a surface or is totally reflected
   */
  wavefrontMm(m: number, s: number): number {
    if (!this.#seek(m, s)) throw this.#error(m, s);
    return this.#chiefPath - this.#pathToSphere();
  }

  /** The ray sought last in front of the lens, in coordinates in which equal areas carry equal light from
   * this field point: direction cosines where the object is near; where it is distant, the place in the plane
   * of the first vertex times cos^2 of the field angle (one cosine for the beam's width and three for the
   * solid angle that an element of the image plane takes up, on two coordinates). */
  get lightCoordinates(): { across: number; along: number } {
    const { system, paraxial } = this.lens;
    launch(this.#ray, system, this.h * paraxial.fieldScale, this.#start[0], this.#start[1]);
    const { x, y, L, M, N } = this.#ray;
    if (system.objectDistance === Number.POSITIVE_INFINITY) return { across: x * N * N, along: y * N * N };
    return { across: L, along: M };
  }

  #seek(m: number, s: number): boolean {
    // a start on the line of the paraxial pupil through the real chief ray
    const scale = this.lens.paraxial.marginal.y[0];
    this.#start[0] = this.#chiefStart[0] + s * scale;
    this.#start[1] = this.#chiefStart[1] + m * scale;
    return this.#find(m, s) && this.#through();
  }

  #find(m: number, s: number): boolean {
    return aim(this.#ray, this.lens, this.h, s, m, this.#start);
  }

  #through(): boolean {
    const { system, paraxial } = this.lens;
    launch(this.#ray, system, this.h * paraxial.fieldScale, this.#start[0], this.#start[1]);
    return trace(this.#ray, system);
  }

  #pathToSphere(): number {
    return pathToSphere(this.#ray, this.lens, this.#centreY, this.#sphereCurvature);
  }

  /** Height of the ray traced last in the plane of the sensor. */
  #landing(): number {
    const { system } = this.lens;
    const { y, z, M, N } = this.#ray;
    return y + (M / N) * (system.thickness[system.count - 1] - z);
  }

  #error(m: number, s: number): InputError {
    const which = `the ray of field ${this.h} through (${m.toFixed(3)}, ${s.toFixed(3)}) of the stop`;
    if (this.#ray.failedAt >= 0) return rayError(this.#ray, which);
    return new InputError({
      key: 'surfaces',
      message: `no way through the lens was found for ${which}`,
      advice: 'Lower the aperture or the field.',
    });
  }
}

/** Optical path of a ray that was traced through a lens, up to a reference sphere, less the length of the
 * axis and the sphere's radius; mm.
 *
 * With q from the point on the last surface to the centre of the sphere, b = q.d and e the distance at which
 * the ray passes the centre, the ray meets the sphere sqrt(R^2 - e^2) before the foot of the perpendicular,
 * so its path there is b - R + e^2 / (R + sqrt(R^2 - e^2)). In 1/R this serves an exit pupil at infinity,
 * too.
 *
 * @param centreY    centre of the sphere in the plane of the sensor, in the meridian of the field, mm
 * @param curvature  1/R; negative where the exit pupil lies behind the image
 */
export function pathToSphere(ray: Ray, { system }: LensAt, centreY: number, curvature: number): number {
  const { x, y, z, L, M, N, excess } = ray;
  const direction = system.index[system.count]; // +1 or -1: the sensor is in air
  const sensorMm = system.thickness[system.count - 1];
  const qy = centreY - y;
  const qz = sensorMm - z;
  // b less the sensor's distance along the light: N - direction without cancellation
  const alongAxis = (-direction * sensorMm * (L * L + M * M)) / (1 + Math.abs(N)) - z * N;
  const b = alongAxis + qy * M - x * L;
  // e^2 as the square of q x d
  const ex = qy * N - qz * M;
  const ey = qz * L + x * N;
  const ez = -x * M - qy * L;
  const e2 = ex * ex + ey * ey + ez * ez;
  return excess + b + (e2 * curvature) / (1 + Math.sqrt(1 - e2 * curvature * curvature));
}
