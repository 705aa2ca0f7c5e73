/** `dataset`: labelled pictures over the spread of lens and camera. */
import { availableParallelism } from 'node:os';
import { assemble, type DatasetCounts } from '../dataset/assemble.js';
import { beginWork, type FolderState, lookAtFolder, refuseOther, removeDataset } from '../dataset/folder.js';
import type { FoundLine } from '../dataset/journal.js';
import { type DatasetPlan, planDataset } from '../dataset/plan.js';
import { keepRecords, linesThere, wholePictures } from '../dataset/there.js';
import { Warnings } from '../dataset/warnings.js';
import { type Fault, InputError, InterruptedError } from '../errors.js';
import { DatasetCrew } from './dataset-crew.js';
import { PictureMaker } from './dataset-picture.js';

export type { DatasetCounts } from '../dataset/assemble.js';

export interface DatasetOptions {
  /** The recipe's file. */
  recipe: string;
  /** The folder to write to. */
  out: string;
  /** Remove a data set that is there first. */
  fresh?: boolean;
  /** Make the first so many pictures only. */
  limit?: number;
  /** Make every `of`-th picture, from the `index`-th on (from 1); labels and records are left to `mergeDataset`. */
  shard?: { index: number; of: number };
  /** Pictures made side by side. Default: one a core. No picture depends on it. */
  threads?: number;
  signal?: AbortSignal;
  onProgress?: (progress: DatasetProgress) => void;
}

export interface DatasetProgress {
  /** `verify`: what is there is read; `pictures`: what is not there is made. */
  stage: 'verify' | 'pictures';
  done: number;
  total: number;
  picturesPerSecond?: number;
  secondsLeft?: number;
}

/** What was done. */
export interface DatasetRecord {
  out: string;
  /** Pictures asked for in this run. */
  pictures: number;
  /** Those that were there, whole. */
  kept: number;
  /** Those that were there, damaged or gone, and were made again. */
  damaged: number;
  made: number;
  seconds: number;
  /** Of the whole data set; left out for a shard. */
  counts?: DatasetCounts;
  warnings: string[];
}

/** Make a data set, or go on with one.
 *
 * Every picture depends on the recipe, its seed, the picture's number and the version alone.
 * @throws {InputError}       the recipe or what it names is wrong; the folder holds another data set; nothing has been written
 * @throws {RunError}         disk full, out of memory; run again to go on
 * @throws {InterruptedError} when the signal fires; run again to go on
 */
export async function dataset(options: DatasetOptions): Promise<DatasetRecord> {
  const start = performance.now();
  const { out, shard } = options;
  const threads = checkedThreads(options.threads);
  const plan = await readyPlan(options);
  const state = options.fresh ? clearedFolder(out) : folderFor(out, plan);
  const { mine, total } = picturesFor(plan, options, state);
  await beginWork(out, plan.madeFrom, plan.recipe.count);
  const { whole, damaged, lines } = await verified(out, state, mine, options);
  const missing = mine.filter((picture) => !whole.has(picture));
  if (missing.length > 0) keepRecords(out, lines);
  const warnings = new Warnings(plan.warnings);
  await makeMissing(plan, missing, threads, warnings, options);
  const record: DatasetRecord = {
    out,
    pictures: mine.length,
    kept: whole.size,
    damaged,
    made: missing.length,
    seconds: 0,
    warnings: warnings.list(),
  };
  if (shard === undefined) record.counts = await finish(out, plan, total, state);
  record.seconds = (performance.now() - start) / 1000;
  return record;
}

export type MergeOptions = Pick<DatasetOptions, 'recipe' | 'out' | 'limit' | 'signal' | 'onProgress'>;

/** Put the shards of a folder together: verify every picture, then write labels and records.
 * @throws {InputError} another recipe; pictures that are missing or damaged */
export async function mergeDataset(options: MergeOptions): Promise<DatasetRecord> {
  const start = performance.now();
  const { out } = options;
  const plan = await readyPlan(options);
  const state = folderFor(out, plan);
  const { mine, total } = picturesFor(plan, options, state);
  const { whole, damaged } = await verified(out, state, mine, options);
  if (whole.size < total) {
    const missing = mine.filter((picture) => !whole.has(picture)).map((picture) => picture + 1);
    throw new InputError({
      file: out,
      message: `${missing.length} of ${total} pictures are missing or damaged`,
      found: `without ${missing.slice(0, 5).join(', ')}${missing.length > 5 ? ', …' : ''}`,
      advice: 'Run the shards that lack some again, with the same recipe and the same --out.',
    });
  }
  const counts = await finish(out, plan, total, state);
  const seconds = (performance.now() - start) / 1000;
  const warnings = [...plan.warnings];
  return { out, pictures: total, kept: whole.size, damaged, made: 0, seconds, counts, warnings };
}

/** What a run would take, from a few pictures made for it and thrown away. */
export interface DatasetForecast {
  /** Pictures to be made: those asked for less those that are there. */
  pictures: number;
  /** Pictures in the folder already. */
  kept: number;
  bytes: number;
  seconds: number;
  warnings: string[];
}

/** Pictures that are made for a forecast. */
const SAMPLES = 4;

/** Say what a run would take; writes nothing. @throws {InputError} as `dataset` */
export async function forecastDataset(options: DatasetOptions): Promise<DatasetForecast> {
  const threads = checkedThreads(options.threads);
  const plan = await readyPlan(options);
  const state = options.fresh ? {} : folderFor(options.out, plan);
  const { mine } = picturesFor(plan, options, state);
  const there = options.fresh ? new Map<number, FoundLine>() : await linesThere(options.out, state);
  const missing = mine.filter((picture) => !there.has(picture));
  const maker = new PictureMaker(plan);
  const warnings = new Warnings(plan.warnings);
  let bytes = 0;
  let seconds = 0;
  const samples = missing.slice(0, SAMPLES);
  try {
    for (const picture of samples) {
      if (options.signal?.aborted) throw new InterruptedError();
      const start = performance.now();
      const { data, entry } = await maker.make(picture);
      seconds += (performance.now() - start) / 1000;
      bytes += data.length + 2 * JSON.stringify(entry).length; // records and labels
      warnings.add(entry.warnings);
    }
  } finally {
    await maker.close();
  }
  const scale = samples.length === 0 ? 0 : missing.length / samples.length;
  return {
    pictures: missing.length,
    kept: mine.length - missing.length,
    bytes: Math.round(bytes * scale),
    seconds: (seconds * scale) / Math.min(threads, Math.max(1, missing.length)),
    warnings: warnings.list(),
  };
}

/** The plan, after the refusals that need none. */
export async function readyPlan({
  recipe,
  limit,
  shard,
}: Pick<DatasetOptions, 'recipe' | 'limit' | 'shard'>): Promise<DatasetPlan> {
  const faults: Fault[] = [];
  if (limit !== undefined && (!Number.isSafeInteger(limit) || limit < 1)) {
    faults.push({
      key: 'limit',
      message: 'is out of range',
      found: String(limit),
      allowed: 'a whole number from 1 up',
    });
  }
  if (shard !== undefined) {
    const { index, of } = shard;
    if (!(Number.isSafeInteger(of) && Number.isSafeInteger(index) && index >= 1 && index <= of)) {
      faults.push({
        key: 'shard',
        message: 'is out of range',
        found: `${index}/${of}`,
        allowed: 'i/n with whole numbers, i from 1 to n',
      });
    }
  }
  if (faults.length > 0) throw new InputError(faults);
  return planDataset(recipe);
}

/** The pictures that a run is for, from 0, and how many the data set has after it. A limit takes nothing away that is finished. */
export function picturesFor(
  { recipe }: DatasetPlan,
  { limit = recipe.count, shard = { index: 1, of: 1 } }: Pick<DatasetOptions, 'limit' | 'shard'>,
  { pictures: finished = 0 }: FolderState,
): { mine: number[]; total: number } {
  const total = Math.min(Math.max(limit, finished), recipe.count);
  const mine: number[] = [];
  for (let picture = shard.index - 1; picture < total; picture += shard.of) mine.push(picture);
  return { mine, total };
}

export function checkedThreads(threads = Math.min(64, availableParallelism())): number {
  if (Number.isInteger(threads) && threads >= 1 && threads <= 64) return threads;
  throw new InputError({
    key: 'threads',
    message: 'is out of range',
    found: String(threads),
    allowed: 'a whole number from 1 to 64',
  });
}

export function folderFor(out: string, plan: DatasetPlan): FolderState {
  const state = lookAtFolder(out);
  refuseOther(out, state, plan.madeFrom, plan.recipe.count);
  return state;
}

export function clearedFolder(out: string): FolderState {
  lookAtFolder(out); // refuses what is not ours
  removeDataset(out);
  return {};
}

export async function verified(
  out: string,
  state: FolderState,
  mine: readonly number[],
  { signal, onProgress }: Pick<DatasetOptions, 'signal' | 'onProgress'>,
): Promise<{ whole: Set<number>; damaged: number; lines: Map<number, FoundLine> }> {
  const lines = await linesThere(out, state);
  const own = mine.flatMap((picture) => lines.get(picture) ?? []);
  const whole = await wholePictures(out, own, {
    signal,
    onVerified: (done, total) => onProgress?.({ stage: 'verify', done, total }),
  });
  return { whole, damaged: own.length - whole.size, lines };
}

async function makeMissing(
  plan: DatasetPlan,
  missing: readonly number[],
  threads: number,
  warnings: Warnings,
  { out, signal, onProgress }: DatasetOptions,
): Promise<void> {
  if (missing.length === 0) return;
  const crew = new DatasetCrew(plan, out, Math.min(threads, missing.length));
  const pace = new Pace(missing.length);
  try {
    await crew.make(missing, {
      signal,
      onMade: (_picture, said) => {
        warnings.add(said);
        onProgress?.({ stage: 'pictures', ...pace.next() });
      },
    });
  } finally {
    await crew.close();
  }
}

/** How fast pictures come: over the last few, so that a pause does not linger. */
export class Pace {
  readonly #total: number;
  readonly #times: number[] = [performance.now()];
  #done = 0;

  constructor(total: number) {
    this.#total = total;
  }

  /** Count pictures that are done. */
  next(count = 1): Omit<DatasetProgress, 'stage'> {
    this.#done += count;
    for (let i = 0; i < count; i++) this.#times.push(performance.now());
    this.#times.splice(0, this.#times.length - 1 - LATEST);
    const seconds = (this.#times[this.#times.length - 1] - this.#times[0]) / 1000;
    const picturesPerSecond = (this.#times.length - 1) / Math.max(seconds, 1e-3);
    const secondsLeft = (this.#total - this.#done) / picturesPerSecond;
    return { done: this.#done, total: this.#total, picturesPerSecond, secondsLeft };
  }
}

const LATEST = 100;

export async function finish(
  out: string,
  plan: DatasetPlan,
  total: number,
  state: FolderState,
): Promise<DatasetCounts> {
  const lines = await linesThere(out, state);
  const all = Array.from({ length: total }, (_, picture) => lines.get(picture)!);
  return assemble(out, plan, all, total === plan.recipe.count);
}
