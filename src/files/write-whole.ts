/** Files are written whole or not at all: into a temporary file beside the target, then renamed over it. */
import { randomBytes } from 'node:crypto';
import fs from 'node:fs';
import { dirname, extname, join, resolve } from 'node:path';
import { type Fault, InputError, InterruptedError, RunError } from '../errors.js';

export interface Output {
  path: string;
  data: Uint8Array | string;
}

/** Writes a file whole or not at all; a file of that name is replaced.
 * @param data  a text is written as UTF-8
 * @throws {InputError} as `assertWritable`
 * @throws {RunError} the disk is full or fails; nothing is left behind
 */
export async function writeWhole(path: string, data: Uint8Array | string): Promise<void> {
  await writeAllWhole([{ path, data }]);
}

/** Writes the files of one job: all are on the disk before the first takes its name, so that none appears without the others.
 * @throws as `writeWhole`; two outputs of one name are an InputError
 */
export async function writeAllWhole(outputs: readonly Output[]): Promise<void> {
  assertDistinct(outputs.map(({ path }) => path));
  const staged: StagedFile[] = [];
  try {
    for (const { path, data } of outputs) {
      const file = stageFile(path);
      staged.push(file);
      await file.write(data);
    }
    commitAll(staged);
  } finally {
    for (const file of staged) file.discard();
  }
}

/** A file on its way: written under a temporary name, visible under its own only after `commit`. */
export interface StagedFile {
  /** The name it will have. */
  readonly path: string;
  /** Where to write meanwhile: beside `path`, with the same ending. */
  readonly temporary: string;
  write(data: Uint8Array | string): Promise<void>;
  /** Gives the file its name. @throws {InterruptedError} after `removeTemporaries` */
  commit(): void;
  /** Removes the temporary file. Does nothing after `commit`. */
  discard(): void;
}

/** Temporary files that are there now. */
const temporaries = new Set<string>();
let cleansUpOnExit = false;

/** Opens the way to a new file, for those who write it themselves (a picture library that wants a name).
 * @throws {InputError} as `assertWritable`
 */
export function stageFile(path: string): StagedFile {
  assertNamesFile(path);
  const target = finalTarget(path);
  if (isDevice(target)) return stageForDevice(path, target);
  const temporary = makeTemporary(path, target);
  return {
    path,
    temporary,
    write: (data) => guarded(path, () => writeThrough(temporary, data), temporary),
    commit: () => commitTemporary(path, temporary, target),
    discard: () => removeTemporary(temporary),
  };
}

/** Gives staged files their names. */
export function commitAll(files: readonly StagedFile[]): void {
  for (const file of files) file.commit();
}

/** Refuses an output that could not be written, before any work is done.
 *
 * @param key  the option that names it, such as `--out`
 * @throws {InputError} no name, a folder, a folder that does not exist or cannot be written, a file that may not be replaced
 */
export function assertWritable(path: string, key?: string): void {
  try {
    stageFile(path).discard();
  } catch (error) {
    if (key === undefined || !(error instanceof InputError)) throw error;
    throw new InputError(error.faults.map((fault) => ({ ...fault, key })));
  }
}

/** Removes every temporary file at once, without waiting: for an interrupt. */
export function removeTemporaries(): void {
  for (const temporary of [...temporaries]) removeTemporary(temporary);
}

function makeTemporary(path: string, target: string): string {
  const temporary = join(dirname(target), `.${randomBytes(8).toString('hex')}.part${extname(target)}`);
  try {
    if (fs.existsSync(target)) fs.accessSync(target, fs.constants.W_OK); // a file that is protected stays
    fs.closeSync(fs.openSync(temporary, 'wx'));
  } catch (error) {
    throw writeFailure(path, error);
  }
  temporaries.add(temporary);
  if (!cleansUpOnExit) {
    cleansUpOnExit = true;
    process.once('exit', removeTemporaries);
  }
  return temporary;
}

function removeTemporary(temporary: string): void {
  if (temporaries.delete(temporary)) fs.rmSync(temporary, { force: true });
}

/** Writes and waits until the bytes are on the disk: after a power cut the new name must not hold an empty file. */
async function writeThrough(temporary: string, data: Uint8Array | string): Promise<void> {
  const file = await fs.promises.open(temporary, 'r+');
  try {
    await file.truncate();
    await file.writeFile(data);
    await file.sync();
  } finally {
    await file.close();
  }
}

function commitTemporary(path: string, temporary: string, target: string): void {
  if (!temporaries.has(temporary)) throw new InterruptedError();
  try {
    keepMode(temporary, target);
    fs.renameSync(temporary, target);
  } catch (error) {
    throw writeFailure(path, error);
  }
  temporaries.delete(temporary);
}

/** A file that is replaced hands its permissions on. */
function keepMode(temporary: string, target: string): void {
  if (fs.existsSync(target)) fs.chmodSync(temporary, fs.statSync(target).mode);
}

/** A device or a pipe (/dev/null, /dev/stdout) is written to, never replaced. */
function stageForDevice(path: string, device: string): StagedFile {
  return {
    path,
    temporary: device,
    write: (data) => guarded(path, () => fs.promises.writeFile(device, data)),
    commit: () => {},
    discard: () => {},
  };
}

function isDevice(target: string): boolean {
  return fs.existsSync(target) && !fs.statSync(target).isFile(); // folders are refused before
}

/** Behind a symbolic link stands the file that is meant. */
function finalTarget(path: string): string {
  try {
    return fs.realpathSync(path);
  } catch {
    return path;
  }
}

function assertNamesFile(path: string): void {
  if (path === '') throw new InputError({ message: 'no output file is named' });
  const folder = dirname(path);
  if (!fs.existsSync(folder)) {
    const message = `the folder '${folder}' does not exist`;
    throw new InputError({ file: path, message, advice: 'Make it first, or choose another.' });
  }
  if (!fs.statSync(folder).isDirectory()) {
    throw new InputError({ file: path, message: `'${folder}' is a file, not a folder` });
  }
  if (/[/\\]$/.test(path) || statOf(path)?.isDirectory()) {
    const advice = `Name a file in it, such as '${join(path, 'output.png')}'.`;
    throw new InputError({ file: path, message: 'is a folder, not a file', advice });
  }
}

/** What is there under a name, if anything. */
function statOf(path: string): fs.Stats | undefined {
  try {
    return fs.statSync(path, { throwIfNoEntry: false });
  } catch (error) {
    throw writeFailure(path, error); // a name that is too long, for one
  }
}

function assertDistinct(paths: readonly string[]): void {
  const seen = new Set<string>();
  for (const path of paths) {
    const target = resolve(finalTarget(path));
    if (seen.has(target)) {
      throw new InputError({
        file: path,
        message: 'two outputs have this name',
        advice: 'Choose another for one of them.',
      });
    }
    seen.add(target);
  }
}

async function guarded(path: string, run: () => Promise<void>, temporary?: string): Promise<void> {
  try {
    await run();
  } catch (error) {
    if (temporary !== undefined && !temporaries.has(temporary)) throw new InterruptedError(); // removed under our hands
    throw writeFailure(path, error);
  }
}

const USER_FAULTS: Readonly<Record<string, string>> = {
  ENOENT: 'cannot be written: the folder takes no new files',
  EACCES: 'cannot be written: permission denied',
  EPERM: 'cannot be written: permission denied',
  EROFS: 'cannot be written: the disk is read-only',
  EISDIR: 'is a folder, not a file',
  ENOTDIR: 'cannot be written: a part of the path is a file, not a folder',
  ENAMETOOLONG: 'cannot be written: the name is too long',
};

const MACHINE_FAULTS: Readonly<Record<string, string>> = {
  ENOSPC: 'the disk is full. Make room and run again',
  EDQUOT: 'your share of the disk is used up. Make room and run again',
  EFBIG: 'the disk takes no file of this size',
  EIO: 'the disk reports an error',
};

/** The words for a failed write: the user's to mend, or the machine's. */
export function writeFailure(path: string, error: unknown): Error {
  const code = (error as NodeJS.ErrnoException).code ?? '';
  if (code in USER_FAULTS) return new InputError({ file: path, message: USER_FAULTS[code] } satisfies Fault);
  return new RunError(
    `cannot write '${path}': ${MACHINE_FAULTS[code] ?? (error instanceof Error ? error.message : String(error))}`,
  );
}
