/** The door from a lens's surfaces to its coefficients. */
import type { Lens, RelativeIllumination } from '../optics/rig.js';
import { toLens } from '../prescription/derive.js';
import type { Prescription } from '../prescription/prescription.js';

export interface InRig {
  /** Rising: where the coefficients are wanted. */
  wavelengthsNm: readonly number[];
  /** The stop in use: a smaller one is vignetted less. Left out: the lens's own. */
  fNumber?: number;
  /** Where the rig's lens states it. Left out: what exact rays say. */
  relativeIllumination?: RelativeIllumination;
}

/** The lens that a prescription describes, for a rig.
 *
 * @param prescription  checked; what the rig's lens states beside it is already in it
 * @throws {InputError} keys are those of the prescription file; the caller adds file and line
 */
export function lensFromPrescription(
  prescription: Prescription,
  { wavelengthsNm, fNumber, relativeIllumination }: InRig,
): Lens {
  if (relativeIllumination === undefined) return toLens(prescription, wavelengthsNm, { fNumber });
  return {
    ...toLens(prescription, wavelengthsNm, { relativeIllumination: 'cos4' }), // traces no exact ray
    relativeIllumination,
  };
}
