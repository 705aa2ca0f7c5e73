/** First-order optics: where image and pupils lie, and the two rays from which the third-order sums are made.
 */
import { InputError } from '../errors.js';
import type { Aperture, FieldSize } from './prescription.js';
import type { OpticalSystem } from './system.js';

/** A paraxial ray: heights at the surfaces, slopes dy/dz between them. */
export interface ParaxialRay {
  /** Height at each surface, mm. */
  y: Float64Array;
  /** `u[i]` before surface i, `u[count]` behind the last. */
  u: Float64Array;
}

/** The aperture, or a stop of known radius: what stays when only the wavelength changes. */
export type ApertureOrStop = Aperture | { stopRadiusMm: number };
/** The field, or a chief ray scale H/y (see `Paraxial.fieldScale`): what stays when only the wavelength
 * changes. */
export type FieldOrScale = FieldSize | { fieldScale: number };

/** First-order properties at one wavelength. Distances run along +z like thicknesses: so behind an odd number
 * of mirrors those in front of the light are negative. A point at infinity has an infinite distance. */
export interface Paraxial {
  focalLengthMm: number;
  /** From the last surface to the focus of an object at infinity. */
  backFocusMm: number;
  /** From the first surface to the focus in object space. */
  frontFocusMm: number;
  /** From the first surface to the front principal plane, from the last to the rear one. */
  frontPrincipalMm: number;
  rearPrincipalMm: number;
  /** From the first surface, and its radius (infinite for a lens telecentric on the object side). */
  entrancePupilMm: number;
  entrancePupilRadiusMm: number;
  /** From the last surface, and its radius (infinite for a lens telecentric on the image side). */
  exitPupilMm: number;
  exitPupilRadiusMm: number;
  stopRadiusMm: number;
  /** From the last surface to the paraxial image of the object. */
  imageDistanceMm: number;
  /** 1 / (2 |n' u'|). */
  workingFNumber: number;
  /** Transverse magnification n u / (n' u'): negative for a real object imaged upside down; 0 for an object
   * at infinity. */
  magnification: number;
  /** Lagrange invariant H = n (ubar y - u ybar), > 0. */
  lagrangeMm: number;
  /** 1 over the Petzval sum: + for a field that curves toward the lens; infinite where the sum is 0. */
  petzvalRadiusMm: number;
  /** Chief ray's height at h = 1 in the plane of the sensor, > 0: the ideal image height. */
  imageHeightMm: number;
  /** Object's height at h = 1 (infinite distance: infinite). */
  objectHeightMm: number;
  /** Angle of the chief ray at h = 1 to the axis in front of the lens. */
  halfFieldDeg: number;
  /** Slope of the chief ray of an object at infinity, or of the line from the first vertex to the object:
   * both are fixed by the object alone. */
  fieldScale: number;
  /** +1 where an object point below the axis is imaged above it, -1 where it is not: the outward direction on
   * the sensor for this chief ray. */
  outward: 1 | -1;
  marginal: ParaxialRay;
  chief: ParaxialRay;
}

/** Trace a paraxial ray: n' u' = n u - y c (n' - n). */
export function traceParaxial(system: OpticalSystem, y: number, u: number): ParaxialRay {
  const { count, curvature, index, thickness } = system;
  const ray = { y: new Float64Array(count), u: new Float64Array(count + 1) };
  ray.u[0] = u;
  for (let i = 0; i < count; i++) {
    ray.y[i] = i === 0 ? y : ray.y[i - 1] + thickness[i - 1] * ray.u[i];
    const n = index[i];
    const nAfter = index[i + 1];
    ray.u[i + 1] = (n * ray.u[i] - ray.y[i] * curvature[i] * (nAfter - n)) / nAfter;
  }
  return ray;
}

/** Petzval sum, -sum of c (1/n' - 1/n), in 1/mm: S_IV = H^2 P. Source: Born and Wolf, Principles of Optics,
 * 5.5.3 (cited from memory). */
export function petzvalSum({ count, curvature, index }: OpticalSystem): number {
  let sum = 0;
  for (let i = 0; i < count; i++) sum -= curvature[i] * (1 / index[i + 1] - 1 / index[i]);
  return sum;
}

/** First-order properties of a lens for its aperture and field.
 *
 * Every ray from the object is a sum of two: one from the object's axial point (a), one through the first
 * vertex (b). The chief ray is the sum that crosses the axis in the stop, so the stop may lie anywhere, also
 * where a pupil is at infinity.
 *
 * @param system  its last thickness may be NaN: the sensor then stands at the paraxial image
 * @throws {InputError} where no beam forms an image: stop at an image of the object, light that does not
 *   converge, aperture or field that the conjugate does not have
 */
export function paraxial(system: OpticalSystem, aperture: ApertureOrStop, field: FieldOrScale): Paraxial {
  const { count, index, stop, objectDistance, thickness } = system;
  const last = count - 1;
  const nImage = index[count]; // +1 or -1: the sensor is in air
  const axial = traceParaxial(system, 1, 1 / objectDistance);
  const vertex = traceParaxial(system, 0, 1);

  const size = Math.max(...axial.y.map(Math.abs));
  if (Math.abs(axial.y[stop]) <= 1e-9 * size)
    throw new InputError({
      key: `surfaces[${stop}]`,
      message: `surface ${stop + 1}: the stop lies at the object or at an image of it, so it limits no beam`,
      advice: 'Move the stop away from the image.',
    });
  const mix = -vertex.y[stop] / axial.y[stop];
  const chiefU = 1 + mix * axial.u[0]; // slope of the chief ray in front of the lens, per unit of field scale
  const chiefLastY = vertex.y[last] + mix * axial.y[last];
  const chiefLastU = vertex.u[count] + mix * axial.u[count];
  const imageDistanceMm = -axial.y[last] / axial.u[count];
  const exitPupilMm = -chiefLastY / chiefLastU;
  const sensorMm = Number.isNaN(thickness[last]) ? imageDistanceMm : thickness[last];
  checkImage(nImage, imageDistanceMm, sensorMm, exitPupilMm, Number.isNaN(thickness[last]));

  const entrancePupilMm = -mix / chiefU;
  const marginalScale = solveAperture(system, aperture, axial, entrancePupilMm);
  const sensorHeight = chiefLastY + sensorMm * chiefLastU; // per unit of field scale
  const fieldScale = solveField(system, field, sensorHeight, chiefU);
  const scaled = (value: (of: ParaxialRay) => Float64Array) =>
    value(vertex).map((v, i) => fieldScale * (v + mix * value(axial)[i]));
  const chief = { y: scaled(({ y }) => y), u: scaled(({ u }) => u) };
  chief.y[stop] = 0; // by construction; clears the rounding
  const marginal = { y: axial.y.map((y) => marginalScale * y), u: axial.u.map((u) => marginalScale * u) };

  const distant = objectDistance === Number.POSITIVE_INFINITY ? axial : traceParaxial(system, 1, 0);
  const power = -nImage * distant.u[count];
  const focalLengthMm = 1 / power;
  const backFocusMm = -distant.y[last] / distant.u[count];
  const frontFocusMm = (nImage * vertex.u[count]) / -power;
  const petzval = petzvalSum(system);
  return {
    focalLengthMm,
    backFocusMm,
    frontFocusMm,
    frontPrincipalMm: frontFocusMm + focalLengthMm,
    rearPrincipalMm: backFocusMm - nImage * focalLengthMm,
    entrancePupilMm,
    entrancePupilRadiusMm: pupilRadius(marginal.y[0], marginal.u[0], entrancePupilMm),
    exitPupilMm,
    exitPupilRadiusMm: pupilRadius(marginal.y[last], marginal.u[count], exitPupilMm),
    stopRadiusMm: Math.abs(marginal.y[stop]),
    imageDistanceMm,
    workingFNumber: 1 / (2 * Math.abs(marginal.u[count])),
    magnification: axial.u[0] === 0 ? 0 : axial.u[0] / (nImage * axial.u[count]),
    lagrangeMm: marginalScale * fieldScale,
    petzvalRadiusMm: petzval === 0 ? Number.POSITIVE_INFINITY : 1 / petzval,
    imageHeightMm: fieldScale * Math.abs(sensorHeight),
    objectHeightMm: fieldScale * Math.abs(objectDistance),
    halfFieldDeg: (Math.atan(Math.abs(chief.u[0])) * 180) / Math.PI,
    fieldScale,
    outward: sensorHeight >= 0 ? 1 : -1,
    marginal,
    chief,
  };
}

/** The sensor must catch a real image, at the focus or not too far from it. */
function checkImage(
  nImage: number,
  imageMm: number,
  sensorMm: number,
  exitPupilMm: number,
  solved: boolean,
): void {
  if (!Number.isFinite(imageMm) || (solved && imageMm * nImage < 0))
    throw new InputError({
      key: 'surfaces',
      message: 'the lens forms no real image: the light behind its last surface does not converge',
      found: Number.isFinite(imageMm) ? `a virtual image ${imageMm} mm from the last surface` : 'no image',
      advice: 'Check the signs of the radii and the object distance.',
    });
  // Past a tenth of the way from pupil to focus, blur is a tenth of the pupil: no image, but a wrong number
  if (!solved && Math.abs(sensorMm - imageMm) > 0.1 * Math.abs(imageMm - exitPupilMm))
    throw new InputError({
      key: 'surfaces',
      message: 'the sensor is far out of focus',
      found: `${sensorMm} mm behind the last surface, where the paraxial focus is at ${imageMm} mm`,
      advice: 'Leave the last thickness_mm out to put the sensor at the paraxial focus.',
    });
}

function pupilRadius(y: number, u: number, distanceMm: number): number {
  return Number.isFinite(distanceMm) ? Math.abs(y + u * distanceMm) : Number.POSITIVE_INFINITY;
}

/** Height of the rim ray at the first surface. */
function solveAperture(
  system: OpticalSystem,
  aperture: ApertureOrStop,
  axial: ParaxialRay,
  entrancePupilMm: number,
): number {
  if ('stopRadiusMm' in aperture) return aperture.stopRadiusMm / Math.abs(axial.y[system.stop]);
  if ('fNumber' in aperture) return 1 / (2 * aperture.fNumber * Math.abs(axial.u[system.count]));
  if ('objectNa' in aperture) return Math.abs(Math.tan(Math.asin(aperture.objectNa)) / axial.u[0]);
  if (!Number.isFinite(entrancePupilMm))
    throw new InputError({
      key: 'entrance_pupil_mm',
      message: 'the entrance pupil of this lens is at infinity and has no diameter',
      advice: 'Give object_na or f_number instead.',
    });
  return Math.abs(aperture.entrancePupilMm / 2 / (1 + axial.u[0] * entrancePupilMm));
}

/** Slope of the chief ray of a distant object, or of the line from the first vertex to the object. */
function solveField(
  system: OpticalSystem,
  field: FieldOrScale,
  sensorHeight: number,
  chiefU: number,
): number {
  if ('fieldScale' in field) return field.fieldScale;
  if ('objectHeightMm' in field) return field.objectHeightMm / Math.abs(system.objectDistance);
  if ('imageHeightMm' in field) return field.imageHeightMm / Math.abs(sensorHeight);
  const scale = Math.tan((field.halfAngleDeg * Math.PI) / 180) / Math.abs(chiefU);
  if (!Number.isFinite(scale) || Math.abs(chiefU) < 1e-9)
    throw new InputError({
      key: 'half_field_deg',
      message: 'the chief ray of this lens runs parallel to the axis in front of it',
      advice: 'Give full_field_mm or object_height_mm instead.',
    });
  return scale;
}
