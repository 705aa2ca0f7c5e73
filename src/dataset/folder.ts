/** The folder of a data set: what lies where, and whose it is. */
import fs from 'node:fs';
import { join } from 'node:path';
import { type Fault, InputError } from '../errors.js';
import { writeFailure, writeWhole } from '../files/write-whole.js';
import type { MadeFrom } from './plan.js';

export const IMAGES = 'images';
export const RECORDS = 'records.jsonl';
export const ABOUT = 'dataset.json';
/** What is there only until the data set is finished. */
export const WORK = '.work';
const WORK_ABOUT = 'made-from.json';

/** Names that this program gives to its temporary files, see write-whole. */
const TEMPORARY = /^\.[0-9a-f]{16}\.part(\.\w+)?$/;
const PICTURE = /^\d{7,9}\.(png|jpg|webp|tif)$/;
const LABELS = /^labels(-train|-val|-test)?\.json$/;

/** What is known of a folder before anything is done to it. */
export interface FolderState {
  /** What the work in it was made from; undefined: no data set is there. */
  madeFrom?: MadeFrom;
  /** Pictures asked for by then. */
  count?: number;
  /** Pictures of the finished files. */
  pictures?: number;
  /** Checksums of the finished files by name; undefined: not finished. */
  files?: Record<string, string>;
}

/** Look at a folder, which need not be there.
 * @throws {InputError} a file of that name; a folder with pictures of somebody else */
export function lookAtFolder(folder: string): FolderState {
  const info = fs.statSync(folder, { throwIfNoEntry: false });
  if (info === undefined) return {};
  if (!info.isDirectory()) throw new InputError({ file: folder, message: 'is a file, not a folder' });
  const work = readJson(join(folder, WORK, WORK_ABOUT));
  const about = readJson(join(folder, ABOUT));
  if (work === undefined && about === undefined) {
    const foreign = [IMAGES, RECORDS, ABOUT].filter((name) => fs.existsSync(join(folder, name)));
    if (foreign.length === 0) return {};
    throw new InputError({
      file: folder,
      message: 'holds things that no run of this command has left',
      found: foreign.join(', '),
      advice: 'Choose another folder.',
    });
  }
  return {
    madeFrom: (work?.made_from ?? about?.made_from) as MadeFrom | undefined,
    count: Number(work?.count ?? about?.count),
    pictures: about === undefined ? undefined : Number(about.pictures),
    files: about?.files as Record<string, string> | undefined,
  };
}

/** A JSON file, or undefined where there is none that can be read: files are written whole, so it is none of ours. */
function readJson(path: string): Record<string, unknown> | undefined {
  try {
    return JSON.parse(fs.readFileSync(path, 'utf8')) as Record<string, unknown>;
  } catch {
    return undefined;
  }
}

/** Make the folder ready for work: say in it what it is made from.
 * @throws {InputError} a folder that cannot be made or written */
export async function beginWork(folder: string, madeFrom: MadeFrom, count: number): Promise<void> {
  try {
    fs.mkdirSync(join(folder, IMAGES), { recursive: true });
    fs.mkdirSync(join(folder, WORK), { recursive: true });
  } catch (error) {
    throw writeFailure(folder, error);
  }
  const text = `${JSON.stringify({ made_from: madeFrom, count }, null, 1)}\n`;
  const path = join(folder, WORK, WORK_ABOUT);
  if (fs.existsSync(path) && fs.readFileSync(path, 'utf8') === text) return;
  await writeWhole(path, text);
}

/** Take away what was needed until now only, and what runs that were killed have left. */
export function endWork(folder: string): void {
  removeTemporariesIn(folder);
  removeTemporariesIn(join(folder, IMAGES));
  fs.rmSync(join(folder, WORK), { recursive: true, force: true });
}

/** Remove a data set, and nothing else. */
export function removeDataset(folder: string): void {
  const images = join(folder, IMAGES);
  for (const name of namesIn(images)) {
    if (PICTURE.test(name) || TEMPORARY.test(name)) fs.rmSync(join(images, name), { force: true });
  }
  if (namesIn(images).length === 0) fs.rmSync(images, { recursive: true, force: true });
  for (const name of namesIn(folder)) {
    if (name === RECORDS || name === ABOUT || LABELS.test(name) || TEMPORARY.test(name))
      fs.rmSync(join(folder, name), { force: true });
  }
  fs.rmSync(join(folder, WORK), { recursive: true, force: true });
}

function removeTemporariesIn(folder: string): void {
  for (const name of namesIn(folder)) {
    if (TEMPORARY.test(name)) fs.rmSync(join(folder, name), { force: true });
  }
}

function namesIn(folder: string): string[] {
  return fs.existsSync(folder) ? fs.readdirSync(folder).sort() : [];
}

/** Refuse to go on with another recipe than the folder was begun with.
 * @throws {InputError} a fault for every difference */
export function refuseOther(folder: string, state: FolderState, madeFrom: MadeFrom, count: number): void {
  if (state.madeFrom === undefined) return;
  const faults: Fault[] = [];
  // through JSON, as the folder's own has gone: keys without a value are no keys
  compare('', state.madeFrom, JSON.parse(JSON.stringify(madeFrom)), faults);
  if (state.count !== undefined && count < state.count) {
    faults.push({ key: 'count', message: `was ${state.count} and can only grow`, found: String(count) });
  }
  if (faults.length === 0) return;
  const shown = faults.slice(0, MOST_SHOWN);
  const more = faults.length - shown.length;
  throw new InputError([
    {
      file: folder,
      message: `was begun from another recipe, which differs in ${faults.length} ${faults.length === 1 ? 'place' : 'places'}`,
      advice: 'Choose another folder, go back to that recipe, or say --fresh to begin anew.',
    },
    ...shown,
    ...(more > 0 ? [{ message: `and ${more} more` }] : []),
  ]);
}

const MOST_SHOWN = 20;

function compare(path: string, was: unknown, is: unknown, faults: Fault[]): void {
  if (isHolder(was) && isHolder(is)) {
    const keys = new Set([...Object.keys(was), ...Object.keys(is)]);
    for (const key of keys) {
      const inner = Array.isArray(is) ? `${path}[${key}]` : path === '' ? key : `${path}.${key}`;
      compare(inner, was[key], is[key], faults);
    }
  } else if (was !== is) {
    faults.push({ key: path, message: `was ${shown(was)}`, found: shown(is) });
  }
}

function isHolder(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null;
}

function shown(value: unknown): string {
  return value === undefined ? 'not there' : JSON.stringify(value).slice(0, 80);
}
