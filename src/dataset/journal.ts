/** The lines of a data set on their way: every run writes those of its pictures to a journal of its own in the folder, each after its
 * picture. A line is whole if its line feed is there; runs that were killed may leave one that is not. */
import { randomBytes } from 'node:crypto';
import fs from 'node:fs';
import { join } from 'node:path';
import { writeFailure } from '../files/write-whole.js';
import type { PictureEntry } from './entry.js';
import { RECORDS, WORK } from './folder.js';

const ENDING = '.jsonl';

/** The line of a picture. What tells whether the picture is whole stands first. */
export function lineOf({ picture, file, bytes, sha256, ...rest }: PictureEntry): string {
  return JSON.stringify({ picture, file, bytes, sha256, ...rest });
}

const HEAD = /^\{"picture":(\d+),"file":"([^"]+)","bytes":(\d+),"sha256":"([0-9a-f]{64})"/;

/** A journal that is being written. */
export class Journal {
  readonly #path: string;
  #file?: number;

  /** The file is made with the first line. */
  constructor(folder: string) {
    this.#path = join(folder, WORK, `${randomBytes(8).toString('hex')}${ENDING}`);
  }

  /** @throws {RunError} the disk is full or fails */
  append(line: string): void {
    try {
      this.#file ??= fs.openSync(this.#path, 'ax');
      const bytes = Buffer.from(`${line}\n`);
      for (let done = 0; done < bytes.length; ) done += fs.writeSync(this.#file, bytes, done);
    } catch (error) {
      throw writeFailure(this.#path, error);
    }
  }

  close(): void {
    if (this.#file !== undefined) fs.closeSync(this.#file);
    this.#file = undefined;
  }
}

/** Where the line of a picture stands, and what it says of the picture's file. */
export interface FoundLine {
  /** From 0. */
  picture: number;
  file: string;
  bytes: number;
  sha256: string;
  journal: string;
  offset: number;
  length: number;
}

/** The lines in a folder, by picture from 0: those of its journals, and of its finished records.
 * @param areRecordsGood  whether the finished records are what they were when they were written */
export function findLines(folder: string, areRecordsGood: boolean): Map<number, FoundLine> {
  const found = new Map<number, FoundLine>();
  const work = join(folder, WORK);
  const journals = fs.existsSync(work)
    ? fs
        .readdirSync(work)
        .filter((name) => name.endsWith(ENDING))
        .sort()
        .map((name) => join(work, name))
    : [];
  if (areRecordsGood) journals.push(join(folder, RECORDS));
  for (const journal of journals) {
    for (const { text, offset, length } of linesOf(journal)) {
      const head = HEAD.exec(text);
      if (head === null || !text.endsWith('}')) continue;
      const picture = Number(head[1]) - 1;
      found.set(picture, {
        picture,
        file: head[2],
        bytes: Number(head[3]),
        sha256: head[4],
        journal,
        offset,
        length,
      });
    }
  }
  return found;
}

const PIECE_BYTES = 1 << 20;
const LINE_FEED = 10;

/** Whole lines of a file with their places, read piece by piece. */
function* linesOf(path: string): Generator<{ text: string; offset: number; length: number }> {
  const file = fs.openSync(path, 'r');
  try {
    let rest: Buffer = Buffer.alloc(0);
    let offset = 0;
    for (;;) {
      const piece = Buffer.alloc(PIECE_BYTES);
      const count = fs.readSync(file, piece, 0, PIECE_BYTES, null);
      if (count === 0) return;
      const data = Buffer.concat([rest, piece.subarray(0, count)]);
      let start = 0;
      for (let end = data.indexOf(LINE_FEED); end >= 0; end = data.indexOf(LINE_FEED, start)) {
        yield { text: data.toString('utf8', start, end), offset: offset + start, length: end - start };
        start = end + 1;
      }
      rest = data.subarray(start);
      offset += start;
    }
  } finally {
    fs.closeSync(file);
  }
}

/** Reads lines by their places; keeps the files open. */
export class LineReader {
  readonly #files = new Map<string, number>();

  entry({ journal, offset, length }: FoundLine): PictureEntry {
    let file = this.#files.get(journal);
    if (file === undefined) {
      file = fs.openSync(journal, 'r');
      this.#files.set(journal, file);
    }
    const bytes = Buffer.alloc(length);
    fs.readSync(file, bytes, 0, length, offset);
    return JSON.parse(bytes.toString('utf8')) as PictureEntry;
  }

  close(): void {
    for (const file of this.#files.values()) fs.closeSync(file);
    this.#files.clear();
  }
}
