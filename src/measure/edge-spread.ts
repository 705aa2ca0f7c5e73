/** The edge spread function: the light as a function of the distance from the edge, four samples a pixel. */
import { SplineFit } from '../numeric/spline-fit.js';
import type { EdgeCurve } from './edge-line.js';
import { projectPixels } from './projection.js';
import { flatNoise, flattenAcross, flattenAlong } from './shading.js';
import type { Strip } from './strip.js';

/** Samples a pixel. Source: ISO 12233:2017, e-SFR (from memory). */
export const OVERSAMPLING = 4;

export interface EdgeSpread {
  /** Light at the distances (k - middle) / OVERSAMPLING from the edge along its normal, in pixels, rising
   * with k. */
  values: Float64Array;
  /** Index of distance 0. */
  middle: number;
  /** RMS of the single pixels about the function, where it is flat. */
  noise: number;
  /** Mean light of the outermost eighth of the function on either side. */
  dark: number;
  bright: number;
}

/** The edge spread function of a strip: the cubic spline with four knots a pixel that lies nearest to all of
 * its pixels.
 *
 * Means of quarter-pixel bins, the usual way, depend on where in their bins the pixels happen to stand: at
 * edges whose slope is a simple fraction, such as 1/6 (9.46 degrees), that makes errors of 0.02 of the
 * response of a sharp edge, which the spline does not have.
 * @param halfWidthPx distances up to this one
 * @param halfRows    rows of the curve on either side of its middle
 */
export function edgeSpread(
  strip: Strip,
  curve: EdgeCurve,
  halfWidthPx: number,
  halfRows: number,
): EdgeSpread {
  const middle = Math.floor(halfWidthPx * OVERSAMPLING);
  const reachPx = middle / OVERSAMPLING;
  const pixels = projectPixels(strip, curve, reachPx, halfRows);
  flattenAlong(pixels, reachPx);
  const spline = new SplineFit(2 * middle);
  for (let i = 0; i < pixels.count; i++)
    spline.add((pixels.distance[i] + reachPx) * OVERSAMPLING, pixels.light[i]);
  const values = flattenAcross(spline.valuesAtKnots());
  const eighth = values.length >> 3;
  const mean = (from: number) =>
    values.subarray(from, from + eighth).reduce((sum, value) => sum + value, 0) / eighth;
  return {
    values,
    middle,
    noise: flatNoise(pixels, reachPx),
    dark: mean(0),
    bright: mean(values.length - eighth),
  };
}
