declare module 'worker-threads-pool' {
  import type { Worker, WorkerOptions } from 'node:worker_threads';

  export default class Pool {
    constructor(options?: { max?: number; maxWaiting?: number });
    readonly size: number;
    acquire(
      filename: string,
      options: WorkerOptions,
      callback: (error: Error | null, worker: Worker) => void,
    ): void;
    destroy(callback?: () => void): void;
  }
}
