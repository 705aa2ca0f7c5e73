/** Parts of a data set that never show the same scene. */
import { type Fault, InputError } from '../errors.js';
import type { Recipe, Split } from '../files/load-recipe.js';
import { CounterRandom } from '../numeric/random.js';
import { STREAM } from './streams.js';

export const SPLITS: readonly Split[] = ['train', 'val', 'test'];

/** Which part a picture belongs to, and which of that part's pictures it is. */
export interface Turn {
  /** Left out: the recipe has no shares. */
  split?: Split;
  /** Number of the picture within its part, from 0. */
  turn: number;
}

/** Share of each part, summing to 1, in the order of SPLITS; those without a share are left out. */
function normalShares(shares: NonNullable<Recipe['shares']>): [Split, number][] {
  const there = SPLITS.filter((split) => shares[split] !== undefined);
  const sum = there.reduce((total, split) => total + shares[split]!, 0);
  return there.map((split) => [split, shares[split]! / sum]);
}

/** The part of a picture. Parts take turns as evenly as whole pictures allow, so that any number of pictures, counted from the first,
 * is divided as the shares say, to within two; the number of pictures does not enter. */
export function turnOf(shares: Recipe['shares'], picture: number): Turn {
  if (shares === undefined) return { turn: picture };
  const parts = normalShares(shares);
  const [last] = parts[parts.length - 1];
  let left = 1;
  let number = picture;
  for (const [split, share] of parts) {
    if (split === last) break;
    const part = Math.min(1, share / left);
    const before = Math.floor(number * part + TINY);
    if (Math.floor((number + 1) * part + TINY) > before) return { split, turn: before };
    number -= before;
    left -= share;
  }
  return { split: last, turn: number };
}

/** Lets rounding not hold a turn back. */
const TINY = 1e-9;

/** The scenes of each part, by index, rising. Which scene belongs where is drawn from the seed.
 * @throws {InputError} fewer scenes than parts */
export function sceneShares(
  { shares, seed }: Pick<Recipe, 'shares' | 'seed'>,
  sceneCount: number,
): Partial<Record<Split, number[]>> {
  if (shares === undefined) return {};
  const parts = normalShares(shares);
  if (sceneCount < parts.length) {
    throw new InputError({
      key: 'shares',
      message: 'there are fewer scenes than parts, and no two parts show the same scene',
      found: `${sceneCount} scenes for ${parts.map(([split]) => split).join(', ')}`,
      allowed: `${parts.length} scenes or more`,
    } satisfies Fault);
  }
  const random = new CounterRandom(seed, STREAM.split);
  const order = Array.from({ length: sceneCount }, (_, scene) => {
    random.start(scene);
    return { scene, rank: random.uniform52() };
  }).sort((a, b) => a.rank - b.rank || a.scene - b.scene);
  const sizes = wholeParts(
    parts.map(([, share]) => share),
    sceneCount,
  );
  let from = 0;
  return Object.fromEntries(
    parts.map(([split], at) => {
      const scenes = order.slice(from, from + sizes[at]).map(({ scene }) => scene);
      from += sizes[at];
      return [split, scenes.sort((a, b) => a - b)];
    }),
  );
}

/** Divide a number of things by shares: at least one each, else as near to the share as can be. */
function wholeParts(shares: readonly number[], count: number): number[] {
  const sizes = shares.map((share) => Math.max(1, Math.floor(share * count)));
  const sum = () => sizes.reduce((total, size) => total + size, 0);
  const lack = (at: number) => shares[at] * count - sizes[at];
  const indices = [...shares.keys()];
  while (sum() < count) sizes[indices.reduce((best, at) => (lack(at) > lack(best) ? at : best))]++;
  while (sum() > count) {
    const many = indices.filter((at) => sizes[at] > 1);
    sizes[many.reduce((best, at) => (lack(at) < lack(best) ? at : best))]--;
  }
  return sizes;
}
