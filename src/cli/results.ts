/** Where a result goes: stdout, or a file that is written whole. */
import { extname, resolve } from 'node:path';
import type { Paint } from '../report/text.js';
import type { OptionValues } from './option-values.js';

/** Where `--json` or `--csv` sends a result. */
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

/** Two results cannot share stdout. */
export function refuseTwoOnStdout(
  values: OptionValues,
  destinations: Readonly<Record<string, Destination>>,
): void {
  const names = Object.keys(destinations).filter((name) => destinations[name].kind === 'stdout');
  if (names.length < 2) return;
  values.add({
    key: names.join(' and '),
    message: 'both would go to stdout',
    advice: `Name a file, such as ${names[1]} FILE.`,
  });
}

/** An output must not replace an input or another output. Files are named by the option or argument that they came with. */
export function refuseClashes(
  values: OptionValues,
  inputs: Readonly<Record<string, string | undefined>>,
  outputs: Readonly<Record<string, string | undefined>>,
): void {
  const taken = new Map<string, string>();
  for (const [name, path] of Object.entries(inputs)) if (path !== undefined) taken.set(resolve(path), name);
  for (const [name, path] of Object.entries(outputs)) {
    if (path === undefined) continue;
    const other = taken.get(resolve(path));
    if (other !== undefined) {
      values.add({
        key: name,
        message: `would replace the file of ${other}`,
        found: `'${path}'`,
        advice: 'Choose another name.',
      });
    }
    taken.set(resolve(path), name);
  }
}

/** An output that cannot be written is told before the work, not after it. */
export async function refuseUnwritable(
  values: OptionValues,
  outputs: Readonly<Record<string, string | undefined>>,
): Promise<void> {
  const { assertWritable } = await import('../files/write-whole.js');
  for (const [name, path] of Object.entries(outputs)) {
    if (path === undefined || path.trim() === '') continue; // an empty name has its fault already
    values.attempt(name, () => assertWritable(path));
  }
}

/** The file of a destination, if it is one. */
export function fileOf(destination: Destination): string | undefined {
  return destination.kind === 'file' ? destination.path : undefined;
}

/** Send a result as JSON to stdout, or to its file as JSON or YAML after the file's ending. */
export async function deliver(to: Destination, result: object): Promise<void> {
  if (to.kind === 'none') return;
  const { jsonText, writeData } = await import('../files/write-data.js');
  if (to.kind === 'stdout') await print(jsonText(result));
  else await writeData(to.path, result);
}

/** Send a text to stdout or to its file. */
export async function deliverText(to: Destination, text: string): Promise<void> {
  if (to.kind === 'stdout') await print(text);
  if (to.kind === 'file') {
    const { writeWhole } = await import('../files/write-whole.js');
    await writeWhole(to.path, text);
  }
}

/** Colours where a person looks: on a terminal that has them and where NO_COLOR is not set. */
export async function paintFor(stream: NodeJS.WriteStream): Promise<Paint> {
  const { COLOURED, PLAIN } = await import('../report/text.js');
  return stream.isTTY && stream.hasColors() ? COLOURED : PLAIN;
}

/** Print on stdout and wait until it is out. */
export async function print(text: string): Promise<void> {
  if (text === '') return;
  await new Promise<void>((resolve) =>
    process.stdout.write(text.endsWith('\n') ? text : `${text}\n`, () => resolve()),
  );
}

/** Say warnings on stderr, each once. */
export function warn(warnings: readonly string[], quiet: boolean | undefined): void {
  if (quiet) return;
  for (const warning of new Set(warnings)) process.stderr.write(`warning: ${warning}\n`);
}
