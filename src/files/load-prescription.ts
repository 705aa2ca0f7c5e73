/** Prescriptions from files, and faults of tracing told at the file's own lines. */
import { InputError } from '../errors.js';
import { checkPrescription } from '../prescription/check.js';
import type { Prescription } from '../prescription/prescription.js';
import { checkSchema } from './check-schema.js';
import { checkKind } from './kinds.js';
import { prescriptionFromFile } from './prescription-from-file.js';
import { prescriptionFile } from './schemas/prescription.js';
import { type Path, parseKeyPath, type Source } from './source.js';
import { readSource } from './yaml-source.js';

/** Reads a prescription file. @throws {InputError} all faults of the file */
export function loadPrescription(path: string): Prescription {
  return withPrescription(path, (prescription) => prescription);
}

/** Reads a prescription file and does something with it; the faults that this finds are told at the lines of the file.
 * @throws {InputError} all faults of the file, else those of `use`
 */
export function withPrescription<Result>(path: string, use: (prescription: Prescription) => Result): Result {
  const source = readSource(path);
  checkKind('prescription', source);
  const prescription = prescriptionFromFile(checkSchema(prescriptionFile, source));
  return atLinesOf(source, [], () => {
    checkPrescription(prescription);
    return use(prescription);
  });
}

/** Runs what may find faults in a prescription, and adds the place of each.
 * @param at  where the prescription stands in the source
 */
export function atLinesOf<Result>(source: Source, at: Path, run: () => Result): Result {
  try {
    return run();
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    throw new InputError(
      error.faults.map((fault) => {
        if (fault.file !== undefined || fault.key?.startsWith('--')) return fault; // an option's fault stands in no file
        const path = [...at, ...parseKeyPath(fault.key ?? '')];
        return { ...fault, ...source.place(path, fault.key === undefined ? 'key' : 'value') };
      }),
    );
  }
}
