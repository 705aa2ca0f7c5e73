/** The edge spread function: the light as a function of the distance from the edge, four samples a pixel. */
import { polynomialAt } from '../numeric/polynomial-fit.js';
import type { EdgeCurve } from './edge-line.js';
import type { Strip } from './strip.js';

/** Samples a pixel. Source: ISO 12233:2017, e-SFR (from memory). */
export const OVERSAMPLING = 4;

export interface EdgeSpread {
  /** Light at the distances (k - middle) / OVERSAMPLING from the edge along its normal, in pixels, rising with k. */
  values: Float64Array;
  /** Index of distance 0. */
  middle: number;
  /** Bins without a pixel, filled from their neighbours. */
  emptyBins: number;
  /** RMS of the single pixels about the function, where it is flat. */
  noise: number;
  /** Mean light of the outer quarters on the dark and on the bright side. */
  dark: number;
  bright: number;
}

/** Project every pixel of the strip along the edge.
 *
 * The distance is that of the pixel from the nearest point of the curve; pixels whose nearest point lies within `rows` of the edge's middle count.
 * A bin's mean light is moved from the mean distance of its pixels to the middle of the bin along the function's slope.
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
  const bins = 2 * middle + 1;
  const count = new Float64Array(bins);
  const sum = new Float64Array(bins);
  const offset = new Float64Array(bins);
  const square = new Float64Array(bins);
  const { values, width, height, uFrom, vFrom } = strip;
  const foot = new Float64Array(2);
  for (let row = 0; row < height; row++) {
    for (let column = 0; column < width; column++) {
      nearestPoint(curve, uFrom + column, vFrom + row, foot);
      if (Math.abs(foot[1] - curve.v0) > halfRows) continue;
      const place = foot[0] * curve.polarity * OVERSAMPLING + middle;
      const bin = Math.round(place);
      if (bin < 0 || bin >= bins) continue;
      const value = values[row * width + column];
      count[bin]++;
      sum[bin] += value;
      square[bin] += value * value;
      offset[bin] += place - bin;
    }
  }
  const { means, emptyBins } = binMeans(count, sum, offset);
  const quarter = bins >> 3;
  const mean = (from: number) =>
    means.subarray(from, from + quarter).reduce((total, value) => total + value, 0) / quarter;
  return {
    values: means,
    middle,
    emptyBins,
    noise: flatNoise(count, sum, square),
    dark: mean(0),
    bright: mean(bins - quarter),
  };
}

/** Signed distance from the curve, + toward +u, and the row of the nearest point, by Newton's method for the foot of the normal: the zero of
 * (u - p(s)) p'(s) + v - s. */
function nearestPoint({ c, v0, halfRows }: EdgeCurve, u: number, v: number, out: Float64Array): void {
  const straight = c.length > 1 ? c[1] / halfRows : 0;
  const bend = c.length > 2 ? (2 * c[2]) / (halfRows * halfRows) : 0;
  let s = v;
  for (let step = 0; step < 3; step++) {
    const slope = straight + bend * (s - v0);
    const off = u - polynomialAt(c, (s - v0) / halfRows);
    s += (off * slope + v - s) / (1 + slope * slope - off * bend);
  }
  const slope = straight + bend * (s - v0);
  const off = u - polynomialAt(c, (s - v0) / halfRows);
  out[0] = (off - slope * (v - s)) / Math.sqrt(1 + slope * slope);
  out[1] = s;
}

function binMeans(
  count: Float64Array,
  sum: Float64Array,
  offset: Float64Array,
): { means: Float64Array; emptyBins: number } {
  const raw = Float64Array.from(sum, (value, bin) => value / count[bin]);
  let emptyBins = 0;
  for (let bin = 0; bin < raw.length; bin++) {
    if (count[bin] > 0) continue;
    emptyBins++;
    let left = bin - 1;
    while (left >= 0 && count[left] === 0) left--;
    let right = bin + 1;
    while (right < raw.length && count[right] === 0) right++;
    const part = (bin - left) / (right - left);
    raw[bin] =
      left < 0 ? raw[right] : right === raw.length ? raw[left] : raw[left] + part * (raw[right] - raw[left]);
  }
  const means = Float64Array.from(raw, (value, bin) => {
    if (count[bin] === 0 || bin === 0 || bin === raw.length - 1) return value;
    return value - ((raw[bin + 1] - raw[bin - 1]) / 2) * (offset[bin] / count[bin]);
  });
  return { means, emptyBins };
}

/** RMS deviation of pixels from the mean of their bin, over the outer halves of both sides. */
function flatNoise(count: Float64Array, sum: Float64Array, square: Float64Array): number {
  let squares = 0;
  let free = 0;
  const quarter = count.length >> 2;
  for (let bin = 0; bin < count.length; bin++) {
    if ((bin >= quarter && bin < count.length - quarter) || count[bin] < 2) continue;
    squares += Math.max(0, square[bin] - (sum[bin] * sum[bin]) / count[bin]);
    free += count[bin] - 1;
  }
  return free === 0 ? 0 : Math.sqrt(squares / free);
}
