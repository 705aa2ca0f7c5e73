/** A rate of success from as few tries as its verdict needs. */
import type { Outcome } from './reading.js';

/** What is asked of a rate. */
export interface RateRule {
  /** The most tries. */
  trials: number;
  successAtLeast: number;
}

export interface Rate {
  /** Share of the tries made that were read rightly. */
  value: number;
  trials: number;
  read: number;
  misread: number;
  /** Where the rate lies, with 95 % confidence. */
  interval: [low: number, high: number];
  met: boolean;
}

/** Successes among `trials` that meet a rule. */
export function successesNeeded({ trials, successAtLeast }: RateRule): number {
  return Math.ceil(successAtLeast * trials - 1e-9);
}

/** The rate over the tries in their order, up to the first at which the verdict over all of them is certain, whatever the rest would give:
 * enough successes, or more failures than the rule leaves room for (curtailed sampling). So stopping never changes the verdict.
 *
 * @returns undefined while the outcomes do not decide yet */
export function decidedRate(outcomes: readonly (Outcome | undefined)[], rule: RateRule): Rate | undefined {
  const needed = successesNeeded(rule);
  let read = 0;
  let misread = 0;
  for (const [at, outcome] of outcomes.entries()) {
    if (outcome === undefined) return undefined; // still under way
    if (outcome === 'read') read++;
    if (outcome === 'misread') misread++;
    const made = at + 1;
    const isMet = read >= needed;
    if (isMet || read + rule.trials - made < needed)
      return { value: read / made, trials: made, read, misread, interval: wilson(read, made), met: isMet };
  }
  return undefined;
}

/** 97.5 % quantile of the standard normal distribution. */
const Z = 1.959963984540054;

/** Wilson's score interval for a proportion, 95 %.
 * Source: E. B. Wilson, J. Am. Stat. Assoc. 22 (1927) 209 (cited from memory) */
export function wilson(successes: number, trials: number): [low: number, high: number] {
  const p = successes / trials;
  const z2 = (Z * Z) / trials;
  const middle = (p + z2 / 2) / (1 + z2);
  const half = (Z / (1 + z2)) * Math.sqrt((p * (1 - p)) / trials + z2 / (4 * trials));
  return [successes === 0 ? 0 : middle - half, successes === trials ? 1 : middle + half];
}
