/** A lens as a file of its own: the part that a rig names as `lens: FILE`. */
import type { Lens } from '../optics/rig.js';
import { lensData } from './result-data.js';
import { jsonText, yamlText } from './write-data.js';

/** The text of such a file, JSON if its name ends in .json, else YAML. It holds every figure to the last bit.
 * @param notes  comments for the head of a YAML file, a paragraph each
 */
export function lensPartText(path: string, lens: Lens, notes: readonly string[] = []): string {
  const data = lensData(lens);
  if (path.toLowerCase().endsWith('.json')) return jsonText(data);
  const comment = notes.map((note) => note.replaceAll(/^/gm, '# ')).join('\n');
  return `${comment === '' ? '' : `${comment}\n\n`}${yamlText(data)}`;
}
