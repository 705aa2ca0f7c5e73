/** The highest point of a function of several numbers between bounds, by its values alone. */
import { goldenMaximum, type Peak } from './bounded-maximum.js';

/** A range to search. The samples are looked at first; the search then goes on between the neighbours of the best of them. */
export interface SearchRange {
  /** In rising order, two or more. */
  samples: readonly number[];
  /** The length at which to stop. */
  tolerance: number;
}

/** A place and the value there. */
export interface Summit {
  place: number[];
  value: number;
}

/** A function of a place. Where the value is at or below `floor`, any number there will do. */
export type Height = (place: readonly number[], floor: number) => number;

/** The maximum over one or two ranges, one search within the other: for each value of the first range the second is searched anew. So a
 * ridge that runs askew, where the function has a crease, is followed; a search along the axes in turn would stop on it.
 *
 * From three ranges on they are searched in turn, pass after pass, as long as that gains anything: good to find a better place, not sure to
 * find the best.
 * @param start where to begin with three ranges or more: the best sample
 */
export function nestedMaximum(f: Height, ranges: readonly SearchRange[], start: readonly number[]): Summit {
  if (ranges.length === 0) return { place: [], value: f([], Number.NEGATIVE_INFINITY) };
  if (ranges.length === 1) {
    const peak = searchRange((x, floor) => f([x], floor), ranges[0]);
    return { place: [peak.x], value: peak.value };
  }
  if (ranges.length === 2) {
    const inner = (x: number) => searchRange((y, floor) => f([x, y], floor), ranges[1]);
    const peak = searchRange((x) => inner(x).value, ranges[0]);
    const { x: y, value } = inner(peak.x);
    return { place: [peak.x, y], value };
  }
  return inTurn(f, ranges, start);
}

/** The best sample, then golden-section search between its neighbours. */
function searchRange(f: (x: number, floor: number) => number, { samples, tolerance }: SearchRange): Peak {
  let best = 0;
  let value = Number.NEGATIVE_INFINITY;
  for (const [at, x] of samples.entries()) {
    const here = f(x, value);
    if (here > value) {
      best = at;
      value = here;
    }
  }
  const from = samples[Math.max(0, best - 1)];
  const to = samples[Math.min(samples.length - 1, best + 1)];
  const peak = goldenMaximum(f, from, to, tolerance);
  return peak.value > value ? peak : { x: samples[best], value };
}

const MOST_PASSES = 6;

function inTurn(f: Height, ranges: readonly SearchRange[], start: readonly number[]): Summit {
  let place = [...start];
  let value = f(place, Number.NEGATIVE_INFINITY);
  for (let pass = 0; pass < MOST_PASSES; pass++) {
    const before = value;
    for (const [at, range] of ranges.entries()) {
      const peak = searchRange((x, floor) => f(place.with(at, x), floor), range);
      if (peak.value > value) {
        place = place.with(at, peak.x);
        value = peak.value;
      }
    }
    if (value - before < 1e-4 * Math.abs(value)) break;
  }
  return { place, value };
}
