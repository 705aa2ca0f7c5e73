/** Ctrl-C. Temporary files are removed when the process exits (see files/write-whole), so that nothing half-written stays. */
import { EXIT } from './failure.js';

const SIGNALS = ['SIGINT', 'SIGTERM'] as const;

/** Run a job that can be stopped: the first Ctrl-C asks it to, the second one ends the program at once.
 * @param job gets the signal that says so; it then throws, and what it throws comes out of here
 */
export async function interruptible<Result>(job: (signal: AbortSignal) => Promise<Result>): Promise<Result> {
  const controller = new AbortController();
  const stop = (): void => {
    if (controller.signal.aborted) {
      endNow();
    } else {
      process.stderr.write('\nstopping; once more stops at once\n');
      controller.abort();
    }
  };
  for (const name of SIGNALS) process.on(name, stop);
  try {
    return await job(controller.signal);
  } finally {
    for (const name of SIGNALS) process.off(name, stop);
  }
}

/** From here on Ctrl-C ends the program at once, but not without the clean-up that a process does when it exits by itself. */
export function endOnInterrupt(): void {
  for (const name of SIGNALS) process.once(name, endNow);
}

function endNow(): void {
  process.exit(EXIT.interrupted);
}
