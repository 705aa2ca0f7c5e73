/** `dataset --queue`: hand the pictures to workers on other machines, watch them, and put the data set together. */
import { resolve } from 'node:path';
import type { Queue } from 'bullmq';
import type { Redis } from 'ioredis';
import { sha256 } from '../dataset/checksum.js';
import { beginWork } from '../dataset/folder.js';
import type { DatasetPlan } from '../dataset/plan.js';
import { keepRecords } from '../dataset/there.js';
import { Warnings } from '../dataset/warnings.js';
import { InputError, InterruptedError, RunError } from '../errors.js';
import {
  clearedFolder,
  type DatasetOptions,
  type DatasetRecord,
  finish,
  folderFor,
  Pace,
  picturesFor,
  readyPlan,
  verified,
} from './dataset.js';
import { connectQueue, QUEUE, type QueuedRange, type RangeReport } from './queue-connection.js';

export interface QueueOptions extends Omit<DatasetOptions, 'shard' | 'threads'> {
  /** The Redis server: redis://HOST:PORT. */
  queue: string;
}

/** Pictures a job: few, so that little is lost with a worker; enough that the queue is no burden. */
const RANGE = 8;

/** A range is given to so many workers before it counts as failed. */
const ATTEMPTS = 5;

/** Pictures that are missing although every range was done are asked for again so often: a machine may have written elsewhere. */
const ROUNDS = 3;

/** Make a data set by workers (`foreglass worker`) that share the folder. Returns when all of it is there.
 * @throws as `dataset`; {RunError} the server cannot be reached, or a range failed on every worker that tried */
export async function queueDataset(options: QueueOptions): Promise<DatasetRecord> {
  const start = performance.now();
  const out = resolve(options.out);
  const recipe = resolve(options.recipe);
  const connection = await connectQueue(options.queue);
  try {
    const plan = await readyPlan(options);
    const state = options.fresh ? clearedFolder(out) : folderFor(out, plan);
    const { mine, total } = picturesFor(plan, options, state);
    await beginWork(out, plan.madeFrom, plan.recipe.count);
    const warnings = new Warnings(plan.warnings);
    const first = await verified(out, state, mine, options);
    const record: DatasetRecord = {
      out,
      pictures: mine.length,
      kept: first.whole.size,
      damaged: first.damaged,
      made: mine.length - first.whole.size,
      seconds: 0,
      warnings: [],
    };
    let missing = mine.filter((picture) => !first.whole.has(picture));
    if (missing.length > 0) keepRecords(out, first.lines);
    const pace = new Pace(missing.length);
    for (let round = 0; missing.length > 0; round++) {
      if (round === ROUNDS) {
        throw new RunError(
          `${missing.length} pictures were made but are not in ${out}: do all workers share this folder under this name?`,
        );
      }
      await askFor(connection, { plan, recipe, out, missing }, options, (made, said) => {
        warnings.add(said);
        if (made > 0) options.onProgress?.({ stage: 'pictures', ...pace.next(made) });
      });
      const { whole } = await verified(out, state, mine, options);
      missing = mine.filter((picture) => !whole.has(picture));
    }
    record.counts = await finish(out, plan, total, state);
    record.warnings = warnings.list();
    record.seconds = (performance.now() - start) / 1000;
    return record;
  } finally {
    connection.disconnect();
  }
}

/** Checksum of what a data set is made from, so that a worker that reads another recipe under the same name says so. */
export function fingerprint(plan: DatasetPlan): string {
  return sha256(JSON.stringify(plan.madeFrom));
}

/** Queue the missing pictures and wait until workers have made them.
 * @param onMade  pictures done since the last call */
async function askFor(
  connection: Redis,
  work: { plan: DatasetPlan; recipe: string; out: string; missing: readonly number[] },
  { signal }: Pick<QueueOptions, 'signal'>,
  onMade: (made: number, warnings: readonly string[]) => void,
): Promise<void> {
  const { Queue, QueueEvents } = await import('bullmq'); // heavy, and needed here only
  const queue = new Queue<QueuedRange, RangeReport>(QUEUE.name, { connection, prefix: QUEUE.prefix });
  const events = new QueueEvents(QUEUE.name, { connection: connection.duplicate(), prefix: QUEUE.prefix });
  const mark = fingerprint(work.plan);
  const made = new Map<string, number>();
  const ids = new Set<string>();
  try {
    await events.waitUntilReady();
    await new Promise<void>((done, fail) => {
      const report = (id: string, { made: count, warnings }: RangeReport) => {
        onMade(Math.max(0, count - (made.get(id) ?? 0)), warnings);
        made.set(id, Math.max(count, made.get(id) ?? 0)); // a range that is begun again does not count backwards
      };
      signal?.addEventListener('abort', () => fail(new InterruptedError()), { once: true });
      events.on('progress', ({ jobId, data }) => {
        if (ids.has(jobId)) report(jobId, data as unknown as RangeReport);
      });
      events.on('completed', ({ jobId, returnvalue }) => {
        if (!ids.has(jobId)) return;
        report(jobId, returnvalue as unknown as RangeReport);
        ids.delete(jobId);
        if (ids.size === 0) done();
      });
      events.on('failed', ({ jobId, failedReason }) => {
        if (ids.has(jobId)) fail(failureOf(failedReason));
      });
      addRanges(queue, work, mark, ids).catch(fail);
    });
  } finally {
    await Promise.all([...ids].map((id) => queue.remove(id).catch(() => undefined))); // those that nobody has begun
    await events.close();
    await queue.close();
  }
}

async function addRanges(
  queue: Queue<QueuedRange, RangeReport>,
  { recipe, out, missing }: { recipe: string; out: string; missing: readonly number[] },
  mark: string,
  ids: Set<string>,
): Promise<void> {
  const place = sha256(out).slice(0, 16);
  const jobs = [];
  for (let from = 0; from < missing.length; from += RANGE) {
    const pictures = missing.slice(from, from + RANGE);
    // the same range of the same data set has the same id: started twice, a run adds nothing twice
    const jobId = `${mark.slice(0, 16)}-${place}-${sha256(pictures.join()).slice(0, 16)}`;
    ids.add(jobId);
    jobs.push({
      name: 'range',
      data: { recipe, out, fingerprint: mark, pictures },
      opts: {
        jobId,
        attempts: ATTEMPTS,
        backoff: { type: 'fixed', delay: BACKOFF_MS },
        removeOnComplete: true,
        removeOnFail: true,
      },
    });
  }
  for (let from = 0; from < jobs.length; from += BULK) await queue.addBulk(jobs.slice(from, from + BULK));
}

const BULK = 1000;
const BACKOFF_MS = 1000;

/** What a worker threw, as it came over the queue. */
function failureOf(reason: string): Error {
  try {
    const { faults, message } = JSON.parse(reason);
    if (Array.isArray(faults)) return new InputError(faults);
    if (typeof message === 'string') return new RunError(message);
  } catch {
    // the queue's own words: a range that was begun too often, for one
  }
  return new RunError(`a worker failed: ${reason}`);
}
