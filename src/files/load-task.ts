/** Task files. */
import { checkSchema } from './check-schema.js';
import { checkKind } from './kinds.js';
import { type TaskFile, taskFile } from './schemas/task.js';
import { objectSource, type Source } from './source.js';
import { parseSource, readSource } from './yaml-source.js';

/** What a vision task asks of the picture, in the names of the code. */
export interface Task {
  name: string;
  /** Field points as the file writes them: h, `h@azimuth` or the word for a place. Left out: the usual ones of the rig. */
  zones?: readonly (number | string)[];
  rules: readonly Rule[];
}

/** Size of a feature: on the object, on the sensor in pixels, or as a frequency on the sensor. */
export type FeatureSize = { featureMm: number } | { featurePx: number };
export type Limit = { atMostPx: number } | { atMostMm: number };

export type Rule =
  | { kind: 'contrast'; size: FeatureSize | { lpPerMm: number }; atLeast: number }
  | { kind: 'placement'; limit: Limit; after: 'none' }
  /** The model is a polynomial of odd powers of the radius, up to its order: 1 (a scale), 3, 5 or 7. */
  | { kind: 'placement'; limit: Limit; after: 'radial-model'; modelOrder: number }
  | { kind: 'edge_blur'; limit: Limit }
  | {
      kind: 'decode';
      symbol: 'qr' | 'data_matrix' | 'code_128';
      module: { moduleMm: number } | { modulePx: number };
      successAtLeast: number;
      trials: number;
    }
  | { kind: 'detect'; size: FeatureSize; contrast: number; ratioAtLeast: number };

/** Reads a task file. @throws {InputError} all faults of the file */
export function loadTask(path: string): Task {
  return taskOf(readSource(path));
}

/** The task in a text (YAML or JSON) or in an object with the keys of a task file. @throws {InputError} all faults */
export function parseTask(input: string | object): Task {
  return taskOf(typeof input === 'string' ? parseSource(input) : objectSource(input));
}

function taskOf(source: Source): Task {
  checkKind('task', source);
  const file = checkSchema(taskFile, source);
  const task: Task = { name: file.name, rules: file.require.map(ruleFromFile) };
  if (file.zones !== undefined) task.zones = file.zones;
  return task;
}

/** The schema has seen to it that one rule stands in an entry, and one size or limit in a rule. */
function ruleFromFile({ contrast, placement, edge_blur, decode, detect }: TaskFile['require'][number]): Rule {
  if (contrast !== undefined) {
    const size = contrast.lp_per_mm === undefined ? featureSize(contrast) : { lpPerMm: contrast.lp_per_mm };
    return { kind: 'contrast', size, atLeast: contrast.at_least };
  }
  if (placement !== undefined) {
    const limit = limitOf(placement);
    if (placement.after === 'none') return { kind: 'placement', limit, after: 'none' };
    return { kind: 'placement', limit, after: 'radial-model', modelOrder: placement.model_order ?? 3 };
  }
  if (edge_blur !== undefined) return { kind: 'edge_blur', limit: limitOf(edge_blur) };
  if (decode !== undefined) {
    const { symbol, module_mm, module_px, success_at_least, trials } = decode;
    const module = module_mm === undefined ? { modulePx: module_px! } : { moduleMm: module_mm };
    return { kind: 'decode', symbol, module, successAtLeast: success_at_least, trials };
  }
  const { contrast: featureContrast, ratio_at_least } = detect!;
  return {
    kind: 'detect',
    size: featureSize(detect!),
    contrast: featureContrast,
    ratioAtLeast: ratio_at_least,
  };
}

function featureSize({ feature_mm, feature_px }: { feature_mm?: number; feature_px?: number }): FeatureSize {
  return feature_mm === undefined ? { featurePx: feature_px! } : { featureMm: feature_mm };
}

function limitOf({ at_most_px, at_most_mm }: { at_most_px?: number; at_most_mm?: number }): Limit {
  return at_most_px === undefined ? { atMostMm: at_most_mm! } : { atMostPx: at_most_px };
}
