/** From the keys of a prescription file to the prescription that is traced. */
import type { Aperture, FieldSize, Glass, Prescription, Surface } from '../prescription/prescription.js';
import type { PrescribedLens } from './schemas/lens.js';
import type { PrescriptionFile } from './schemas/prescription.js';

type SurfaceFile = PrescriptionFile['surfaces'][number];
/** What a rig's lens may state beside its prescription; it goes before what the prescription states. */
type Stated = Partial<
  Pick<PrescribedLens, 'name' | 'wavelength_nm' | 'f_number' | 'full_field_mm' | 'focal_length_mm'>
>;

/** @param stated  keys of the rig's lens that go before the file's own; its focal length scales the lens */
export function prescriptionFromFile(file: PrescriptionFile, stated: Stated = {}): Prescription {
  const prescription: Prescription = {
    name: stated.name ?? file.name,
    wavelengthNm: stated.wavelength_nm ?? file.wavelength_nm,
    surfaces: file.surfaces.map(surfaceFromFile),
    aperture: stated.f_number === undefined ? apertureFromFile(file) : { fNumber: stated.f_number },
    field: stated.full_field_mm === undefined ? fieldFromFile(file) : { imageHeightMm: stated.full_field_mm },
  };
  const focalLengthMm = stated.focal_length_mm ?? file.scale_to_focal_length_mm;
  if (focalLengthMm !== undefined) prescription.scaleToFocalLengthMm = focalLengthMm;
  if (file.object_distance_mm !== 'infinity') prescription.objectDistanceMm = file.object_distance_mm;
  return prescription;
}

function apertureFromFile({ f_number, entrance_pupil_mm, object_na }: PrescriptionFile): Aperture {
  if (f_number !== undefined) return { fNumber: f_number };
  if (entrance_pupil_mm !== undefined) return { entrancePupilMm: entrance_pupil_mm };
  return { objectNa: object_na! }; // the schema asks for one of the three
}

function fieldFromFile({ full_field_mm, half_field_deg, object_height_mm }: PrescriptionFile): FieldSize {
  if (full_field_mm !== undefined) return { imageHeightMm: full_field_mm };
  if (half_field_deg !== undefined) return { halfAngleDeg: half_field_deg };
  return { objectHeightMm: object_height_mm! };
}

function surfaceFromFile(file: SurfaceFile): Surface {
  const surface: Surface = {};
  if (typeof file.radius_mm === 'number') surface.radiusMm = file.radius_mm;
  if (file.conic !== undefined) surface.conic = file.conic;
  if (file.aspheric_mm !== undefined) surface.asphericMm = file.aspheric_mm;
  if (file.thickness_mm !== undefined) surface.thicknessMm = file.thickness_mm;
  if (file.glass !== undefined) surface.glass = glassFromFile(file.glass);
  if (file.mirror) surface.mirror = true;
  if (file.stop) surface.stop = true;
  if (file.semi_diameter_mm !== undefined) surface.semiDiameterMm = file.semi_diameter_mm;
  return surface;
}

function glassFromFile(file: NonNullable<SurfaceFile['glass']>): Glass {
  if (typeof file !== 'object') return { code: Number(file) };
  if (file.n !== undefined) return { n: file.n };
  if (file.sellmeier !== undefined) return { sellmeier: { B: file.sellmeier.B, CUm2: file.sellmeier.C_um2 } };
  return { nd: file.nd!, vd: file.vd! };
}
