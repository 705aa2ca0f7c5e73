/** Numbers of a rig by the path of their key. */
import { InputError } from '../errors.js';
import { nearest } from './nearest.js';
import { numberKeys } from './schemas/keys.js';
import { wholeRig } from './schemas/rig.js';

/** Every number of a rig; `*` stands for a key of the user's own, such as a wavelength. */
const KEYS = numberKeys(wholeRig);

/** @param name what named the key, for the fault: an option or a key of a file
 * @throws {InputError} where no number of a rig has this path, with the nearest that has */
export function checkRigKey(key: string, name: string): void {
  if (KEYS.some((known) => matches(key, known))) return;
  const near = nearestKey(key);
  throw new InputError({
    key: name,
    message: 'names no number of a rig',
    found: `'${key}'`,
    allowed: 'the path of a number in the rig, such as lens.waves.W131',
    advice: near === undefined ? undefined : `Did you mean '${near}'?`,
  });
}

function matches(key: string, known: string): boolean {
  if (!known.endsWith('.*')) return key === known;
  const stem = known.slice(0, -1);
  return key.startsWith(stem) && /^\d+(\.\d+)?$/.test(key.slice(stem.length));
}

/** The nearest key of the same mapping, or where there is no such mapping, the nearest of all. */
function nearestKey(key: string): string | undefined {
  const stem = key.slice(0, key.lastIndexOf('.') + 1);
  const siblings = KEYS.filter((known) => known.startsWith(stem)).map((known) => known.slice(stem.length));
  if (stem === '' || siblings.length === 0) return nearest(key, KEYS);
  const near = nearest(key.slice(stem.length), siblings);
  return near === undefined ? undefined : `${stem}${near}`;
}
