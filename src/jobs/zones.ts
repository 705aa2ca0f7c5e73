/** Contrast by field zone, as the command `zones` gives it. */
import type { Rig } from '../optics/rig.js';
import { type ZonesOptions, type ZonesReport, zonesOf } from '../optics/zones.js';

export type { ZonesOptions, ZonesReport } from '../optics/zones.js';

/** MTF along and across the radius of the lens and of lens and camera, Strehl ratio, wavefront RMS,
 * distortion, MTF50 and best focus, for each field point and band.
 * @throws {InputError} for a field point or frequency that is none, and for a wavefront too steep to be
 *   computed */
export function zones(rig: Rig, options: ZonesOptions = {}): ZonesReport {
  return zonesOf(rig, options);
}
