/** Results and parts as files: JSON or YAML, after the ending of the name. */
import { stringify } from 'yaml';
import { resultData } from './result-data.js';
import { writeWhole } from './write-whole.js';

/** Write a result to a file, whole or not at all: JSON if the name ends in .json, else YAML, with the keys of `resultData`.
 * @throws {InputError} what `writeWhole` throws
 */
export async function writeData(path: string, result: unknown): Promise<void> {
  await writeWhole(path, dataText(path, result));
}

/** The text of such a file. */
export function dataText(path: string, result: unknown): string {
  return path.toLowerCase().endsWith('.json') ? jsonText(result) : yamlText(result);
}

/** A result as YAML with the keys of `resultData`; wavelengths as keys come in rising order. */
export function yamlText(result: unknown): string {
  return stringify(resultData(result), { sortMapEntries: byNumber });
}

/** Numbers rise, all else stays where it is: JavaScript puts 450 before 1 and both before 587.5618. */
function byNumber({ key: a }: { key: unknown }, { key: b }: { key: unknown }): number {
  const [x, y] = [a, b].map((key) => Number(Object(key).value ?? key));
  return Number.isFinite(x) && Number.isFinite(y) ? x - y : 0;
}

/** A result as JSON with the keys of `resultData`. */
export function jsonText(result: unknown): string {
  return `${JSON.stringify(resultData(result), null, 2)}\n`;
}
