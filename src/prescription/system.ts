/** The surfaces as numbers in typed arrays, at one wavelength: what every trace runs over. */
import { InputError } from '../errors.js';
import { mediumBehind } from './check.js';
import { refractiveIndex } from './glass.js';
import type { Surface } from './prescription.js';
import { ASPHERIC_TERMS } from './prescription.js';

export interface OpticalSystem {
  nm: number;
  /** Number of surfaces. */
  count: number;
  /** Curvature 1/R and conic constant of each surface. */
  curvature: Float64Array;
  conic: Float64Array;
  /** A4, A6, ... of each surface up to its last term; undefined where it has none. */
  aspheric: readonly (Float64Array | undefined)[];
  /** Distance to the next surface along z; the last entry reaches to the sensor (NaN until that is known). */
  thickness: Float64Array;
  /** `index[i]` lies before surface i, `index[count]` behind the last. It changes its sign at each mirror
   * (light runs to the left where it is negative), which lets one formula serve refraction and reflection. */
  index: Float64Array;
  /** Position of the stop in the list. */
  stop: number;
  /** Infinite where nothing is cut. */
  semiDiameter: Float64Array;
  /** Distance of the object in front of the first surface, + to the left; may be infinite. */
  objectDistance: number;
}

/** Lay the surfaces out at a wavelength.
 * @param sensorMm the last thickness
 * @throws {InputError} for a glass that has no index at this wavelength
 */
export function systemAt(
  surfaces: readonly Surface[],
  nm: number,
  objectDistanceMm: number | undefined,
  sensorMm: number,
): OpticalSystem {
  const count = surfaces.length;
  const index = new Float64Array(count + 1);
  index[0] = 1;
  let direction = 1;
  for (let i = 0; i < count; i++) {
    if (surfaces[i].mirror) direction = -direction;
    const glass = mediumBehind(surfaces, i);
    const n = glass === undefined ? 1 : refractiveIndex(glass, nm);
    if (!(n >= 1 && n <= 5))
      throw new InputError({
        key: `surfaces[${i}].glass`,
        message: `surface ${i + 1}: the glass has no usable index at ${nm} nm`,
        found: String(n),
        allowed: 'a refractive index from 1 to 5',
      });
    index[i + 1] = direction * n;
  }
  const of = (value: (surface: Surface) => number) => Float64Array.from(surfaces, value);
  const thickness = of(({ thicknessMm }) => thicknessMm ?? Number.NaN);
  thickness[count - 1] = sensorMm;
  return {
    nm,
    count,
    curvature: of(({ radiusMm }) => (radiusMm === undefined ? 0 : 1 / radiusMm)),
    conic: of(({ conic }) => conic ?? 0),
    aspheric: surfaces.map(asphericOf),
    thickness,
    index,
    stop: surfaces.findIndex(({ stop }) => stop),
    semiDiameter: of(({ semiDiameterMm }) => semiDiameterMm ?? Number.POSITIVE_INFINITY),
    objectDistance:
      Math.abs(objectDistanceMm ?? Number.POSITIVE_INFINITY) === Number.POSITIVE_INFINITY
        ? Number.POSITIVE_INFINITY
        : (objectDistanceMm as number),
  };
}

function asphericOf({ asphericMm }: Surface): Float64Array | undefined {
  if (asphericMm === undefined) return undefined;
  const values = ASPHERIC_TERMS.map((term) => asphericMm[term] ?? 0);
  const length = values.findLastIndex((value) => value !== 0) + 1;
  return length === 0 ? undefined : Float64Array.from(values.slice(0, length));
}

/** Scale surfaces as one body: every length times `factor`, so A_j times factor^(1-j). */
export function scaleSurfaces(surfaces: readonly Surface[], factor: number): Surface[] {
  const times = (value: number | undefined) => (value === undefined ? undefined : value * factor);
  return surfaces.map((surface) => ({
    ...surface,
    radiusMm: times(surface.radiusMm),
    thicknessMm: times(surface.thicknessMm),
    semiDiameterMm: times(surface.semiDiameterMm),
    asphericMm:
      surface.asphericMm &&
      Object.fromEntries(
        Object.entries(surface.asphericMm).map(([term, value]) => [
          term,
          value * factor ** (1 - Number(term.slice(1))),
        ]),
      ),
  }));
}
