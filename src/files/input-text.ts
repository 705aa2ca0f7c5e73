/** Text files as they come in: read whole, with a limit, or refused in words. */
import fs from 'node:fs';
import { basename, dirname, extname, join } from 'node:path';
import { type Fault, InputError } from '../errors.js';
import { nearestFew } from './nearest.js';

/** A hundred times the largest file that a person would write. YAML of this size is read in about a second. */
export const MAX_TEXT_BYTES = 512 * 1024;

/** The text of a UTF-8 file, without its byte order mark.
 *
 * @param path  as the user named it
 * @throws {InputError} missing (with near names), a folder, unreadable, larger than MAX_TEXT_BYTES, not UTF-8, empty
 */
export function readInputText(path: string): string {
  const bytes = readBytes(path);
  let text: string;
  try {
    text = new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    throw notText(path);
  }
  if (text.includes('\0')) throw notText(path);
  if (text.trim() === '') throw new InputError({ file: path, message: 'is empty' });
  return text;
}

function readBytes(path: string): Uint8Array {
  let descriptor: number | undefined;
  try {
    descriptor = fs.openSync(path, 'r');
    if (fs.fstatSync(descriptor).isDirectory()) throw new InputError(folderFault(path));
    // read up to the limit, whatever size the file claims: a pipe has none, a device no end
    const buffer = Buffer.alloc(MAX_TEXT_BYTES + 1);
    let length = 0;
    while (length < buffer.length) {
      const count = fs.readSync(descriptor, buffer, length, buffer.length - length, null);
      if (count === 0) return buffer.subarray(0, length);
      length += count;
    }
    throw new InputError({
      file: path,
      message: 'is too large for a file of this kind',
      allowed: `up to ${MAX_TEXT_BYTES / 1024} KiB`,
    });
  } catch (error) {
    throw error instanceof InputError ? error : new InputError(unreadableFault(path, error));
  } finally {
    if (descriptor !== undefined) fs.closeSync(descriptor);
  }
}

function notText(path: string): InputError {
  return new InputError({ file: path, message: 'is not a text file in UTF-8', advice: 'Save it as UTF-8.' });
}

function folderFault(path: string): Fault {
  const inside = textFilesIn(path).slice(0, 5);
  const advice = inside.length === 0 ? 'Name a file.' : `Name a file in it: ${inside.join(', ')}.`;
  return { file: path, message: 'is a folder, not a file', advice };
}

/** The fault of a file that cannot be opened or read, by Node's error code. */
export function unreadableFault(path: string, error: unknown): Fault {
  const code = (error as NodeJS.ErrnoException).code;
  switch (code) {
    case 'ENOENT':
      return missingFault(path);
    case 'EACCES':
    case 'EPERM':
      return { file: path, message: 'cannot be read: permission denied' };
    default:
      return { file: path, message: `cannot be read (${code ?? String(error)})` };
  }
}

function missingFault(path: string): Fault {
  if (path === '') return { message: 'no file is named' };
  const folder = dirname(path);
  if (!fs.existsSync(folder)) {
    return { file: path, message: 'there is no such file', advice: `The folder '${folder}' does not exist.` };
  }
  const near = nearestFew(basename(path), namesIn(folder), 3).map((name) => `'${join(folder, name)}'`);
  const advice = near.length === 0 ? undefined : `Did you mean ${near.join(' or ')}?`;
  return { file: path, message: 'there is no such file', advice };
}

function namesIn(folder: string): string[] {
  try {
    return fs.readdirSync(folder).sort();
  } catch {
    return []; // a folder that may not be listed has nothing to offer
  }
}

function textFilesIn(folder: string): string[] {
  return namesIn(folder).filter((name) => ['.yaml', '.yml', '.json'].includes(extname(name).toLowerCase()));
}
