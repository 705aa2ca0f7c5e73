/** A folder for the pictures of one test file, taken away at its end. */
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, expect } from 'vitest';
import { type Fault, InputError } from '../../../src/errors.js';

export function pictureFolder() {
  const path = mkdtempSync(join(tmpdir(), 'pictures-'));
  afterAll(() => rmSync(path, { recursive: true, force: true }));
  return {
    path,
    /** Write a file and return its path. */
    put(name: string, bytes: Uint8Array): string {
      const file = join(path, name);
      writeFileSync(file, bytes);
      return file;
    },
  };
}

/** The one fault of the InputError that a piece of work throws. */
export async function faultOf(work: () => unknown): Promise<Fault> {
  try {
    await work();
  } catch (error) {
    expect(error).toBeInstanceOf(InputError);
    expect((error as InputError).faults).toHaveLength(1);
    return (error as InputError).faults[0];
  }
  expect.fail('nothing was refused');
}
