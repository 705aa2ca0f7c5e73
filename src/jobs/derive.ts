/** `derive`: the coefficients of a lens from its surfaces, and how much of the exact wavefront they explain. */
import { withPrescription } from '../files/load-prescription.js';
import type { Lens } from '../optics/rig.js';
import { type DeriveOptions, deriveLens } from '../prescription/derive.js';
import { type DeriveReport, deriveReport } from '../prescription/derive-report.js';
import type { Prescription } from '../prescription/prescription.js';

export type { DeriveOptions } from '../prescription/derive.js';
export type { DeriveReport } from '../prescription/derive-report.js';
export type { Prescription } from '../prescription/prescription.js';

export interface DeriveResult {
  report: DeriveReport;
  /** The lens of a rig, as `render` and `zones` take it. */
  lens: Lens;
}

/** Derive a lens from its surfaces.
 *
 * @param prescription           or the name of its file
 * @param options.wavelengthsNm  left out: `defaultWavelengths`
 * @throws {InputError} all faults of the file; surfaces that form no image; rays that miss a surface or are totally reflected (each names
 *   the surface, and in a file its line); fields and wavelengths that cannot be
 */
export function derive(prescription: string | Prescription, options: DeriveOptions = {}): DeriveResult {
  if (typeof prescription === 'string')
    return withPrescription(prescription, (read) => derive(read, options));
  const { wavelengthsNm = defaultWavelengths(prescription.wavelengthNm) } = options;
  const derivation = deriveLens(prescription, { ...options, wavelengthsNm });
  return { report: deriveReport(derivation), lens: derivation.lens };
}

/** 25 nm apart, so that what is interpolated between them is right to 0.02 waves (measured on a singlet and two triplets: 0.014). */
const STEP_NM = 25;

/** Where a lens is derived if nothing else is asked for: from 400 to 700 nm, or on to 1000 nm for a lens made for a wavelength past that. */
export function defaultWavelengths(ownNm: number): number[] {
  const last = ownNm > 700 ? 1000 : 700;
  return Array.from({ length: (last - 400) / STEP_NM + 1 }, (_, i) => 400 + i * STEP_NM);
}
