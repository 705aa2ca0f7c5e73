/** What limits a task: what the least margin gains when one error is taken away. */
import type { Rig } from '../optics/rig.js';
import { partsOf, type RigPart, withoutPart } from './lens-parts.js';
import type { Scoring } from './scoring.js';

export interface PartGain {
  /** A coefficient; or `axial_colour`, `lateral_colour`, `sensor_shift`, `sensor_tilt`. */
  coefficient: RigPart;
  /** Least margin without it less the least margin as things stand. Negative: it makes up for another error. */
  gain: number;
  /** Least margin without it. */
  margin: number;
}

/** The gain of each part that is not zero, the largest first.
 * @param now the least margin as things stand, by the same scoring */
export async function partGains(rig: Rig, scoring: Scoring, now: number): Promise<PartGain[]> {
  const gains: PartGain[] = [];
  for (const coefficient of partsOf(rig)) {
    const margin = await scoring.margin(withoutPart(rig, coefficient));
    if (Number.isFinite(margin)) gains.push({ coefficient, gain: margin - now, margin });
  }
  return gains.sort((a, b) => b.gain - a.gain);
}
