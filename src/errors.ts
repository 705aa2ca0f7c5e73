/** Faults that a user can mend, and their words. Every floor may throw them; only the command line prints them. */

/** One thing that is wrong with the input. Only `message` is always there. */
export interface Fault {
  /** File that holds the fault, as the user named it. */
  file?: string;
  /** Line and column in `file`, counted from 1. */
  line?: number;
  column?: number;
  /** Path of the key, such as `lens.waves.W131`, or the option's name, such as `--f-number`. */
  key?: string;
  /** What is wrong, in one sentence part without a full stop. */
  message: string;
  /** What was found, printed as it is. */
  found?: string;
  /** What is allowed. */
  allowed?: string;
  /** What to do. */
  advice?: string;
}

/** The input is wrong (exit status 2). Carries every fault that was found, not the first one only. */
export class InputError extends Error {
  readonly faults: readonly Fault[];

  constructor(faults: Fault | readonly Fault[]) {
    const list: readonly Fault[] = Array.isArray(faults) ? faults : [faults as Fault];
    super(list.map(formatFault).join('\n'));
    this.name = 'InputError';
    this.faults = list;
  }
}

/** The run failed although the input was right: disk full, out of memory, a worker that died (exit status 3). */
export class RunError extends Error {
  override readonly name = 'RunError';
}

/** The user asked to stop (exit status 130). */
export class InterruptedError extends Error {
  override readonly name = 'InterruptedError';

  constructor() {
    super('interrupted');
  }
}

/** One line for people: `file:line:column: key: message, found X. Allowed: Y. Advice.` */
export function formatFault(fault: Fault): string {
  const place = [fault.file, fault.line, fault.column].filter((part) => part !== undefined).join(':');
  const head = [place, fault.key].filter((part) => part !== undefined && part !== '').join(': ');
  const found = fault.found === undefined ? '' : `, found ${fault.found}`;
  const allowed = fault.allowed === undefined ? '' : ` Allowed: ${fault.allowed}.`;
  const advice = fault.advice === undefined ? '' : ` ${fault.advice}`;
  return `${head === '' ? '' : `${head}: `}${fault.message}${found}.${allowed}${advice}`;
}
