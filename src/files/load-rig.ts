/** Rigs and their parts, from files, texts and objects. */
import { InputError } from '../errors.js';
import type { Camera, Lens, Rig } from '../optics/rig.js';
import { checkSchema } from './check-schema.js';
import { checkKind } from './kinds.js';
import { type InRig, lensFromPrescription } from './lens-from-prescription.js';
import { atLinesOf } from './load-prescription.js';
import { prescriptionFromFile } from './prescription-from-file.js';
import { cameraFromFile, lensFromFile, rigFromFile } from './rig-from-file.js';
import { cameraPart } from './schemas/camera.js';
import { isMapping } from './schemas/cross-check.js';
import { isPrescribed, lensPart, type PrescribedLens, type StatedLens } from './schemas/lens.js';
import type { PrescriptionFile } from './schemas/prescription.js';
import { type RigFile, stopBelowLens, wholeRig } from './schemas/rig.js';
import { namedSource, objectSource, type Path, type Source } from './source.js';
import { SourceTree } from './source-tree.js';
import { parseSource, readSource } from './yaml-source.js';

/** What the command line puts in place of the mount's own. */
export interface RigOverrides {
  fNumber?: number;
  sensorShiftUm?: number;
}

export interface ParseOptions extends RigOverrides {
  /** Where the names of parts start. Default: the working folder. */
  folder?: string;
}

/** Reads a rig file with its parts.
 *
 * @param path       as the user named it
 * @param overrides  in place of the mount's own; their faults carry the names of the command line's options
 * @returns the rig with every default filled in
 * @throws {InputError} all faults of the file and its parts
 */
export function loadRig(path: string, overrides: RigOverrides = {}): Rig {
  return toRig(rigTree(readSource(path), '.', overrides));
}

/** The rig in a text (YAML or JSON) or in an object with the keys of a rig file.
 * @throws {InputError} all faults; lines are those of the text
 */
export function parseRig(input: unknown, options: ParseOptions = {}): Rig {
  return toRig(rigTree(sourceOf(input), options.folder ?? '.', options));
}

/** A rig file with its parts in place and the fixed defaults filled in, in the file's own keys: for those who change
 * keys by path before they go on with `parseRig`.
 * @throws {InputError} as `loadRig`
 */
export function loadRigFile(path: string, overrides: RigOverrides = {}): RigFile {
  return checkedRig(rigTree(readSource(path), '.', overrides));
}

/** Reads a file that holds a lens as a rig's `lens` does.
 * @param wavelengthsNm  for a lens given by its surfaces: where its coefficients are wanted
 * @throws {InputError} all faults of the file
 */
export function loadLensPart(path: string, wavelengthsNm: readonly number[] = []): Lens {
  const tree = new SourceTree(readSource(path));
  checkKind('lens', tree);
  tree.graftFile(['prescription'], '.', (part) => checkKind('prescription', part));
  const file = checkSchema(lensPart, tree);
  return isPrescribed(file)
    ? tracedLens(file, { wavelengthsNm }, tree, ['prescription'])
    : lensFromFile(file as StatedLens); // the schema tells the two apart
}

/** Reads a file that holds a camera as a rig's `camera` does. @throws {InputError} all faults of the file */
export function loadCameraPart(path: string): Camera {
  const source = readSource(path);
  checkKind('camera', source);
  return cameraFromFile(checkSchema(cameraPart, source));
}

function sourceOf(input: unknown): Source {
  if (typeof input === 'string') return parseSource(input);
  if (isMapping(input)) return objectSource(input);
  throw new InputError({
    message: 'a rig is a text or an object with the keys of a rig file',
    found: typeof input,
  });
}

const LENS: Path = ['lens'];
const CAMERA: Path = ['camera'];
const PRESCRIPTION: Path = ['lens', 'prescription'];

function rigTree(source: Source, folder: string, overrides: RigOverrides): SourceTree {
  const tree = new SourceTree(source);
  checkKind('rig', tree);
  tree.graftFile(LENS, folder, (part) => checkKind('lens', part));
  tree.graftFile(CAMERA, folder, (part) => checkKind('camera', part));
  tree.graftFile(PRESCRIPTION, folder, (part) => checkKind('prescription', part));
  const { mount = {} } = tree.value as { mount?: unknown };
  if (isMapping(mount)) {
    if (!('mount' in (tree.value as object))) tree.graft(['mount'], objectSource({}));
    if (overrides.fNumber !== undefined) {
      tree.graft(['mount', 'f_number'], namedSource(overrides.fNumber, '--f-number'));
    }
    if (overrides.sensorShiftUm !== undefined) {
      tree.graft(['mount', 'sensor_shift_um'], namedSource(overrides.sensorShiftUm, '--sensor-shift'));
    }
  }
  return tree;
}

function checkedRig(tree: SourceTree): RigFile {
  return checkSchema(wholeRig, tree);
}

function toRig(tree: SourceTree): Rig {
  const rig = rigFromFile(checkedRig(tree), (lens, inRig) => tracedLens(lens, inRig, tree, PRESCRIPTION));
  if (rig.mount.fNumber < rig.lens.fNumber) {
    // the schema has checked this where the lens states its f-number; a lens given by its surfaces has it only now
    const place = tree.place(['mount', 'f_number'], 'value');
    throw new InputError({ ...place, ...stopBelowLens(rig.lens.fNumber), found: String(rig.mount.fNumber) });
  }
  return rig;
}

function tracedLens(file: PrescribedLens, inRig: InRig, tree: SourceTree, at: Path): Lens {
  // checkSchema has seen that the name of the file has given way to its content
  const prescription = prescriptionFromFile(file.prescription as PrescriptionFile, file);
  const { relative_illumination: relativeIllumination } = file;
  return atLinesOf(tree, at, () => lensFromPrescription(prescription, { ...inRig, relativeIllumination }));
}
