/** Data against a schema: the faults that zod finds, told in the project's words with the place of each. */
import type { z } from 'zod';
import { type Fault, InputError } from '../errors.js';
import { nearest } from './nearest.js';
import type { CrossFault } from './schemas/cross-check.js';
import { keysOf } from './schemas/keys.js';
import { keyPath, type Path, type Source, valueAt } from './source.js';

type Issue = z.core.$ZodIssue;

/** Checks a source and fills in the defaults.
 * @throws {InputError} every fault of the source and of its content, in the order of the lines
 */
export function checkSchema<Schema extends z.ZodType>(
  schema: Schema,
  source: Source & { isLost?(path: Path): boolean },
): z.output<Schema> {
  const result = schema.safeParse(source.value, { error: allowedWords });
  const issues = result.success
    ? []
    : result.error.issues.flatMap((issue) => innermost(issue, [], source.value));
  const known = issues.filter(({ path }) => source.isLost?.(path) !== true);
  const faults = withoutEchoes(known.flatMap((issue) => describe(issue, source, schema)));
  if (faults.length > 0 || source.faults.length > 0)
    throw new InputError(inOrder([...source.faults, ...faults]));
  return result.data as z.output<Schema>;
}

/** A fault on its way, with what `withoutEchoes` needs to know. */
interface Draft {
  fault: Fault;
  /** Paths of keys that are missing. */
  missing?: readonly string[];
  /** Path of the key that was likely meant by an unknown one. */
  meant?: string;
}

/** What stands in the schema as `error` is the text of what is allowed; where nothing stands, zod's own data says it. */
function allowedWords(issue: z.core.$ZodRawIssue): string {
  return issue.code === 'invalid_value'
    ? issue.values.map((value) => String(value)).join(', ')
    : NOTHING_TO_SAY;
}
const NOTHING_TO_SAY = '-'; // zod takes an empty text for none

/** Issues of unions are taken apart: where the value has the form of one of the choices, the issues of that choice count. */
function innermost(issue: Issue, before: Path, data: unknown): Issue[] {
  const path = [...before, ...issue.path];
  if (issue.code === 'invalid_union') {
    const value = valueAt(data, path);
    const meant = issue.errors.filter((branch) => !branch.some((inner) => isOtherForm(inner, value)));
    if (meant.length === 1) {
      const [first] = meant[0];
      // a word that is none of the choices: the union's text tells of all that is allowed
      if (first.code === 'invalid_value' && first.path.length === 0)
        return [{ ...first, path, message: issue.message }];
      return meant[0].flatMap((inner) => innermost(inner, path, data));
    }
  }
  return [{ ...issue, path }];
}

/** Whether an issue of a union's choice says that the value is of another kind altogether. */
function isOtherForm(issue: Issue, value: unknown): boolean {
  if (issue.path.length > 0) return false;
  if (issue.code === 'invalid_type') return true;
  return issue.code === 'invalid_value' && issue.values.every((choice) => typeof choice !== typeof value);
}

function describe(issue: Issue, source: Source, schema: z.ZodType): Draft[] {
  const { path } = issue;
  const value = valueAt(source.value, path);
  const allowed = issue.message === NOTHING_TO_SAY ? undefined : issue.message;
  switch (issue.code) {
    case 'unrecognized_keys':
      return issue.keys.map((key) =>
        describeUnknownKey([...path, key], key, issue.message.split(', '), source, schema),
      );
    case 'invalid_key': {
      const words = {
        message: 'is no fitting key',
        found: String(path.at(-1)),
        allowed: issue.issues[0]?.message,
      };
      return [{ fault: { ...source.place(path, 'key'), ...words } }];
    }
    case 'custom': {
      const { message, advice, inKey, missing, lacks, ...rest } = issue.params as CrossFault;
      const found = rest.found ?? (value === undefined || inKey ? undefined : describeValue(value));
      const place = source.place(path, inKey ? 'key' : 'value');
      const fault = { ...place, message, found, allowed: rest.allowed, advice };
      return [{ fault, missing: missing ? [keyPath(path)] : lacks?.map((key) => keyPath([...path, key])) }];
    }
    default: {
      const place = source.place(path, 'value');
      if (value === undefined) {
        return [{ fault: { ...place, message: 'is missing', allowed }, missing: [keyPath(path)] }];
      }
      const found = value === null ? undefined : describeValue(value);
      const advice = adviceFor(issue, value);
      return [{ fault: { ...place, message: messageFor(issue, value), found, allowed, advice } }];
    }
  }
}

function describeUnknownKey(
  path: Path,
  key: string,
  known: readonly string[],
  source: Source,
  schema: z.ZodType,
): Draft {
  const misplaced = adviceOnPlace(key, schema);
  const near = misplaced === undefined ? nearest(key, known) : undefined;
  const advice = near === undefined ? misplaced : `Did you mean '${near}'?`;
  const place = source.place(path, 'key');
  const fault = { ...place, message: 'is no known key', found: key, allowed: known.join(', '), advice };
  return near === undefined ? { fault } : { fault, meant: keyPath([...path.slice(0, -1), near]) };
}

/** Where a key belongs that the schema knows, but elsewhere. */
function adviceOnPlace(key: string, schema: z.ZodType): string | undefined {
  const ending = `.${key}`;
  const holders = [...keysOf(schema)].flatMap(([path]) =>
    path.endsWith(ending) ? [path.slice(0, -ending.length)] : [],
  );
  return holders.length === 0 ? undefined : `It belongs under ${holders.join(' or ')}.`;
}

function messageFor(issue: Issue, value: unknown): string {
  switch (issue.code) {
    case 'invalid_type':
      if (value === null) return 'is empty';
      return typeof value === 'number' && !Number.isFinite(value)
        ? 'is not a finite number'
        : `is not ${TYPE_WORDS[issue.expected] ?? issue.expected}`;
    case 'too_small':
      return SMALL_WORDS[issue.origin] ?? 'has too few entries';
    case 'too_big':
      return LARGE_WORDS[issue.origin] ?? 'has too many entries';
    case 'invalid_value':
      return typeof value === 'object' ? 'has the wrong form' : 'is none of the choices';
    default:
      return value === null ? 'is empty' : 'has the wrong form';
  }
}

const SMALL_WORDS: Readonly<Record<string, string>> = {
  number: 'is too small',
  int: 'is too small',
  string: 'is too short',
};

const LARGE_WORDS: Readonly<Record<string, string>> = {
  number: 'is too large',
  int: 'is too large',
  string: 'is too long',
};

const TYPE_WORDS: Readonly<Record<string, string>> = {
  number: 'a number',
  int: 'a whole number',
  string: 'a text',
  boolean: 'true or false',
  object: 'a mapping',
  record: 'a mapping',
  array: 'a list',
  tuple: 'a list',
};

function adviceFor(issue: Issue, value: unknown): string | undefined {
  if (typeof value !== 'string') return undefined;
  const near = nearest(value, choicesOf(issue));
  if (near !== undefined) return `Did you mean '${near}'?`;
  const wantsNumber =
    issue.code === 'invalid_type' && (issue.expected === 'number' || issue.expected === 'int');
  if (!wantsNumber) return undefined;
  if (/^[+-]?\d+,\d+$/.test(value)) return 'Write the decimal mark as a point.';
  if (/^[+-]?[\d.]+\s*[a-zA-Zµμ%°/]+$/.test(value))
    return 'Write the number alone: the unit stands in the name of the key.';
  return Number.isFinite(Number(value)) && value.trim() !== ''
    ? 'Write the number without quotation marks.'
    : undefined;
}

/** The words that an issue, or a choice of a union, would have taken. */
function choicesOf(issue: Issue): string[] {
  if (issue.code === 'invalid_value') return issue.values.filter((word) => typeof word === 'string');
  if (issue.code === 'invalid_union')
    return issue.errors
      .flat()
      .filter(({ path }) => path.length === 0)
      .flatMap(choicesOf);
  return [];
}

const MAX_FOUND_LENGTH = 60;

/** A value as it is printed in a fault: short, in one line. */
export function describeValue(value: unknown): string {
  const keepNumbers = (_: string, inner: unknown) =>
    typeof inner === 'number' && !Number.isFinite(inner) ? String(inner) : inner;
  const text =
    typeof value === 'object' && value !== null ? JSON.stringify(value, keepNumbers) : plainWord(value);
  return text.length <= MAX_FOUND_LENGTH ? text : `${text.slice(0, MAX_FOUND_LENGTH - 1)}…`;
}

function plainWord(value: unknown): string {
  if (value === null || value === undefined) return 'nothing';
  return typeof value === 'string' ? JSON.stringify(value) : String(value);
}

/** A misspelt key makes two faults, an unknown key and a missing one: the second only repeats the first. */
function withoutEchoes(drafts: readonly Draft[]): Fault[] {
  const meant = new Set(drafts.map((draft) => draft.meant));
  return drafts
    .filter(({ missing = [] }) => !missing.some((key) => meant.has(key)))
    .map(({ fault }) => fault);
}

/** By line within a file; files in the order in which their first fault came. */
function inOrder(faults: readonly Fault[]): Fault[] {
  const files = [...new Set(faults.map(({ file }) => file))];
  const rank = ({ file }: Fault) => files.indexOf(file);
  return [...faults].sort(
    (a, b) => rank(a) - rank(b) || (a.line ?? 0) - (b.line ?? 0) || (a.column ?? 0) - (b.column ?? 0),
  );
}
