/** `judge`: is the edge of the field good enough for a task. */
import { availableParallelism } from 'node:os';
import { InputError } from '../errors.js';
import type { Task } from '../files/load-task.js';
import { checkSeed } from '../numeric/random.js';
import type { Rig } from '../optics/rig.js';
import { DecodeCrew } from '../tasks/decode/crew.js';
import { type JudgeReport, judgeTask } from '../tasks/judge.js';

export type { Advice } from '../tasks/advice.js';
export type { PartGain } from '../tasks/gains.js';
export type { JudgeReport } from '../tasks/judge.js';
export type { RuleVerdict, ZoneVerdict } from '../tasks/verdict.js';

export interface JudgeOptions {
  rig: Rig;
  /** From `loadTask` or `parseTask`. */
  task: Task;
  /** Draws the symbols of `decode`, their places and the noise. Default: 1. */
  seed?: number;
  /** Threads that try symbols. Default: one a core. The report does not depend on it. */
  threads?: number;
  signal?: AbortSignal;
  /** Called after each place at which symbols were tried; how many will follow is not known. */
  onProgress?: (progress: { stage: string; done: number; total: number }) => void;
}

const MOST_THREADS = 64;

/** The verdict on a task, rule by rule and zone by zone; the largest field at which everything is met; what limits it; what to change.
 * @throws {InputError} rules that this rig cannot answer (sizes in mm without a scale on the object, `detect` without a sensor), field points
 *   that are none, a wavefront too steep to be computed, a seed or a number of threads out of range
 */
export async function judge(options: JudgeOptions): Promise<JudgeReport> {
  const { rig, task, seed = 1, signal, onProgress } = options;
  checkSeed(seed);
  const crew = new DecodeCrew(checkedThreads(options.threads));
  let done = 0;
  const onPlace = () => {
    done++;
    onProgress?.({ stage: 'decode', done, total: done + 1 });
  };
  try {
    return await judgeTask(rig, task, { crew, seed, signal, onPlace });
  } finally {
    await crew.close();
  }
}

/** @throws {InputError} */
export function checkedThreads(threads = Math.min(MOST_THREADS, availableParallelism())): number {
  if (Number.isInteger(threads) && threads >= 1 && threads <= MOST_THREADS) return threads;
  throw new InputError({
    key: 'threads',
    message: 'is out of range',
    found: String(threads),
    allowed: `a whole number from 1 to ${MOST_THREADS}`,
  });
}
