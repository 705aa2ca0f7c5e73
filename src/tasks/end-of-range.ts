/** How far a number of the rig may go before a task is not met any more. */
import type { Rig } from '../optics/rig.js';
import type { MetCheck } from './met-check.js';

/** One direction to go. */
export interface Walk {
  /** The rig at a distance from where it stands, 0 or more. */
  rigAt(distance: number): Rig;
  /** The first step; each one is longer than the last by `GROWTH`. */
  step: number;
  /** Where to give up; a range that reaches it has no end. */
  reach: number;
}

const GROWTH = 1.4;
/** Of the step in which a task ends to be met: to 1/500 of it, or 1/64 where symbols must be tried. */
const HALVINGS = 9;
const TRIED_HALVINGS = 6;

/** The first distance at which the task is not met any more, to the accuracy of the halvings; null where it is met all the way. The rig must
 * meet the task where it stands. Steps grow, so a gap shorter than a third of its distance may be stepped over.
 *
 * Trials cost a thousand times as much as the closed-form rules. So these alone say how far to go, and only what they leave is tried.
 */
export async function endOfRange(walk: Walk, check: MetCheck): Promise<number | null> {
  const byOptics = (distance: number) => check.isMetByOptics(walk.rigAt(distance));
  const byTrials = (distance: number) => check.isMetByTrials(walk.rigAt(distance));
  if (!check.hasTrials) return firstEnd(walk, byOptics, HALVINGS);
  if (!check.hasOptics) return firstEnd(walk, byTrials, TRIED_HALVINGS);
  const end = await firstEnd(walk, byOptics, HALVINGS);
  const farthest = end ?? walk.reach;
  if (await byTrials(farthest)) return end;
  return halve(0, farthest, byTrials, TRIED_HALVINGS + 3); // all of the way is still open
}

async function firstEnd(
  { step: firstStep, reach }: Walk,
  isMet: (distance: number) => boolean | Promise<boolean>,
  halvings: number,
): Promise<number | null> {
  let met = 0;
  for (let step = firstStep; ; step *= GROWTH) {
    const next = Math.min(reach, met + step);
    if (!(await isMet(next))) return halve(met, next, isMet, halvings);
    if (next === reach) return null;
    met = next;
  }
}

async function halve(
  from: number,
  to: number,
  isMet: (distance: number) => boolean | Promise<boolean>,
  halvings: number,
): Promise<number> {
  let [met, unmet] = [from, to];
  for (let i = 0; i < halvings; i++) {
    const middle = 0.5 * (met + unmet);
    if (await isMet(middle)) met = middle;
    else unmet = middle;
  }
  return met;
}
