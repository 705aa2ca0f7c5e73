/** What can be wrong with a prescription, found before anything is traced. */
import type { Fault } from '../errors.js';
import { InputError } from '../errors.js';
import type { Aperture, FieldSize, Glass, Prescription, Surface } from './prescription.js';
import { ASPHERIC_TERMS } from './prescription.js';

/** Check a prescription.
 * @throws {InputError} with all faults that were found, each with the path of its key (`surfaces[0]` is
 *   surface 1)
 */
export function checkPrescription(prescription: Prescription): void {
  const { surfaces, wavelengthNm } = prescription;
  const faults: Fault[] = [];
  const positive = (key: string, what: string, value: number | undefined) => {
    if (value !== undefined && !(Number.isFinite(value) && value > 0))
      faults.push({
        key,
        message: `${what} is not possible`,
        found: String(value),
        allowed: 'a number above 0',
      });
  };
  positive('wavelength_nm', 'this wavelength', wavelengthNm);
  positive('scale_to_focal_length_mm', 'this focal length', prescription.scaleToFocalLengthMm);
  if (surfaces.length === 0) faults.push({ key: 'surfaces', message: 'the lens has no surface' });
  checkStop(surfaces, faults);
  surfaces.forEach((surface, i) => {
    checkSurface(surface, i, i === surfaces.length - 1, faults);
  });
  const last = surfaces.at(-1);
  if (last !== undefined && mediumBehind(surfaces, surfaces.length - 1) !== undefined)
    faults.push({
      key: `surfaces[${surfaces.length - 1}].glass`,
      message: 'the space in front of the sensor is not air',
      advice: 'For a sensor behind cemented glass add a flat surface of thickness_mm 0 at the end.',
    });
  checkConjugate(prescription.objectDistanceMm, prescription.aperture, prescription.field, faults);
  if (faults.length > 0) throw new InputError(faults);
}

/** The glass behind a surface: a mirror keeps what comes before it; undefined is air. */
export function mediumBehind(surfaces: readonly Surface[], i: number): Glass | undefined {
  let at = i;
  while (at >= 0 && surfaces[at].mirror) at--;
  return at < 0 ? undefined : surfaces[at].glass;
}

function checkStop(surfaces: readonly Surface[], faults: Fault[]): void {
  const stops = surfaces.flatMap((surface, i) => (surface.stop ? [i + 1] : []));
  if (stops.length === 1 || surfaces.length === 0) return;
  faults.push({
    key: 'surfaces',
    message: stops.length === 0 ? 'no surface is the stop' : 'more than one surface is the stop',
    found: stops.length === 0 ? undefined : `surfaces ${stops.join(', ')}`,
    allowed: 'one surface with stop: true',
    advice: 'A stop in the air is a surface of its own, without a radius.',
  });
}

function checkSurface(surface: Surface, i: number, isLast: boolean, faults: Fault[]): void {
  const key = `surfaces[${i}]`;
  const fault = (name: string, message: string, found?: unknown, allowed?: string, advice?: string) =>
    faults.push({
      key: `${key}.${name}`,
      message: `surface ${i + 1}: ${message}`,
      found: found === undefined ? undefined : String(found),
      allowed,
      advice,
    });
  const { radiusMm, conic, thicknessMm, semiDiameterMm, glass, asphericMm } = surface;
  if (radiusMm !== undefined && (Number.isNaN(radiusMm) || radiusMm === 0))
    fault(
      'radius_mm',
      'this radius is not possible',
      radiusMm,
      'a number other than 0; left out or infinity: flat',
    );
  if (conic !== undefined && !Number.isFinite(conic))
    fault('conic', 'this conic constant is not possible', conic, 'a finite number');
  if (thicknessMm === undefined && !isLast)
    fault('thickness_mm', 'the thickness is missing', undefined, 'left out behind the last surface only');
  if (thicknessMm !== undefined && !Number.isFinite(thicknessMm))
    fault('thickness_mm', 'this thickness is not possible', thicknessMm, 'a finite number');
  if (semiDiameterMm !== undefined && !(semiDiameterMm > 0))
    fault('semi_diameter_mm', 'this semi-diameter is not possible', semiDiameterMm, 'a number above 0');
  for (const [term, value] of Object.entries(asphericMm ?? {})) {
    if (!(ASPHERIC_TERMS as readonly string[]).includes(term))
      fault(`aspheric_mm.${term}`, 'there is no such aspheric term', undefined, ASPHERIC_TERMS.join(', '));
    else if (!Number.isFinite(value))
      fault(`aspheric_mm.${term}`, 'this aspheric term is not possible', value, 'a finite number');
  }
  if (surface.mirror && glass !== undefined)
    fault(
      'glass',
      'a mirror has no glass of its own',
      undefined,
      undefined,
      'Light stays in what came before the mirror; drop one of the two.',
    );
  else if (glass !== undefined) checkGlass(glass, fault);
}

type AddFault = (name: string, message: string, found?: unknown, allowed?: string, advice?: string) => void;

function checkGlass(glass: Glass, fault: AddFault): void {
  if ('sellmeier' in glass && glass.sellmeier.B.length !== glass.sellmeier.CUm2.length) {
    const { B, CUm2 } = glass.sellmeier;
    fault(
      'glass.sellmeier',
      'B and C_um2 differ in length',
      `${B.length} and ${CUm2.length}`,
      'as many B as C_um2',
    );
    return;
  }
  if ('code' in glass && !(Number.isInteger(glass.code) && glass.code >= 100_000 && glass.code <= 999_999)) {
    fault(
      'glass',
      'this is not a glass code',
      glass.code,
      'six digits, such as 517642 for n_d 1.517 and V_d 64.2',
    );
    return;
  }
  const vd = 'vd' in glass ? glass.vd : 'code' in glass ? (glass.code % 1000) / 10 : 1;
  if (!(vd > 0)) fault('glass', 'this V_d is not possible', vd, 'a number above 0');
}

function checkConjugate(
  objectDistanceMm: number | undefined,
  aperture: Aperture,
  field: FieldSize,
  faults: Fault[],
): void {
  const infinite = objectDistanceMm === undefined || Math.abs(objectDistanceMm) === Number.POSITIVE_INFINITY;
  if (objectDistanceMm === 0 || Number.isNaN(objectDistanceMm))
    faults.push({
      key: 'object_distance_mm',
      message: 'this object distance is not possible',
      found: String(objectDistanceMm),
      allowed: 'infinity, a number above 0, or below 0 for a virtual object behind the first surface',
    });
  const range = (key: string, value: number, below: number) => {
    if (!(value > 0 && value < below))
      faults.push({
        key,
        message: 'this value is not possible',
        found: String(value),
        allowed: below === Number.POSITIVE_INFINITY ? 'a number above 0' : `above 0 and below ${below}`,
      });
  };
  if ('fNumber' in aperture) range('f_number', aperture.fNumber, Number.POSITIVE_INFINITY);
  else if ('entrancePupilMm' in aperture)
    range('entrance_pupil_mm', aperture.entrancePupilMm, Number.POSITIVE_INFINITY);
  else {
    range('object_na', aperture.objectNa, 1);
    if (infinite)
      faults.push({
        key: 'object_na',
        message: 'an object at infinity has no numerical aperture',
        advice: 'Give f_number or entrance_pupil_mm, or a finite object_distance_mm.',
      });
  }
  if ('imageHeightMm' in field) range('full_field_mm', field.imageHeightMm, Number.POSITIVE_INFINITY);
  else if ('halfAngleDeg' in field) range('half_field_deg', field.halfAngleDeg, 90);
  else {
    range('object_height_mm', field.objectHeightMm, Number.POSITIVE_INFINITY);
    if (infinite)
      faults.push({
        key: 'object_height_mm',
        message: 'an object at infinity has no height',
        advice: 'Give full_field_mm or half_field_deg, or a finite object_distance_mm.',
      });
  }
}
