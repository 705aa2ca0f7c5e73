/** How much of the light of the axis reaches a point of the field. */
import { monotoneCubic } from '../numeric/monotone-cubic.js';
import type { Lens } from './rig.js';

/** Relative illumination as a function of the ideal image height in mm: 1 on the axis.
 *
 * `cos4` is the fourth power of the cosine of the chief ray's angle behind a distant pupil, tan(angle) = r / focal length, without vignetting.
 * Source: Born and Wolf, Principles of Optics, 4.8.3 (cited from memory).
 */
export function relativeIllumination(lens: Lens): (radiusMm: number) => number {
  const law = lens.relativeIllumination;
  if (law === 'none') return () => 1;
  if (law === 'cos4') {
    const focalMm = lens.focalLengthMm ?? Number.POSITIVE_INFINITY; // the rig's check asks for it
    return (radiusMm) => (1 + (radiusMm / focalMm) ** 2) ** -2;
  }
  const curve = monotoneCubic(law);
  return (radiusMm) => curve(radiusMm / lens.fullFieldMm);
}
