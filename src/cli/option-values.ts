/** What the user typed, read strictly: `12 mm`, `0x10` and an empty text are faults, and all faults of a command line come at once. */
import { type Fault, InputError } from '../errors.js';

/** Limits of a number. Left out: no limit on that side. */
export interface NumberLimits {
  min?: number;
  max?: number;
  /** `min` itself is not allowed. */
  aboveMin?: boolean;
  integer?: boolean;
}

/** Reads the values of one command line and gathers what is wrong with them. */
export class OptionValues {
  readonly #faults: Fault[] = [];

  /** A number, or undefined where the option was not given. A value that is refused comes back as undefined, too: call `check` before use. */
  number(name: string, text: string | undefined, limits: NumberLimits = {}): number | undefined {
    if (text === undefined) return undefined;
    const value = parseNumber(text);
    if (value !== undefined && isWithin(value, limits)) return value;
    this.add({
      key: name,
      message: value === undefined ? 'not a number' : 'out of range',
      found: quoted(text),
      allowed: describeLimits(limits),
    });
    return undefined;
  }

  /** Numbers with commas between them, none of them twice, in the order given. */
  numbers(name: string, text: string | undefined, limits: NumberLimits = {}): number[] | undefined {
    return this.items(name, text)
      ?.map((item) => this.number(name, item, limits))
      .filter((value) => value !== undefined);
  }

  /** The texts between the commas. */
  items(name: string, text: string | undefined): string[] | undefined {
    if (text === undefined) return undefined;
    const items = text.split(',').map((item) => item.trim());
    if (items.some((item) => item === '')) {
      this.add({
        key: name,
        message: 'the list has an empty place',
        found: quoted(text),
        advice: LIST_ADVICE,
      });
      return undefined;
    }
    const twice = items.find((item, at) => items.indexOf(item) !== at);
    if (twice !== undefined) {
      this.add({ key: name, message: 'the list names an entry twice', found: quoted(twice) });
      return undefined;
    }
    return items;
  }

  /** The name of a file. */
  path(name: string, text: string | undefined): string | undefined {
    if (text === undefined || text.trim() !== '') return text;
    this.add({ key: name, message: 'the name of the file is empty', found: quoted(text) });
    return undefined;
  }

  /** What another part makes of a value; its faults get the name of the option. */
  attempt<Result>(name: string, read: () => Result): Result | undefined {
    try {
      return read();
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      for (const fault of error.faults) this.add({ ...fault, key: name });
      return undefined;
    }
  }

  /** Note a fault that was found elsewhere. */
  add(fault: Fault): void {
    this.#faults.push(fault);
  }

  /** @throws {InputError} with every fault found so far, if there are any */
  check(): void {
    if (this.#faults.length > 0) throw new InputError(this.#faults);
  }
}

const LIST_ADVICE = 'Write the entries with one comma between two, for example 20,40,80.';

/** Decimal notation only, with an optional exponent: no hexadecimal, no `Infinity`, no unit behind it. */
const DECIMAL = /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i;

/** The number that a text stands for, or undefined where it stands for none or for one too large to hold. */
export function parseNumber(text: string): number | undefined {
  const trimmed = text.trim();
  if (!DECIMAL.test(trimmed)) return undefined;
  const value = Number(trimmed);
  return Number.isFinite(value) ? value : undefined;
}

function isWithin(value: number, { min, max, aboveMin, integer }: NumberLimits): boolean {
  if (integer && !Number.isSafeInteger(value)) return false;
  if (min !== undefined && (aboveMin ? value <= min : value < min)) return false;
  return max === undefined || value <= max;
}

/** The limits in words: `whole numbers from 1 to 16`, `numbers above 0`. */
export function describeLimits({ min, max, aboveMin, integer }: NumberLimits): string {
  const kind = integer ? 'whole numbers' : 'numbers';
  if (min === undefined && max === undefined) return kind;
  if (min === undefined) return `${kind} up to ${max}`;
  const from = aboveMin ? `above ${min}` : `from ${min}`;
  if (max !== undefined) return aboveMin ? `${kind} ${from}, up to ${max}` : `${kind} ${from} to ${max}`;
  return aboveMin ? `${kind} ${from}` : `${kind} ${from} up`;
}

function quoted(text: string): string {
  return `'${text}'`;
}
