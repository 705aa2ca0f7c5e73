/** The finished files of a data set, out of the lines of its pictures. */
import { createHash, type Hash } from 'node:crypto';
import fs from 'node:fs';
import { join } from 'node:path';
import { commitAll, type StagedFile, stageFile, writeFailure } from '../files/write-whole.js';
import type { LabelEntry, PictureEntry } from './entry.js';
import { ABOUT, endWork, RECORDS } from './folder.js';
import { type FoundLine, LineReader, lineOf } from './journal.js';
import type { DatasetPlan } from './plan.js';
import { SPLITS } from './shares.js';

/** How many of something there are in a data set. */
export interface DatasetCounts {
  pictures: number;
  labels: number;
  /** Labels left out: of which too little was in the picture, and those of the scene outside of it. */
  dropped: { cut: number; outside: number };
  /** Pictures whose values were drawn anew. */
  redrawn: number;
}

/** Write labels, records and the page about them; then the folder holds nothing but the data set.
 *
 * @param lines  of all pictures, in order
 * @param isComplete  whether all pictures that the recipe asks for are there; else the journals stay for the run that goes on
 * @throws {RunError} the disk is full or fails; the files of before stay
 */
export function assemble(
  folder: string,
  plan: DatasetPlan,
  lines: readonly FoundLine[],
  isComplete: boolean,
): DatasetCounts {
  const { recipe, madeFrom } = plan;
  const staged: StagedFile[] = [];
  const files: Record<string, string> = {};
  const reader = new LineReader();
  const counts: DatasetCounts = {
    pictures: lines.length,
    labels: 0,
    dropped: { cut: 0, outside: 0 },
    redrawn: 0,
  };
  const splits = SPLITS.filter((split) => recipe.shares?.[split] !== undefined);
  const perSplit = Object.fromEntries(splits.map((split) => [split, { pictures: 0, labels: 0 }]));
  const pictures = createHash('sha256');
  try {
    const firstIds = new Float64Array(lines.length); // ids go on from picture to picture
    const records = new TextFile(join(folder, RECORDS), staged);
    for (const [at, line] of lines.entries()) {
      const entry = reader.entry(line);
      firstIds[at] = counts.labels + 1;
      const labels = entry.labels.map((label, index) => ({ ...label, id: firstIds[at] + index }));
      records.write(`${lineOf({ ...entry, labels })}\n`);
      counts.labels += labels.length;
      counts.dropped.cut += entry.dropped.cut;
      counts.dropped.outside += entry.dropped.outside;
      counts.redrawn += entry.redrawn > 0 ? 1 : 0;
      pictures.update(`${entry.sha256}\n`);
      if (entry.split !== undefined) {
        perSplit[entry.split].pictures++;
        perSplit[entry.split].labels += labels.length;
      }
    }
    files[RECORDS] = records.end();
    if (recipe.output.labels === 'coco') {
      for (const split of splits.length === 0 ? [undefined] : splits) {
        const name = split === undefined ? 'labels.json' : `labels-${split}.json`;
        const file = new TextFile(join(folder, name), staged);
        writeCoco(file, plan, lines, reader, firstIds, split);
        files[name] = file.end();
      }
    }
    const about = {
      foreglass: madeFrom.foreglass,
      count: recipe.count,
      ...counts,
      splits: splits.length === 0 ? undefined : perSplit,
      pictures_sha256: pictures.digest('hex'),
      files,
      made_from: madeFrom,
    };
    new TextFile(join(folder, ABOUT), staged).write(`${JSON.stringify(about, null, 1)}\n`).end();
    commitAll(staged); // the page about them comes last
  } finally {
    reader.close();
    for (const file of staged) file.discard();
  }
  if (isComplete) endWork(folder);
  return counts;
}

/** A COCO file, an entry a line. */
function writeCoco(
  file: TextFile,
  { madeFrom, categories }: DatasetPlan,
  lines: readonly FoundLine[],
  reader: LineReader,
  firstIds: Float64Array,
  split: string | undefined,
): void {
  const each = (look: (entry: PictureEntry, firstId: number) => void) => {
    for (const [at, line] of lines.entries()) {
      const entry = reader.entry(line);
      if (entry.split === split) look(entry, firstIds[at]);
    }
  };
  const info = { description: `made by foreglass ${madeFrom.foreglass}`, version: madeFrom.foreglass };
  file.write(`{\n "info": ${JSON.stringify(info)},\n "licenses": [],\n "images": [`);
  let between = '\n  ';
  const item = (value: object) => {
    file.write(`${between}${JSON.stringify(value)}`);
    between = ',\n  ';
  };
  each(({ picture, file: file_name, width, height }) => item({ id: picture, file_name, width, height }));
  file.write('\n ],\n "categories": [');
  between = '\n  ';
  for (const category of categories) item(category);
  file.write('\n ],\n "annotations": [');
  between = '\n  ';
  each(({ picture, labels }, firstId) => {
    for (const [index, label] of labels.entries()) item(annotationOf(label, firstId + index, picture));
  });
  file.write('\n ]\n}\n');
}

function annotationOf(
  { truth: _truth, id: _id, ...label }: LabelEntry,
  id: number,
  image_id: number,
): object {
  return { id, image_id, ...label };
}

const PIECE_CHARACTERS = 1 << 20;

/** A text file that is staged, written piece by piece. */
class TextFile {
  readonly #path: string;
  readonly #file: number;
  readonly #hash: Hash = createHash('sha256');
  #pending: string[] = [];
  #characters = 0;

  constructor(path: string, staged: StagedFile[]) {
    const stage = stageFile(path);
    staged.push(stage);
    this.#path = path;
    this.#file = fs.openSync(stage.temporary, 'w');
  }

  write(text: string): this {
    this.#pending.push(text);
    this.#characters += text.length;
    if (this.#characters >= PIECE_CHARACTERS) this.#flush();
    return this;
  }

  /** Bring everything to the disk. @returns the checksum */
  end(): string {
    this.#flush();
    this.#guard(() => fs.fsyncSync(this.#file));
    fs.closeSync(this.#file);
    return this.#hash.digest('hex');
  }

  #flush(): void {
    const bytes = Buffer.from(this.#pending.join(''));
    this.#hash.update(bytes);
    this.#guard(() => {
      for (let done = 0; done < bytes.length; ) done += fs.writeSync(this.#file, bytes, done);
    });
    this.#pending = [];
    this.#characters = 0;
  }

  #guard(act: () => void): void {
    try {
      act();
    } catch (error) {
      fs.closeSync(this.#file);
      throw writeFailure(this.#path, error);
    }
  }
}
