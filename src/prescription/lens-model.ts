/** A prescription made ready for tracing: checked, scaled, focused, and its first-order optics known. */
import { InputError } from '../errors.js';
import { checkPrescription } from './check.js';
import type { Paraxial } from './paraxial.js';
import { paraxial, traceParaxial } from './paraxial.js';
import type { Prescription } from './prescription.js';
import type { OpticalSystem } from './system.js';
import { scaleSurfaces, systemAt } from './system.js';

/** The lens at one wavelength: same stop, same object, same place of the sensor as at the lens's own
 * wavelength. */
export interface LensAt {
  system: OpticalSystem;
  paraxial: Paraxial;
}

export interface LensModel {
  /** As given, but with its surfaces scaled and the last thickness filled in. */
  prescription: Prescription;
  /** At the lens's own wavelength. */
  reference: LensAt;
  /** How far the sensor stands behind the paraxial focus of the lens's own wavelength, + away from the lens;
   * 0 where the focus was solved. */
  defocusMm: number;
}

/** Check a prescription, scale it, put the sensor at its place and find its first-order optics.
 * @throws {InputError} for what `checkPrescription` and `paraxial` refuse; for a focal length that cannot be
 *   scaled
 */
export function lensModel(given: Prescription): LensModel {
  checkPrescription(given);
  const surfaces = scaled(given);
  const nm = given.wavelengthNm;
  const last = surfaces.length - 1;
  const system = systemAt(surfaces, nm, given.objectDistanceMm, surfaces[last].thicknessMm ?? Number.NaN);
  const properties = paraxial(system, given.aperture, given.field);
  const solved = Number.isNaN(system.thickness[last]);
  if (solved) system.thickness[last] = properties.imageDistanceMm;
  const sensorMm = system.thickness[last];
  surfaces[last] = { ...surfaces[last], thicknessMm: sensorMm };
  return {
    prescription: { ...given, surfaces, scaleToFocalLengthMm: undefined },
    reference: { system, paraxial: properties },
    defocusMm: (sensorMm - properties.imageDistanceMm) * system.index[system.count],
  };
}

/** The same lens at another wavelength. @throws {InputError} for a glass that has no index there */
export function atWavelength(model: LensModel, nm: number): LensAt {
  const { prescription, reference } = model;
  if (nm === prescription.wavelengthNm) return reference;
  const { surfaces, objectDistanceMm } = prescription;
  const { thickness, count } = reference.system;
  const system = systemAt(surfaces, nm, objectDistanceMm, thickness[count - 1]);
  const { stopRadiusMm, fieldScale } = reference.paraxial;
  return { system, paraxial: paraxial(system, { stopRadiusMm }, { fieldScale }) };
}

function scaled({
  surfaces,
  wavelengthNm,
  scaleToFocalLengthMm,
}: Prescription): Prescription['surfaces'][number][] {
  if (scaleToFocalLengthMm === undefined) return [...surfaces];
  const system = systemAt(surfaces, wavelengthNm, undefined, Number.NaN);
  const distant = traceParaxial(system, 1, 0);
  const focalMm = -1 / (distant.u[system.count] * system.index[system.count]);
  if (!(focalMm > 0 && Number.isFinite(focalMm)))
    throw new InputError({
      key: 'scale_to_focal_length_mm',
      message: 'only a lens with a positive focal length can be scaled to one',
      found: `a focal length of ${focalMm} mm`,
      advice: 'Check the signs of the radii.',
    });
  return scaleSurfaces(surfaces, scaleToFocalLengthMm / focalMm);
}
