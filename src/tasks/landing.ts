/** Where the image of a point lands: distortion, and the centroid shift that coma causes. */
import { distortionMap } from '../optics/distortion.js';
import { bandLines } from '../optics/otf.js';
import type { Band, Rig } from '../optics/rig.js';

/** The radius at which the centroid of a point's image lands, in mm from the axis, as a function of the radius at which it should.
 *
 * Coma moves the centroid along the radius by the mean over the pupil of eps = -2 N lambda dW/dm. Over the unit disc the mean of
 * d(w31 rho^2 m)/dm = rho^2 + 2 m^2 is 1, that of the other terms 0, so the shift is -2 N lambda w31: toward the axis for w31 > 0.
 * Source: Born and Wolf, Principles of Optics, 5.3, for the comatic figure (cited from memory)
 */
export function landingMm(rig: Rig, band: Band): (idealMm: number) => number {
  const map = distortionMap(rig.lens, band);
  // w31 is proportional to the radius, so one look gives the shift everywhere
  const atMm = rig.lens.fullFieldMm;
  let shiftMm = 0;
  for (const { nm, weight, wavefront } of bandLines(rig, atMm, 0, band))
    shiftMm -= weight * 2 * rig.mount.fNumber * nm * 1e-6 * wavefront.w31;
  const shiftPerMm = shiftMm / atMm;
  return (idealMm) => map.distorted(idealMm) + shiftPerMm * idealMm;
}
