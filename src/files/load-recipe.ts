/** Dataset recipes. */
import fs from 'node:fs';
import { type Fault, InputError } from '../errors.js';
import { checkSchema } from './check-schema.js';
import { unreadableFault } from './input-text.js';
import { checkKind } from './kinds.js';
import {
  correlationMatrix,
  type Distribution as DistributionFile,
  type RecipeFile,
  recipeFile,
} from './schemas/recipe.js';
import type { Path } from './source.js';
import { SourceTree } from './source-tree.js';
import { readSource } from './yaml-source.js';

/** How a data set is made, in the names of the code; files are named so that they open from the working folder. */
export interface Recipe {
  rigs: readonly string[];
  scenes: {
    images: string;
    labels?: string;
    order: 'in_turn' | 'random';
    /** The numbers of the scenes are linear light. */
    isLinear: boolean;
  };
  count: number;
  seed: number;
  /** Parts of the pictures, in any unit. */
  shares?: Readonly<Partial<Record<Split, number>>>;
  /** Numbers of the rig by path, in the order of the file. */
  vary: readonly { key: string; distribution: Distribution }[];
  /** Groups of these keys with the matrix of their correlations. */
  correlated: readonly { keys: readonly string[]; matrix: readonly (readonly number[])[] }[];
  placement: {
    cover: 'sensor' | 'picture' | 'none';
    scale: Distribution;
    at: 'middle' | 'random';
    quarterTurns: boolean;
  };
  accuracy: { oversample: number; tolerance: number; kernelTolerance: number };
  output: {
    /** Left out: the whole sensor. */
    size?: readonly [width: number, height: number];
    window: 'random' | 'middle' | readonly [column: number, row: number];
    format: 'png' | 'jpeg' | 'webp' | 'tiff';
    picture: 'developed' | 'linear' | 'raw';
    quality?: number;
    labels: 'coco' | 'none';
    /** Least share of a label's area that must be left in the picture. */
    leastLeft: number;
  };
}

export type Split = 'train' | 'val' | 'test';

export type Distribution =
  | { kind: 'uniform'; low: number; high: number }
  | { kind: 'normal'; mean: number; deviation: number; within?: readonly [low: number, high: number] }
  | { kind: 'log_uniform'; low: number; high: number }
  | { kind: 'choice'; values: readonly number[] }
  | { kind: 'fixed'; value: number };

/** Reads a recipe file and sees that the files it names are there.
 * @throws {InputError} all faults of the file
 */
export function loadRecipe(path: string): Recipe {
  const source = new SourceTree(readSource(path));
  checkKind('recipe', source);
  const file = checkSchema(recipeFile, source);
  const faults: Fault[] = [];
  const found = (at: Path, name: string, kind: 'file' | 'folder'): string => {
    const full = source.resolve(at, name, '.');
    const fault = absenceFault(full, kind);
    if (fault !== undefined) {
      faults.push({ ...fault, ...source.place(at, 'value'), message: `'${full}': ${fault.message}` });
    }
    return full;
  };
  const { rig, scenes } = file;
  const recipe: Recipe = {
    rigs:
      typeof rig === 'string'
        ? [found(['rig'], rig, 'file')]
        : rig.map((name, index) => found(['rig', index], name, 'file')),
    scenes: {
      images: found(['scenes', 'images'], scenes.images, 'folder'),
      order: scenes.order,
      isLinear: scenes.linear === true,
    },
    count: file.count,
    seed: file.seed,
    vary: Object.entries(file.vary).map(([key, value]) => ({
      key,
      distribution: distributionFromFile(value),
    })),
    correlated: file.correlated.map((group) => ({
      keys: group.keys,
      matrix: correlationMatrix(group.keys.length, group)!, // the schema has seen to it
    })),
    placement: placementFromFile(file.placement),
    accuracy: {
      oversample: file.accuracy.oversample,
      tolerance: file.accuracy.tolerance,
      kernelTolerance: file.accuracy.kernel_tolerance,
    },
    output: outputFromFile(file.output),
  };
  if (file.shares !== undefined) recipe.shares = file.shares;
  if (scenes.labels !== undefined) recipe.scenes.labels = found(['scenes', 'labels'], scenes.labels, 'file');
  if (faults.length > 0) throw new InputError(faults);
  return recipe;
}

function absenceFault(path: string, kind: 'file' | 'folder'): Fault | undefined {
  try {
    const isFolder = fs.statSync(path).isDirectory();
    if (isFolder === (kind === 'folder')) return undefined;
    return { message: isFolder ? 'is a folder, not a file' : 'is a file, not a folder' };
  } catch (error) {
    return unreadableFault(path, error);
  }
}

function placementFromFile({
  cover,
  scale,
  at,
  quarter_turns,
}: RecipeFile['placement']): Recipe['placement'] {
  return {
    cover,
    scale: typeof scale === 'number' ? { kind: 'fixed', value: scale } : distributionFromFile(scale),
    at,
    quarterTurns: quarter_turns === true,
  };
}

function outputFromFile(file: RecipeFile['output']): Recipe['output'] {
  const { size, window, format, quality, labels, least_left: leastLeft } = file;
  const picture = file.picture ?? (format === 'tiff' ? 'linear' : 'developed');
  const output: Recipe['output'] = { window, format, picture, labels, leastLeft };
  if (size !== undefined) output.size = size;
  if (quality !== undefined) output.quality = quality;
  return output;
}

/** The schema has seen to it that there is exactly one kind. */
function distributionFromFile(file: DistributionFile): Distribution {
  const { uniform, normal, log_uniform, choice, fixed, within } = file;
  if (uniform !== undefined) return { kind: 'uniform', low: uniform[0], high: uniform[1] };
  if (log_uniform !== undefined) return { kind: 'log_uniform', low: log_uniform[0], high: log_uniform[1] };
  if (choice !== undefined) return { kind: 'choice', values: choice };
  if (fixed !== undefined) return { kind: 'fixed', value: fixed };
  const [mean, deviation] = normal!;
  return within === undefined
    ? { kind: 'normal', mean, deviation }
    : { kind: 'normal', mean, deviation, within };
}
