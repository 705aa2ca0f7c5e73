/** What of a data set is in its folder already, and whole. */
import fs from 'node:fs';
import { join } from 'node:path';
import { InterruptedError } from '../errors.js';
import { fileChecksum, forEachFew } from './checksum.js';
import { type FolderState, IMAGES, RECORDS, WORK } from './folder.js';
import { type FoundLine, findLines } from './journal.js';

/** The lines of a folder, by picture from 0. Finished records count if their checksum is the one that was written down. */
export async function linesThere(folder: string, { files }: FolderState): Promise<Map<number, FoundLine>> {
  const records = join(folder, RECORDS);
  const expected = files?.[RECORDS];
  const areRecordsGood =
    expected !== undefined && fs.existsSync(records) && (await fileChecksum(records)).sha256 === expected;
  return findLines(folder, areRecordsGood);
}

/** Keep the finished records as a journal, before more pictures are made and the records are written anew. */
export function keepRecords(folder: string, lines: ReadonlyMap<number, FoundLine>): void {
  const records = join(folder, RECORDS);
  const isUsed = [...lines.values()].some(({ journal }) => journal === records);
  if (isUsed) fs.copyFileSync(records, join(folder, WORK, 'earlier.jsonl'));
}

export interface VerifyWatch {
  signal?: AbortSignal;
  onVerified?: (done: number, total: number) => void;
}

/** Files that are read at the same time. */
const FEW = 8;

/** Hold pictures against the size and checksum in their lines.
 * @returns the pictures, from 0, that are whole
 * @throws {InterruptedError} when the signal fires */
export async function wholePictures(
  folder: string,
  lines: readonly FoundLine[],
  { signal, onVerified }: VerifyWatch = {},
): Promise<Set<number>> {
  const whole = new Set<number>();
  let done = 0;
  await forEachFew(lines, FEW, async ({ picture, file, bytes, sha256 }) => {
    if (signal?.aborted) throw new InterruptedError();
    const path = join(folder, IMAGES, file);
    const info = fs.statSync(path, { throwIfNoEntry: false });
    if (info?.isFile() && info.size === bytes && (await fileChecksum(path)).sha256 === sha256)
      whole.add(picture);
    onVerified?.(++done, lines.length);
  });
  return whole;
}
