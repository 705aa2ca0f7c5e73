/** From the size of a scene to the size of the sensor. */
import { resamplePlane, resampleWeights } from '../../numeric/resample.js';
import { type AllocatePlanes, type Picture, sharedPlanes } from './picture.js';

/** Magnify a picture until it covers a frame, middle on middle, and cut off what stands over.
 *
 * Linear light in, linear light out, in float; one scale for both directions; the middle of the picture comes
 * to lie on the middle of the frame exactly, also where the difference in size is odd. Values stay within the
 * range of the plane they come from.
 *
 * Why not the picture library's own resize: measured on float samples, it puts enlarged pictures up to half a
 * pixel off, cuts at whole pixels, and takes the places of samples to a hundredth of a pixel.
 *
 * @param picture       not changed; returned as it is where it has the size of the frame already
 * @param targetWidth   width of the frame in samples
 * @param targetHeight  height of the frame in samples
 */
export function fitToSensor(
  picture: Picture,
  targetWidth: number,
  targetHeight: number,
  options: { allocate?: AllocatePlanes } = {},
): Picture {
  const { width, height, planes } = picture;
  if (width === targetWidth && height === targetHeight) return picture;
  const scale = Math.max(targetWidth / width, targetHeight / height);
  const alongRows = resampleWeights(width, targetWidth, scale);
  const downColumns = resampleWeights(height, targetHeight, scale);
  const allocate = options.allocate ?? sharedPlanes;
  const fitted = allocate(targetWidth, targetHeight, planes.length);
  for (const [at, plane] of planes.entries()) {
    resamplePlane(plane, width, height, alongRows, downColumns, fitted[at]);
  }
  return { width: targetWidth, height: targetHeight, planes: fitted };
}
