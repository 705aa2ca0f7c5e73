/** Values of a distribution from evenly spread numbers. */
import type { Distribution } from '../files/load-recipe.js';
import { normalCdf, normalQuantile } from '../numeric/normal.js';

/** The value below which the share u of a distribution lies, by the inverse of its distribution function: a rising function of u, so that
 * values of correlated u are correlated alike.
 * @param u  above 0, below 1 */
export function valueAt(distribution: Distribution, u: number): number {
  switch (distribution.kind) {
    case 'fixed':
      return distribution.value;
    case 'uniform':
      return clamped(distribution.low + u * (distribution.high - distribution.low), distribution);
    case 'log_uniform': {
      const { low, high } = distribution;
      return clamped(low * (high / low) ** u, distribution);
    }
    case 'choice': {
      const { values } = distribution;
      return values[Math.min(values.length - 1, Math.floor(u * values.length))];
    }
    case 'normal': {
      const { mean, deviation, within } = distribution;
      if (within === undefined) return mean + deviation * normalQuantile(u);
      const [low, high] = within;
      if (deviation === 0) return mean;
      return clamped(mean + deviation * truncated(u, (low - mean) / deviation, (high - mean) / deviation), {
        low,
        high,
      });
    }
  }
}

/** Quantile of a standard normal between two limits. Above the mean it is taken from the other side, where shares are not lost in 1. */
function truncated(u: number, low: number, high: number): number {
  if (low > 0) return -truncated(1 - u, -high, -low);
  const from = normalCdf(low);
  const to = normalCdf(high);
  return normalQuantile(from + u * (to - from));
}

/** Rounding must not carry a value past its limits. */
function clamped(value: number, { low, high }: { low: number; high: number }): number {
  return Math.min(high, Math.max(low, value));
}

/** The least and the largest value that may come out; of a normal distribution without limits all but 1 in 16000. */
export function extremes(distribution: Distribution): [least: number, largest: number] {
  switch (distribution.kind) {
    case 'fixed':
      return [distribution.value, distribution.value];
    case 'uniform':
    case 'log_uniform':
      return [distribution.low, distribution.high];
    case 'choice':
      return [Math.min(...distribution.values), Math.max(...distribution.values)];
    case 'normal': {
      const { mean, deviation, within } = distribution;
      return within === undefined
        ? [mean - USUAL * deviation, mean + USUAL * deviation]
        : [within[0], within[1]];
    }
  }
}

const USUAL = 4;

/** The limits between which a normal distribution leaves no room, if it does: more deviations away than numbers can tell. */
export function isOutOfReach(distribution: Distribution): boolean {
  if (distribution.kind !== 'normal' || distribution.within === undefined) return false;
  const { mean, deviation, within } = distribution;
  if (deviation === 0) return mean < within[0] || mean > within[1];
  return (within[0] - mean) / deviation > FARTHEST || (mean - within[1]) / deviation > FARTHEST;
}

const FARTHEST = 30;
