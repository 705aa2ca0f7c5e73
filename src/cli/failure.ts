/** What a failed command says, and its exit status. */
import { formatFault, InputError, InterruptedError, RunError } from '../errors.js';

export const EXIT = { done: 0, notMet: 1, wrongInput: 2, failedRun: 3, interrupted: 130 } as const;

export interface Failure {
  status: number;
  /** What goes to stderr, a fault a line, without the last line feed. Empty: nothing is left to say. */
  text: string;
}

/** Name of the environment variable that adds the stack trace to the message of an internal error. */
export const DEBUG_VARIABLE = 'FOREGLASS_DEBUG';

/** Faults of the file system that the user can mend, in words. Parts that meet them say more than this; it is the last net. */
const MENDABLE: Readonly<Record<string, string>> = {
  ENOENT: 'no such file or folder',
  EACCES: 'not allowed to read or write here',
  EPERM: 'not allowed to read or write here',
  EROFS: 'the disk can only be read',
  EEXIST: 'is there already',
  EISDIR: 'a folder, where a file is needed',
  ENOTDIR: 'a file, where a folder is needed',
  ENAMETOOLONG: 'the name is too long',
};

/** Faults of the machine. */
const OUT_OF_MEANS: Readonly<Record<string, string>> = {
  ENOSPC: 'the disk is full. Make room and run the command again',
  EDQUOT: 'your share of the disk is used up. Make room and run the command again',
  EIO: 'the disk reports an error',
  ENOMEM: 'out of memory. Try a smaller --oversample or fewer --threads',
  ERR_WORKER_OUT_OF_MEMORY: 'out of memory. Try a smaller --oversample or fewer --threads',
  EMFILE: 'too many files are open',
  ENFILE: 'too many files are open',
};

/** @param withStack whether an internal error shows where it happened */
export function describeFailure(error: unknown, withStack = false): Failure {
  if (error instanceof InputError) {
    return {
      status: EXIT.wrongInput,
      text: error.faults.map((fault) => `error: ${formatFault(fault)}`).join('\n'),
    };
  }
  if (error instanceof InterruptedError || (error instanceof Error && error.name === 'AbortError')) {
    return { status: EXIT.interrupted, text: 'interrupted' };
  }
  if (error instanceof RunError) return { status: EXIT.failedRun, text: `error: ${sentence(error.message)}` };
  const { code, path } = Object(error) as { code?: string; path?: string };
  const where = path === undefined ? '' : `${path}: `;
  if (code !== undefined && code in MENDABLE) {
    return { status: EXIT.wrongInput, text: `error: ${where}${MENDABLE[code]}.` };
  }
  if (code !== undefined && code in OUT_OF_MEANS) {
    return { status: EXIT.failedRun, text: `error: ${where}${OUT_OF_MEANS[code]}.` };
  }
  if (isAllocationFailure(error)) {
    return { status: EXIT.failedRun, text: `error: ${OUT_OF_MEANS.ENOMEM}.` };
  }
  return { status: EXIT.failedRun, text: describeBug(error, withStack) };
}

function sentence(text: string): string {
  return /[.!?]$/.test(text) ? text : `${text}.`;
}

/** V8 has no class for it: an array that cannot be had is a RangeError with one of these texts. */
function isAllocationFailure(error: unknown): boolean {
  return (
    error instanceof RangeError &&
    /allocation failed|could not allocate|invalid (typed )?array length/i.test(error.message)
  );
}

function describeBug(error: unknown, withStack: boolean): string {
  const what = error instanceof Error ? `${error.name}: ${error.message}` : String(error);
  const stack = withStack && error instanceof Error && error.stack ? [error.stack] : [];
  return [
    `internal error: ${what}`,
    ...stack,
    'This is a fault of the program, not of your input. Please report it with the command line, the rig file and the output of',
    `the same command under ${DEBUG_VARIABLE}=1.`,
  ].join('\n');
}
