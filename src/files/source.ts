/** Where the values of an input come from: a YAML file, a text or an object of the caller, or several of them put together. */
import type { Fault } from '../errors.js';

export type Path = readonly PropertyKey[];

/** The part of a fault that says where: file, line, column and key. */
export type Place = Pick<Fault, 'file' | 'line' | 'column' | 'key'>;

export interface Source {
  /** The file, as the user named it. */
  readonly file?: string;
  /** Plain data: mappings, lists, texts, numbers, booleans, null. */
  readonly value: unknown;
  /** What is wrong with the text itself, though it could be read: keys that stand twice, unknown tags. */
  readonly faults: readonly Fault[];
  /** Where a value (or its key) stands. For a key that is not there: where its parent stands. */
  place(path: Path, part: 'key' | 'value'): Place;
}

/** Data that is there already. Its faults carry the key alone. */
export function objectSource(value: unknown): Source {
  return { value, faults: [], place: (path) => ({ key: keyPath(path) }) };
}

/** A value that stands for one given elsewhere, such as an option of the command line. */
export function namedSource(value: unknown, key: string): Source {
  return {
    value,
    faults: [],
    place: (path) => ({ key: path.length === 0 ? key : `${key}.${keyPath(path)}` }),
  };
}

/** A path in the words of a user: `camera.bands_nm.mono[0]`. */
export function keyPath(path: Path): string {
  return path
    .map((part, index) =>
      typeof part === 'number' ? `[${part}]` : `${index === 0 ? '' : '.'}${String(part)}`,
    )
    .join('');
}

/** The way back from the words of a user: `camera.bands_nm.mono[0]` to its steps. */
export function parseKeyPath(key: string): PropertyKey[] {
  const steps = key.match(/\[\d+\]|[^.[\]]+/g) ?? [];
  return steps.map((step) => (step.startsWith('[') ? Number(step.slice(1, -1)) : step));
}

/** The value at a path of plain data; undefined where there is none. */
export function valueAt(data: unknown, path: Path): unknown {
  return path.reduce<unknown>(
    (value, step) =>
      typeof value === 'object' && value !== null && Object.hasOwn(value, step)
        ? (value as Record<PropertyKey, unknown>)[step]
        : undefined,
    data,
  );
}
