/** The door from a lens's surfaces to its coefficients. */
import { InputError } from '../errors.js';
import type { Lens, RelativeIllumination } from '../optics/rig.js';
import type { Prescription } from '../prescription/prescription.js';

/** The lens that a prescription describes.
 *
 * @param prescription          checked; what the rig's lens states beside it is already in it
 * @param wavelengthsNm         rising: where the coefficients are wanted
 * @param relativeIllumination  where the rig's lens states it
 * @throws {InputError} keys are those of the prescription file; the caller adds file and line
 */
export function lensFromPrescription(
  prescription: Prescription,
  _wavelengthsNm: readonly number[],
  _relativeIllumination?: RelativeIllumination,
): Lens {
  throw new InputError({
    message: `a rig cannot take the prescription '${prescription.name}' yet`,
    advice: 'State f_number, full_field_mm, wavelength_nm and waves.',
  });
}
