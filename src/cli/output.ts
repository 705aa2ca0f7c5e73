/** What a command says: results to stdout or to files that are written whole, warnings to stderr. */
import type { Paint } from '../report/text.js';
import type { Destination } from './destinations.js';

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
