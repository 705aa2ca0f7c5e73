/** Truth files of charts. */
import { InputError } from '../errors.js';
import { checkSchema } from './check-schema.js';
import { readInputText } from './input-text.js';
import { type ChartTruthFile, chartTruthFile } from './schemas/chart-truth.js';
import { isMapping } from './schemas/cross-check.js';
import { keyPath, type Source } from './source.js';
import { parseSource } from './yaml-source.js';

/** A truth file in the names of the code. */
export type LoadedTruth = CamelKeys<ChartTruthFile>;

type Camel<Key> = Key extends `${infer Head}_${infer Tail}` ? `${Head}${Capitalize<Camel<Tail>>}` : Key;
type CamelKeys<Value> = Value extends readonly unknown[]
  ? { [Index in keyof Value]: CamelKeys<Value[Index]> }
  : Value extends object
    ? { [Key in keyof Value as Camel<Key>]: CamelKeys<Value[Key]> }
    : Value;

/** Reads the truth file that `chart` wrote. @throws {InputError} all faults of the file */
export function loadTruth(path: string): LoadedTruth {
  const source = truthSource(path);
  if (!isMapping(source.value) || !('chart' in source.value))
    throw new InputError({
      file: path,
      message: 'is not the truth file of a chart',
      advice: 'foreglass chart writes it beside the scene, as NAME.truth.json.',
    });
  return camelKeys(checkSchema(chartTruthFile, source)) as LoadedTruth;
}

/** JSON as it is, which is quick at the size of a truth file; what is no JSON is read as YAML, which knows
 * the line of a fault. */
function truthSource(file: string): Source {
  const text = readInputText(file);
  try {
    const value: unknown = JSON.parse(text);
    return { file, value, faults: [], place: (path) => ({ file, key: keyPath(path) }) };
  } catch {
    return parseSource(text, file);
  }
}

function camelKeys(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(camelKeys);
  if (typeof value !== 'object' || value === null) return value;
  return Object.fromEntries(
    Object.entries(value).map(([key, item]) => [
      key.replace(/_([a-z])/g, (_, letter: string) => letter.toUpperCase()),
      camelKeys(item),
    ]),
  );
}
