/** One file kind taken for another: told in one fault, before every key of the file is called unknown. */
import { InputError } from '../errors.js';
import { isMapping } from './schemas/cross-check.js';
import type { Source } from './source.js';

/** Keys by which a file of each kind is known. */
const MARKS = {
  rig: ['lens', 'camera', 'mount'],
  lens: ['waves', 'prescription', 'distortion_percent', 'colour', 'relative_illumination', 'focal_length_mm'],
  camera: ['pixels', 'pixel_pitch_um', 'bands_nm'],
  task: ['require'],
  recipe: ['scenes', 'vary', 'count'],
  prescription: ['surfaces'],
} as const;

export type Kind = keyof typeof MARKS;

export const KIND_NAMES: Readonly<Record<Kind, string>> = {
  rig: 'a rig',
  lens: 'a lens part',
  camera: 'a camera part',
  task: 'a task',
  recipe: 'a dataset recipe',
  prescription: 'a prescription',
};

const ADVICE: Readonly<Record<string, string>> = {
  'prescription as lens': 'Name it one key deeper: lens: { prescription: FILE }.',
  'prescription as rig': 'A rig names it as lens: { prescription: FILE }.',
  'rig as lens': 'Give the lens a file of its own, or move it into the rig.',
};

/** @throws {InputError} where the source has no key of its kind and a key of another kind */
export function checkKind(kind: Kind, source: Source): void {
  const { value } = source;
  if (!isMapping(value)) return;
  const holds = (other: Kind) => MARKS[other].some((key) => key in value);
  if (holds(kind)) return;
  const other = (Object.keys(MARKS) as Kind[]).find(holds);
  if (other === undefined) return;
  const { file, line, column } = source.place([], 'value');
  throw new InputError({
    file,
    line,
    column,
    message: `is ${KIND_NAMES[other]}, not ${KIND_NAMES[kind]}`,
    advice: ADVICE[`${other} as ${kind}`],
  });
}
