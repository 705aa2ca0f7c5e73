/** A thread that makes pictures of a data set, one after another, each as it is told. */
import { parentPort, workerData } from 'node:worker_threads';
import { lineOf } from '../dataset/journal.js';
import type { DatasetPlan } from '../dataset/plan.js';
import { type Fault, InputError, RunError } from '../errors.js';
import { PictureMaker } from './dataset-picture.js';

/** What the thread is started with. */
export interface ThreadSetup {
  plan: DatasetPlan;
  /** The folder of the data set. */
  folder: string;
}

/** What comes back for a picture. */
export type PictureAnswer =
  | { kind: 'made'; picture: number; line: string; warnings: string[] }
  | { kind: 'input'; faults: readonly Fault[] }
  | { kind: 'run'; message: string }
  | { kind: 'bug'; message: string };

const port = parentPort;
if (port === null) throw new Error('this module runs in a worker thread only');
const { plan, folder } = workerData as ThreadSetup;
const maker = new PictureMaker(plan);

port.on('message', async (message: number | 'end') => {
  if (message === 'end') {
    await maker.close();
    port.close(); // nothing is left to wait for, so the thread ends
    return;
  }
  port.postMessage(await answerFor(message));
});

async function answerFor(picture: number): Promise<PictureAnswer> {
  try {
    const entry = await maker.write(picture, folder);
    return { kind: 'made', picture, line: lineOf(entry), warnings: entry.warnings };
  } catch (error) {
    if (error instanceof InputError) return { kind: 'input', faults: error.faults };
    if (error instanceof RunError) return { kind: 'run', message: error.message };
    return { kind: 'bug', message: error instanceof Error ? (error.stack ?? error.message) : String(error) };
  }
}
