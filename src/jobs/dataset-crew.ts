/** Threads that make pictures of a data set side by side: small pictures gain more from that than from several threads for one. */
import { fileURLToPath } from 'node:url';
import type { Worker } from 'node:worker_threads';
import WorkerPool from 'worker-threads-pool';
import { Journal } from '../dataset/journal.js';
import type { DatasetPlan } from '../dataset/plan.js';
import { InputError, InterruptedError, RunError } from '../errors.js';
import type { PictureAnswer, ThreadSetup } from './dataset-thread.js';

/** How the making of pictures may be watched and stopped. */
export interface PictureWatch {
  signal?: AbortSignal;
  /** Called after each picture; its line is in the journal by then. */
  onMade?: (picture: number, warnings: readonly string[]) => void;
}

/** A few long-lived threads, and the journal of what they have made. Close it when done. */
export class DatasetCrew {
  readonly #workers: Promise<Worker[]>;
  readonly #journal: Journal;
  readonly #idle: Worker[] = [];
  readonly #waiting: { resolve: (worker: Worker) => void; reject: (error: Error) => void }[] = [];
  #loss?: Error;

  /** @param threads  1 or more; they start at once */
  constructor(plan: DatasetPlan, folder: string, threads: number) {
    const pool = new WorkerPool({ max: threads });
    const setup: ThreadSetup = { plan, folder };
    this.#workers = Promise.all(Array.from({ length: threads }, () => started(pool, setup)));
    this.#workers.then(
      (workers) => {
        for (const worker of workers) this.#free(worker);
      },
      () => undefined, // reported by the first call of `make`
    );
    this.#journal = new Journal(folder);
  }

  /** Whether a thread has died: the crew then makes nothing more. */
  get isBroken(): boolean {
    return this.#loss !== undefined;
  }

  /** Make pictures; several calls at a time share the threads.
   * @throws what the first failed picture throws; {InterruptedError} when the signal fires; pictures already begun end first */
  async make(pictures: readonly number[], { signal, onMade }: PictureWatch = {}): Promise<void> {
    await this.#workers;
    const begun: Promise<void>[] = [];
    const failures: unknown[] = [];
    for (const picture of pictures) {
      const worker = await this.#nextIdle();
      if (failures.length > 0 || signal?.aborted) {
        this.#free(worker);
        break;
      }
      begun.push(
        this.#makeOne(worker, picture).then(
          (warnings) => onMade?.(picture, warnings),
          (error: unknown) => void failures.push(error),
        ),
      );
    }
    await Promise.all(begun);
    if (failures.length > 0) throw failures[0];
    if (signal?.aborted) throw new InterruptedError();
  }

  /** End the threads. */
  async close(): Promise<void> {
    const workers = await this.#workers.catch(() => []);
    await Promise.all(
      workers.map((worker) => {
        if (worker.threadId < 0) return undefined; // it has died
        const gone = new Promise((resolve) => worker.once('exit', resolve));
        worker.postMessage('end');
        return gone;
      }),
    );
    this.#journal.close();
  }

  /** @returns the picture's warnings */
  async #makeOne(worker: Worker, picture: number): Promise<readonly string[]> {
    const answer = await answerOf(worker, picture);
    if (answer.kind === 'lost') {
      this.#loss = new RunError(answer.message);
      for (const { reject } of this.#waiting.splice(0)) reject(this.#loss);
      throw this.#loss;
    }
    this.#free(worker);
    switch (answer.kind) {
      case 'made':
        this.#journal.append(answer.line);
        return answer.warnings;
      case 'input':
        throw new InputError(answer.faults);
      case 'run':
        throw new RunError(answer.message);
      case 'bug':
        throw new Error(answer.message);
    }
  }

  #nextIdle(): Promise<Worker> {
    if (this.#loss !== undefined) return Promise.reject(this.#loss);
    const idle = this.#idle.shift();
    if (idle !== undefined) return Promise.resolve(idle);
    return new Promise((resolve, reject) => this.#waiting.push({ resolve, reject }));
  }

  #free(worker: Worker): void {
    const next = this.#waiting.shift();
    if (next === undefined) this.#idle.push(worker);
    else next.resolve(worker);
  }
}

function started(pool: WorkerPool, setup: ThreadSetup): Promise<Worker> {
  return new Promise((resolve, reject) => {
    pool.acquire(threadEntry(), { workerData: setup }, (error, worker) =>
      error ? reject(error) : resolve(worker),
    );
  });
}

function answerOf(
  worker: Worker,
  picture: number,
): Promise<PictureAnswer | { kind: 'lost'; message: string }> {
  return new Promise((resolve) => {
    const settle = (answer: Parameters<typeof resolve>[0]) => {
      worker.off('message', settle);
      worker.off('error', onError);
      worker.off('exit', onExit);
      resolve(answer);
    };
    const onError = (error: Error) => settle({ kind: 'lost', message: `a thread failed: ${error.message}` });
    const onExit = (code: number) => settle({ kind: 'lost', message: `a thread ended with status ${code}` });
    worker.on('message', settle);
    worker.on('error', onError);
    worker.on('exit', onExit);
    worker.postMessage(picture);
  });
}

/** The built thread, also where this module runs from its source (the tests do). */
function threadEntry(): string {
  const here = fileURLToPath(new URL('./dataset-thread.js', import.meta.url));
  return import.meta.url.endsWith('.ts') ? here.replace(/([\\/])src([\\/]jobs[\\/])/, '$1dist$2') : here;
}
