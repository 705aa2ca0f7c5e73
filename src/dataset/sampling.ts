/** Values of the varied keys of each picture. */
import type { Recipe } from '../files/load-recipe.js';
import { choleskyFactor } from '../numeric/cholesky.js';
import { normalCdf, normalQuantile } from '../numeric/normal.js';
import { CounterRandom } from '../numeric/random.js';
import { valueAt } from './distribution.js';
import { streamOfKey } from './streams.js';

/** The value of a key of the rig. */
export interface SampledValue {
  key: string;
  value: number;
}

/** Draws the values of the varied keys. They depend on the recipe's seed, the key's name, its distribution and group, and the picture
 * alone.
 *
 * Keys of a group are joined by a Gaussian copula: their standard normals are mixed by the square root of the correlation matrix, and
 * what share of a normal lies below each is the u of the key's distribution. */
export class ValueSampler {
  readonly #keys: readonly { key: string; random: CounterRandom }[];
  readonly #distributions: Recipe['vary'];
  readonly #groups: readonly { members: readonly number[]; factor: readonly (readonly number[])[] }[];

  constructor({ seed, vary, correlated }: Pick<Recipe, 'seed' | 'vary' | 'correlated'>) {
    this.#distributions = vary;
    this.#keys = vary.map(({ key }) => ({ key, random: new CounterRandom(seed, streamOfKey(key)) }));
    this.#groups = correlated.map(({ keys, matrix }) => ({
      members: keys.map((name) => vary.findIndex(({ key }) => key === name)),
      factor: choleskyFactor(matrix)!, // the schema has seen that there is one
    }));
  }

  /** @param attempt  0; 1 and on where the values before make no rig that works */
  values(picture: number, attempt = 0): SampledValue[] {
    const shares = this.#keys.map(({ random }) => shareOf(random, picture, attempt));
    for (const { members, factor } of this.#groups) {
      const normals = members.map((member) => normalQuantile(shares[member]));
      for (const [row, member] of members.entries()) {
        let sum = 0;
        for (let k = 0; k <= row; k++) sum += factor[row][k] * normals[k];
        shares[member] = insideOne(normalCdf(sum));
      }
    }
    return this.#distributions.map(({ key, distribution }, at) => ({
      key,
      value: valueAt(distribution, shares[at]),
    }));
  }
}

/** The number in 0..1, both excluded, that a stream holds for a picture.
 * @param attempt  how many numbers of the picture to skip */
export function shareOf(random: CounterRandom, picture: number, attempt = 0): number {
  random.start(picture);
  for (let skipped = 0; skipped < attempt; skipped++) random.uniform52();
  return random.uniform52();
}

/** Far out in the tail the share rounds to 1. */
function insideOne(share: number): number {
  return Math.min(1 - 2 ** -53, Math.max(2 ** -1074, share));
}
