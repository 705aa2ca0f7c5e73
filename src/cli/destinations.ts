/** Where results go, checked before the work is done. */
import { extname, resolve } from 'node:path';
import type { OptionValues } from './option-values.js';

/** Where an option sends a result. */
export type Destination = { kind: 'none' } | { kind: 'stdout' } | { kind: 'file'; path: string };

const PICTURE_ENDINGS = ['.png', '.jpg', '.jpeg', '.tif', '.tiff', '.webp'];

/** @param given what commander made of an option with an optional file: undefined, true or the file's name */
export function readDestination(
  values: OptionValues,
  name: string,
  given: true | string | undefined,
): Destination {
  if (given === undefined) return { kind: 'none' };
  if (given === true) return { kind: 'stdout' };
  const path = values.path(name, given) ?? '';
  // `render --json scene.png` reads as a file for the JSON: caught here, before it replaces the scene.
  if (PICTURE_ENDINGS.includes(extname(path).toLowerCase())) {
    values.add({
      key: name,
      message: 'the file has the ending of a picture',
      found: `'${path}'`,
      allowed: name === '--json' ? 'names that end in .json, .yaml or .yml' : 'names that end in .csv',
      advice: `To have it on stdout, put ${name} behind the other words.`,
    });
  }
  return { kind: 'file', path };
}

/** The destination of an option that always names a file. */
export function fileDestination(path: string | undefined): Destination {
  return path === undefined ? { kind: 'none' } : { kind: 'file', path };
}

/** Files and destinations by the option or argument that they came with. */
type ByName<Value> = Readonly<Record<string, Value>>;

/** Finds outputs that would get into each other's way, or into that of an input, and files that cannot be written. */
export async function checkOutputs(
  values: OptionValues,
  inputs: ByName<string>,
  outputs: ByName<Destination>,
): Promise<void> {
  const onStdout = Object.keys(outputs).filter((name) => outputs[name].kind === 'stdout');
  if (onStdout.length > 1) {
    values.add({
      key: onStdout.join(' and '),
      message: 'both would go to stdout',
      advice: `Name a file, such as ${onStdout[1]} FILE.`,
    });
  }
  const { assertWritable } = await import('../files/write-whole.js');
  const taken = new Map(Object.entries(inputs).map(([name, path]) => [resolve(path), name]));
  for (const [name, output] of Object.entries(outputs)) {
    if (output.kind !== 'file' || output.path.trim() === '') continue; // an empty name has its fault already
    const { path } = output;
    const other = taken.get(resolve(path));
    if (other === undefined) {
      taken.set(resolve(path), name);
      values.attempt(name, () => assertWritable(path));
    } else {
      const message = `would replace the file of ${other}`;
      values.add({ key: name, message, found: `'${path}'`, advice: 'Choose another name.' });
    }
  }
}
