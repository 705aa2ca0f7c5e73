/** The worker threads of a run: started once, handed jobs over shared memory, kept until closed. */
import { fileURLToPath } from 'node:url';
import type { Worker } from 'node:worker_threads';
import WorkerPool from 'worker-threads-pool';
import { InterruptedError, RunError } from '../errors.js';
import { Arena } from './arena.js';
import { CONTROL, type Job, type JobAnswer, type JobMessage, taskCount } from './work.js';

/** How a job may be watched and stopped. */
export interface JobWatch {
  signal?: AbortSignal;
  /** Called now and then with the tasks done so far, and once at the end. */
  onProgress?: (done: number, total: number) => void;
}

const PROGRESS_MS = 100;

/** A few long-lived workers on one arena. */
export class Crew {
  readonly arena = new Arena();
  readonly threads: number;
  readonly #pool: WorkerPool;
  readonly #workers: Promise<Worker[]>;

  /** @param threads number of workers, 1 or more; they start at once */
  constructor(threads: number) {
    this.threads = threads;
    this.#pool = new WorkerPool({ max: threads });
    this.#workers = Promise.all(Array.from({ length: threads }, () => this.#start()));
    this.#workers.catch(() => undefined); // reported by the first job
  }

  /** Do all tasks of a job; resolves to their numbers, in order.
   * @throws {InterruptedError} when the signal fires; tasks already begun end first
   * @throws {RunError} when a worker fails */
  async run(job: Job, watch: JobWatch = {}): Promise<Float64Array> {
    const { signal, onProgress } = watch;
    if (signal?.aborted) throw new InterruptedError();
    const count = taskCount(job);
    const control = new Int32Array(new SharedArrayBuffer(4 * CONTROL.length));
    const results = new Float64Array(new SharedArrayBuffer(8 * Math.max(1, count)));
    const message: JobMessage = { job, count, control, results };
    const stop = () => Atomics.store(control, CONTROL.stop, 1);
    signal?.addEventListener('abort', stop, { once: true });
    const timer =
      onProgress && setInterval(() => onProgress(Atomics.load(control, CONTROL.done), count), PROGRESS_MS);
    try {
      const workers = await this.#workers;
      await Promise.all(workers.map((worker) => answerOf(worker, message)));
    } finally {
      clearInterval(timer);
      signal?.removeEventListener('abort', stop);
    }
    if (signal?.aborted) throw new InterruptedError();
    onProgress?.(count, count);
    return results;
  }

  /** End the workers. The crew is of no use afterwards. */
  async close(): Promise<void> {
    const workers = await this.#workers.catch(() => []);
    await Promise.all(
      workers.map((worker) => {
        const gone = new Promise((resolve) => worker.once('exit', resolve));
        worker.postMessage('end');
        return gone;
      }),
    );
  }

  #start(): Promise<Worker> {
    return new Promise((resolve, reject) => {
      const options = { workerData: { memory: this.arena.memory } };
      this.#pool.acquire(workerEntry(), options, (error, worker) =>
        error ? reject(error) : resolve(worker),
      );
    });
  }
}

function answerOf(worker: Worker, message: JobMessage): Promise<void> {
  return new Promise((resolve, reject) => {
    const settle = (act: () => void) => {
      worker.off('message', onMessage);
      worker.off('error', onError);
      worker.off('exit', onExit);
      act();
    };
    const onMessage = (answer: JobAnswer) =>
      settle(() => {
        if (answer.ok) resolve();
        else reject(answer.isRunError ? new RunError(answer.message) : new Error(answer.message));
      });
    const onError = (error: Error) =>
      settle(() => reject(new RunError(`a worker thread failed: ${error.message}`)));
    const onExit = (code: number) =>
      settle(() => reject(new RunError(`a worker thread ended with status ${code}`)));
    worker.on('message', onMessage);
    worker.on('error', onError);
    worker.on('exit', onExit);
    worker.postMessage(message);
  });
}

/** The built worker, also where this module runs from its source (the tests do). */
function workerEntry(): string {
  const here = fileURLToPath(new URL('./worker.js', import.meta.url));
  return import.meta.url.endsWith('.ts') ? here.replace(/([\\/])src([\\/]imaging[\\/])/, '$1dist$2') : here;
}
