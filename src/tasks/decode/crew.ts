/** The threads that try to read symbols. */
import { fileURLToPath } from 'node:url';
import type { Worker } from 'node:worker_threads';
import WorkerPool from 'worker-threads-pool';
import { InterruptedError, RunError } from '../../errors.js';
import type { TryAnswer, TryRequest } from './messages.js';
import { decidedRate, type Rate, type RateRule } from './rate.js';
import type { Outcome, ReadingSetup } from './reading.js';
import { ReadingDesk } from './reading-desk.js';

/** Tries handed to a thread at a time: even, since two share their transforms. */
const BATCH = 4;

/** One that tries symbols: a thread, or this one. */
type Trier = (request: TryRequest) => Promise<Outcome[]>;

/** Tries symbols on several threads. The threads start with the first try; close it when done. */
export class DecodeCrew {
  readonly threads: number;
  readonly #pool: WorkerPool;
  #workers: Worker[] = [];
  #triers?: Promise<Trier[]>;
  #setups = 0;

  /** @param threads 1: all is done on this thread */
  constructor(threads: number) {
    this.threads = threads;
    this.#pool = new WorkerPool({ max: threads });
  }

  /** The rate at which symbols are read at one place. It does not depend on the number of threads: tries count in their own order.
   * @throws {InterruptedError} when the signal fires
   * @throws {RunError} where a thread fails */
  async rate(setup: ReadingSetup, rule: RateRule, signal?: AbortSignal): Promise<Rate> {
    this.#triers ??= this.#start();
    const triers = await this.#triers;
    const setupKey = this.#setups++;
    const outcomes: (Outcome | undefined)[] = new Array(rule.trials).fill(undefined);
    let next = 0;
    let decided: Rate | undefined;
    const work = async (tryAll: Trier) => {
      while (decided === undefined && next < rule.trials) {
        if (signal?.aborted) throw new InterruptedError();
        const first = next;
        const count = Math.min(BATCH, rule.trials - first);
        next += count;
        const found = await tryAll({ setup, setupKey, first, count });
        for (const [at, outcome] of found.entries()) outcomes[first + at] = outcome;
        decided ??= decidedRate(outcomes, rule);
      }
    };
    await Promise.all(triers.map(work));
    if (decided === undefined) throw new RunError('the tries ended without a verdict');
    return decided;
  }

  /** End the threads. */
  async close(): Promise<void> {
    await this.#triers?.catch(() => undefined);
    await Promise.all(
      this.#workers.map((worker) => {
        const gone = new Promise((resolve) => worker.once('exit', resolve));
        worker.postMessage('end');
        return gone;
      }),
    );
    this.#workers = [];
    this.#triers = undefined;
  }

  async #start(): Promise<Trier[]> {
    if (this.threads === 1) {
      const desk = new ReadingDesk();
      return [(request) => desk.tryAll(request)];
    }
    this.#workers = await Promise.all(Array.from({ length: this.threads }, () => this.#startWorker()));
    return this.#workers.map((worker) => (request) => answerOf(worker, request));
  }

  #startWorker(): Promise<Worker> {
    return new Promise((resolve, reject) => {
      this.#pool.acquire(workerEntry(), {}, (error, worker) => (error ? reject(error) : resolve(worker)));
    });
  }
}

function answerOf(worker: Worker, request: TryRequest): Promise<Outcome[]> {
  return new Promise((resolve, reject) => {
    const settle = (act: () => void) => {
      worker.off('message', onMessage);
      worker.off('error', onError);
      worker.off('exit', onExit);
      act();
    };
    const onMessage = (answer: TryAnswer) =>
      settle(() => {
        if ('outcomes' in answer) resolve(answer.outcomes);
        else reject(new Error(answer.failure));
      });
    const onError = (error: Error) =>
      settle(() => reject(new RunError(`a worker thread failed: ${error.message}`)));
    const onExit = (code: number) =>
      settle(() => reject(new RunError(`a worker thread ended with status ${code}`)));
    worker.on('message', onMessage);
    worker.on('error', onError);
    worker.on('exit', onExit);
    worker.postMessage(request);
  });
}

/** The built worker, also where this module runs from its source (the tests do). */
function workerEntry(): string {
  const here = fileURLToPath(new URL('./worker.js', import.meta.url));
  return import.meta.url.endsWith('.ts') ? here.replace(/([\\/])src([\\/]tasks[\\/])/, '$1dist$2') : here;
}
