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
  return path.toLowerCase().endsWith('.json') ? jsonText(result) : stringify(resultData(result));
}

/** A result as JSON with the keys of `resultData`. */
export function jsonText(result: unknown): string {
  return `${JSON.stringify(resultData(result), null, 2)}\n`;
}
