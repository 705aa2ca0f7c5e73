/** `worker`: makes the pictures that `dataset --queue` hands out, until it is stopped. */
import { planDataset } from '../dataset/plan.js';
import { Warnings } from '../dataset/warnings.js';
import { type Fault, InputError, InterruptedError, RunError } from '../errors.js';
import { checkedThreads } from './dataset.js';
import { DatasetCrew } from './dataset-crew.js';
import { fingerprint } from './dataset-queue.js';
import { connectQueue, QUEUE, type QueuedRange, type RangeReport } from './queue-connection.js';

export interface WorkerOptions {
  /** The Redis server: redis://HOST:PORT. */
  queue: string;
  /** Pictures made side by side. Default: one a core. */
  threads?: number;
  /** End when nothing has been handed out for so long. Left out: wait for ever. */
  idleSeconds?: number;
  /** A worker that is silent for so long counts as dead, and its pictures go to another. Default: 30. */
  deadSeconds?: number;
  signal?: AbortSignal;
  onProgress?: (progress: { made: number; out: string }) => void;
}

export interface WorkerRecord {
  made: number;
  ranges: number;
  seconds: number;
}

/** How often one range may be taken from dead workers. */
const MOST_DEATHS = 20;

/** Take ranges of pictures from a queue and make them, until the signal fires or nothing comes any more. The range at hand is ended first.
 * @throws {RunError} the server cannot be reached */
export async function workOnQueue(options: WorkerOptions): Promise<WorkerRecord> {
  const start = performance.now();
  const threads = checkedThreads(options.threads);
  const { idleSeconds, deadSeconds = 30, signal, onProgress } = options;
  const { UnrecoverableError, Worker } = await import('bullmq'); // heavy, and needed here only
  const connection = await connectQueue(options.queue);
  const record: WorkerRecord = { made: 0, ranges: 0, seconds: 0 };
  const site = new Site(threads);
  let active = 0;
  let last = performance.now();
  const worker = new Worker<QueuedRange, RangeReport>(
    QUEUE.name,
    async (job) => {
      const report: RangeReport = { made: 0, warnings: [] };
      const said = new Warnings([]);
      const onMade = (_picture: number, warnings: readonly string[]) => {
        said.add(warnings);
        report.made++;
        record.made++;
        report.warnings = said.list();
        job.updateProgress({ ...report }).catch(() => undefined); // a lost word about progress is no loss
        onProgress?.({ made: record.made, out: job.data.out });
      };
      active++;
      try {
        await site.use(job.data, (crew) => crew.make(job.data.pictures, { onMade }));
      } catch (error) {
        // faults of the input are the same for every worker: no other one tries
        if (error instanceof InputError)
          throw new UnrecoverableError(JSON.stringify({ faults: error.faults }));
        throw overTheQueue(error);
      } finally {
        active--;
        last = performance.now();
      }
      record.ranges++;
      return report;
    },
    {
      connection,
      prefix: QUEUE.prefix,
      concurrency: 2, // the next range begins while the last pictures of one are made
      lockDuration: 1000 * deadSeconds,
      stalledInterval: 1000 * deadSeconds,
      maxStalledCount: MOST_DEATHS,
    },
  );
  worker.on('error', () => undefined); // a server that is away for a while: retried
  await new Promise<void>((done) => {
    const timer = setInterval(() => {
      if (idleSeconds !== undefined && active === 0 && performance.now() - last > 1000 * idleSeconds) stop();
    }, 100);
    const stop = () => {
      clearInterval(timer);
      done();
    };
    if (signal?.aborted) stop();
    signal?.addEventListener('abort', stop, { once: true });
  });
  await worker.close();
  await site.close();
  connection.disconnect();
  if (signal?.aborted) throw new InterruptedError();
  record.seconds = (performance.now() - start) / 1000;
  return record;
}

/** The data set that a worker is at, with its threads: one at a time. */
class Site {
  readonly #threads: number;
  readonly #running = new Set<Promise<void>>();
  #key = '';
  #crew?: Promise<DatasetCrew>;
  #opened?: DatasetCrew;

  constructor(threads: number) {
    this.#threads = threads;
  }

  /** Do something with the crew of a range's data set, when those of another one are done.
   * @throws {InputError} a recipe that is not the one that was meant */
  async use(range: QueuedRange, act: (crew: DatasetCrew) => Promise<void>): Promise<void> {
    const key = JSON.stringify([range.recipe, range.out, range.fingerprint]);
    const isOpen = () => key === this.#key && this.#opened?.isBroken !== true;
    while (!isOpen() && this.#running.size > 0) await Promise.allSettled(this.#running);
    if (!isOpen() || this.#crew === undefined) {
      this.#key = key;
      this.#crew = this.#open(range, this.#crew);
      this.#crew.catch(() => {
        this.#key = ''; // the next range tries again
      });
    }
    const run = this.#crew.then(act);
    this.#running.add(run);
    await run.finally(() => this.#running.delete(run));
  }

  async close(): Promise<void> {
    const crew = await this.#crew?.catch(() => undefined);
    await crew?.close();
  }

  async #open(
    { recipe, out, fingerprint: mark }: QueuedRange,
    before?: Promise<DatasetCrew>,
  ): Promise<DatasetCrew> {
    const old = await before?.catch(() => undefined);
    await old?.close();
    this.#opened = undefined;
    const plan = await planDataset(recipe);
    if (fingerprint(plan) !== mark) {
      throw new InputError({
        file: recipe,
        message:
          'is not what the queue was filled from: the recipe, its rigs or scenes, or the version of the program differ',
      } satisfies Fault);
    }
    this.#opened = new DatasetCrew(plan, out, this.#threads);
    return this.#opened;
  }
}

/** An error as words. A disk or a thread may do better elsewhere: another worker tries. */
function overTheQueue(error: unknown): Error {
  if (error instanceof RunError) return new Error(JSON.stringify({ message: error.message }));
  return error instanceof Error ? error : new Error(String(error));
}
