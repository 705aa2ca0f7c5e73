/** The worker threads of a run: started once, handed jobs over shared memory, kept until closed. */
import { fileURLToPath } from 'node:url';
import type { Worker } from 'node:worker_threads';
import WorkerPool from 'worker-threads-pool';
import { InterruptedError, RunError } from '../errors.js';
import { instantiateKernels, type Kernels, kernelModule } from '../numeric/kernels.js';
import { Arena } from './arena.js';
import { rounded } from './scratch.js';
import {
  CONTROL,
  type Engine,
  type Job,
  type JobAnswer,
  type JobMessage,
  taskCount,
  type WorkerSetup,
} from './work.js';
import { workBytes } from './work-bytes.js';

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
  readonly engine: Engine;
  readonly #kernels: Kernels;
  readonly #module = kernelModule();
  readonly #pool: WorkerPool;
  readonly #workers: Promise<Worker[]>;

  /** @param threads number of workers, 1 or more; they start at once */
  constructor(threads: number, engine: Engine = 'simd') {
    this.threads = threads;
    this.engine = engine;
    this.#kernels = instantiateKernels(this.arena.memory, this.#module);
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
    const mark = this.arena.mark();
    const bytes = workBytes(this.#kernels, this.engine, job);
    const hands = Math.max(1, Math.min(this.threads, count)); // no more than there are tasks for
    const base = this.arena.allocate(hands * rounded(bytes));
    const messageFor = (worker: number): JobMessage => ({
      job,
      count,
      control,
      results,
      engine: this.engine,
      scratch: { at: base + worker * rounded(bytes), bytes },
    });
    const stop = () => Atomics.store(control, CONTROL.stop, 1);
    signal?.addEventListener('abort', stop, { once: true });
    const timer =
      onProgress && setInterval(() => onProgress(Atomics.load(control, CONTROL.done), count), PROGRESS_MS);
    try {
      const workers = await this.#workers;
      await Promise.all(workers.slice(0, hands).map((worker, at) => answerOf(worker, messageFor(at))));
    } finally {
      this.arena.release(mark);
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
      const tablesAt = this.arena.allocate(this.#kernels.tablesBytes() >>> 0);
      const setup: WorkerSetup = { memory: this.arena.memory, module: this.#module, tablesAt };
      const options = { workerData: setup };
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
