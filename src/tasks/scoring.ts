/** One number for how good a changed rig is for a task, for those who look for what limits it and what to change. */
import { InputError } from '../errors.js';
import type { FieldPoint } from '../optics/field-points.js';
import type { Rig } from '../optics/rig.js';
import { benchFor } from './bench.js';
import { isOpticsRule, judgeRule, type LaidOut, type OpticsRule } from './evaluate.js';
import { marginAtLeast } from './figures.js';
import type { PixelRuleOf } from './rules.js';
import { type RuleVerdict, type Trials, tryAt } from './verdict.js';

/** Scores variants of one rig on one task: the least margin of the closed-form rules in the task's zones, and of those `decode` rules that
 * the rig as it stands does not meet, each in its worst zone. A `decode` rule that is met stays out: its margin ends at a rate of 1, where
 * it says nothing any more. In a task of nothing but `decode` an edge blur that stays within a module stands for the symbols: in searches, and
 * where they are met. */
export class Scoring {
  readonly rules: readonly OpticsRule[];
  readonly points: readonly FieldPoint[];
  readonly #tried: readonly { rule: PixelRuleOf<'decode'>; worst: FieldPoint }[];
  readonly #trials: Trials;
  /** Whether `rules` are the task's own, or stand for its symbols. */
  readonly hasOptics: boolean;
  /** Every rule that searches look at, at every place; the one that was the worst last time comes first. */
  readonly #pairs: { rule: OpticsRule; point: FieldPoint }[];

  /** @param verdicts of the rig as it stands, in the order of the rules */
  constructor({ rules, points }: LaidOut, verdicts: readonly RuleVerdict[], trials: Trials) {
    const optics = rules.filter(isOpticsRule);
    const decode = rules.filter((rule) => rule.kind === 'decode');
    this.hasOptics = optics.length > 0;
    this.rules = this.hasOptics ? optics : decode.map(blurWithinModule);
    this.points = points;
    this.#tried = decode.flatMap((rule) => {
      const { met, margin, zones } = verdicts[rules.indexOf(rule)];
      return met ? [] : [{ rule, worst: points[zones.findIndex((zone) => zone.margin === margin)] }];
    });
    this.#trials = trials;
    // a task that symbols fail may have no other rule that feels the focus: the edges of their modules do
    const standIns = this.hasOptics ? this.#tried.map(({ rule }) => blurWithinModule(rule)) : [];
    this.#pairs = [...this.rules, ...standIns].flatMap((rule) => points.map((point) => ({ rule, point })));
  }

  /** What a search makes large: the least margin of the closed-form rules, and of the edges that stand for symbols which are not read.
   * -Infinity where a variant cannot be computed.
   * @param floor a margin at or below which the exact value does not matter: the search then ends early */
  searchMargin(rig: Rig, floor = Number.NEGATIVE_INFINITY): number {
    const { margin, worst } = leastOf(rig, this.#pairs, floor);
    this.#pairs.unshift(...this.#pairs.splice(worst, 1));
    return margin;
  }

  /** The least margin of `rules`. */
  opticsMargin(rig: Rig): number {
    const pairs = this.rules.flatMap((rule) => this.points.map((point) => ({ rule, point })));
    return leastOf(rig, pairs, Number.NEGATIVE_INFINITY).margin;
  }

  /** The least margin, trials included. What only stands for symbols does not count where these are tried. */
  async margin(rig: Rig): Promise<number> {
    const isStandIn = !this.hasOptics && this.#tried.length > 0;
    const margin = isStandIn ? Number.POSITIVE_INFINITY : this.opticsMargin(rig);
    return Math.min(margin, await this.triedMargin(rig));
  }

  /** The least margin of the symbols that the rig as it stands does not read: Infinity where there are none. */
  async triedMargin(rig: Rig): Promise<number> {
    let margin = Number.POSITIVE_INFINITY;
    for (const { rule, worst } of this.#tried) {
      const { value } = await tryAt(rig, rule, worst, this.#trials);
      margin = Math.min(margin, marginAtLeast(value, rule.successAtLeast));
    }
    return margin;
  }
}

function leastOf(
  rig: Rig,
  pairs: readonly { rule: OpticsRule; point: FieldPoint }[],
  floor: number,
): { margin: number; worst: number } {
  let least = Number.POSITIVE_INFINITY;
  let worst = 0;
  try {
    const bench = benchFor(rig);
    for (const [at, { rule, point }] of pairs.entries()) {
      const { margin } = judgeRule(bench, rule, point, 'rough');
      if (margin >= least) continue;
      least = margin;
      worst = at;
      if (least <= floor) break;
    }
  } catch (error) {
    if (error instanceof InputError) return { margin: Number.NEGATIVE_INFINITY, worst: 0 };
    throw error;
  }
  return { margin: least, worst };
}

/** What stands for a symbol where nothing but its decoding is asked: an edge as wide as a module. */
export function blurWithinModule({ modulePx }: PixelRuleOf<'decode'>): OpticsRule {
  return { kind: 'edge_blur', limit: { atMost: modulePx, unit: 'px', perPixel: 1 } };
}
