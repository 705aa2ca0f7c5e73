/** In which direction a lens does worst. */
import { smoothMaximum } from '../numeric/smooth-maximum.js';

/** The direction, in degrees from the outward radius, and how bad it is there. */
export interface WorstDirection {
  directionDeg: number;
  badness: number;
}

/** The angle between 0 and 90 degrees at which a figure of the lens is worst. The other quadrants mirror this one: the wavefront is even
 * across the radius, and a modulation turned by half a turn is the same.
 *
 * @param badness smooth in the angle; the more, the worse
 * @param steps   samples to look at, 2 or more steps
 * @param points  samples for the refinement around the worst of them; 0: none
 */
export function worstDirection(
  badness: (directionDeg: number) => number,
  steps: number,
  points: number,
): WorstDirection {
  const stepDeg = 90 / steps;
  let worst: WorstDirection = { directionDeg: 0, badness: badness(0) };
  const look = (directionDeg: number) => {
    const here = badness(directionDeg);
    if (here > worst.badness) worst = { directionDeg, badness: here };
  };
  for (let i = 1; i <= steps; i++) look(i * stepDeg);
  if (points === 0) return worst;
  const { directionDeg } = worst;
  const from = Math.max(0, directionDeg - stepDeg);
  const to = Math.min(90, directionDeg + stepDeg);
  look(smoothMaximum(badness, from, to, points));
  return worst;
}
