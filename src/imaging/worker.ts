/** A worker thread: takes the tasks of a job one by one from a shared counter. */
import { parentPort, workerData } from 'node:worker_threads';
import { RunError } from '../errors.js';
import { instantiateKernels } from '../numeric/kernels.js';
import { Arena } from './arena.js';
import { Scratch } from './scratch.js';
import { taskRunner } from './task-runner.js';
import { CONTROL, type JobAnswer, type JobMessage, type WorkerSetup } from './work.js';

const port = parentPort;
if (port === null) throw new Error('this module runs in a worker thread only');
const { memory, module, tablesAt } = workerData as WorkerSetup;
const arena = new Arena(memory);
const kernels = instantiateKernels(memory, module);
kernels.prepare(tablesAt);

port.on('message', (message: JobMessage | 'end') => {
  if (message === 'end') {
    port.close(); // nothing is left to wait for, so the thread ends
    return;
  }
  const { job, count, control, results, engine } = message;
  let answer: JobAnswer = { ok: true };
  try {
    const isStopped = () => Atomics.load(control, CONTROL.stop) !== 0;
    const scratch = new Scratch(memory, message.scratch.at, message.scratch.bytes);
    const runTask = taskRunner({ arena, kernels, engine, scratch, isStopped }, job);
    for (;;) {
      const task = Atomics.add(control, CONTROL.next, 1);
      if (task >= count || isStopped()) break;
      results[task] = runTask(task);
      Atomics.add(control, CONTROL.done, 1);
    }
  } catch (error) {
    Atomics.store(control, CONTROL.stop, 1);
    answer = { ok: false, message: describe(error), isRunError: error instanceof RunError };
  }
  port.postMessage(answer);
});

function describe(error: unknown): string {
  return error instanceof Error ? (error.stack ?? error.message) : String(error);
}
