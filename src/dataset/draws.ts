/** All that is drawn for a picture, from (recipe, seed, number of the picture) alone. */
import type { Recipe, Split } from '../files/load-recipe.js';
import { CounterRandom } from '../numeric/random.js';
import { valueAt } from './distribution.js';
import { type SampledValue, shareOf, ValueSampler } from './sampling.js';
import { sceneShares, turnOf } from './shares.js';
import { STREAM } from './streams.js';

/** What chance says about one picture. Shares are numbers in 0..1, both excluded. */
export interface Draw {
  split?: Split;
  /** Index of the scene. */
  scene: number;
  /** Index of the rig. */
  rig: number;
  values: SampledValue[];
  windowShares: readonly [x: number, y: number];
  placeShares: readonly [x: number, y: number];
  scale: number;
  /** Quarter turns of the scene, clockwise. */
  quarterTurns: number;
  /** Seed of the picture's noise. */
  seed: number;
  /** Seed of the fixed pattern: each picture is taken by a camera of its own. */
  cameraSeed: number;
}

/** Draws pictures. One object serves one thread. */
export class Drawing {
  readonly #recipe: Recipe;
  readonly #sceneCount: number;
  readonly #shares: Partial<Record<Split, number[]>>;
  readonly #values: ValueSampler;
  readonly #streams: Readonly<Record<keyof typeof STREAM, CounterRandom>>;

  /** @throws {InputError} fewer scenes than parts of the data set */
  constructor(recipe: Recipe, sceneCount: number) {
    this.#recipe = recipe;
    this.#sceneCount = sceneCount;
    this.#shares = sceneShares(recipe, sceneCount);
    this.#values = new ValueSampler(recipe);
    this.#streams = Object.fromEntries(
      Object.entries(STREAM).map(([name, stream]) => [name, new CounterRandom(recipe.seed, stream)]),
    ) as Record<keyof typeof STREAM, CounterRandom>;
  }

  /** The scenes of a part of the data set; of all of it where it has no parts. */
  scenesOf(split: Split | undefined): readonly number[] {
    if (split !== undefined) return this.#shares[split] ?? [];
    return Array.from({ length: this.#sceneCount }, (_, scene) => scene);
  }

  /** @param picture  from 0
   * @param attempt  draws everything anew but part, scene and rig, where what came before makes no rig that works */
  draw(picture: number, attempt = 0): Draw {
    const { shares, scenes, rigs, placement } = this.#recipe;
    const { split, turn } = turnOf(shares, picture);
    const count = split === undefined ? this.#sceneCount : this.#shares[split]!.length;
    const isInTurn = scenes.order === 'in_turn';
    const at = isInTurn ? turn % count : Math.floor(shareOf(this.#streams.scene, picture) * count);
    // in turn, a scene meets another rig each time it comes round; by chance, the rigs take turns by themselves
    const rig = (isInTurn ? at + Math.floor(turn / count) : turn) % rigs.length;
    const pairOf = (random: CounterRandom): [number, number] => [
      shareOf(random, picture, 2 * attempt),
      shareOf(random, picture, 2 * attempt + 1),
    ];
    return {
      split,
      scene: split === undefined ? at : this.#shares[split]![at],
      rig,
      values: this.#values.values(picture, attempt),
      windowShares: pairOf(this.#streams.window),
      placeShares: pairOf(this.#streams.place),
      scale: valueAt(placement.scale, shareOf(this.#streams.scale, picture, attempt)),
      quarterTurns: placement.quarterTurns
        ? Math.floor(4 * shareOf(this.#streams.turn, picture, attempt))
        : 0,
      seed: seedOf(this.#streams.noise, picture),
      cameraSeed: seedOf(this.#streams.camera, picture),
    };
  }
}

/** A whole number from 0 to 2^53 - 1. */
function seedOf(random: CounterRandom, picture: number): number {
  random.start(picture);
  const high = random.word() >>> 11;
  return high * 2 ** 32 + (random.word() >>> 0);
}
