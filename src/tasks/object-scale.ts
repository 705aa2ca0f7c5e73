/** From sizes on the object to sizes on the sensor. */
import { pixelPitchMm, type Rig } from '../optics/rig.js';

/** Size of a pixel on the object, in mm; undefined where the rig does not say how far away the object is.
 *
 * With an object at distance d from the front principal plane of a lens of focal length f the magnification is f / (d - f).
 * Source: Newton's form of the lens equation (common practice).
 */
export function objectPixelMm(rig: Rig): number | undefined {
  const { objectScale } = rig.mount;
  if (objectScale === undefined) return undefined;
  if ('objectPixelMm' in objectScale) return objectScale.objectPixelMm;
  const pitchMm = pixelPitchMm(rig.camera);
  if ('magnification' in objectScale) return pitchMm / objectScale.magnification;
  const focalMm = rig.lens.focalLengthMm;
  if (focalMm === undefined || objectScale.objectDistanceMm <= focalMm) return undefined; // the rig's check refuses both
  return (pitchMm * (objectScale.objectDistanceMm - focalMm)) / focalMm;
}
