/** The pixels around an edge by their distance from it. */
import { polynomialAt } from '../numeric/polynomial-fit.js';
import type { EdgeCurve } from './edge-line.js';
import type { Strip } from './strip.js';

/** `count` pixels; the arrays may be longer. */
export interface ProjectedPixels {
  count: number;
  /** Distance from the edge along its normal in pixels, + on the bright side. */
  distance: Float64Array;
  /** Rows from the middle of the edge to the nearest point of it. */
  along: Float64Array;
  light: Float64Array;
}

/** Project every pixel of a strip along the edge: those up to `halfWidthPx` away whose nearest point of the
 * curve lies within `halfRows` of its middle. */
export function projectPixels(
  strip: Strip,
  curve: EdgeCurve,
  halfWidthPx: number,
  halfRows: number,
): ProjectedPixels {
  const { values, width, height, uFrom, vFrom } = strip;
  const size = width * height;
  const pixels = {
    count: 0,
    distance: new Float64Array(size),
    along: new Float64Array(size),
    light: new Float64Array(size),
  };
  const foot = new Float64Array(2);
  for (let row = 0; row < height; row++) {
    for (let column = 0; column < width; column++) {
      nearestPoint(curve, uFrom + column, vFrom + row, foot);
      const along = foot[1] - curve.v0;
      const distance = foot[0] * curve.polarity;
      if (Math.abs(along) > halfRows || Math.abs(distance) > halfWidthPx) continue;
      pixels.distance[pixels.count] = distance;
      pixels.along[pixels.count] = along;
      pixels.light[pixels.count] = values[row * width + column];
      pixels.count++;
    }
  }
  return pixels;
}

/** Signed distance from the curve, + toward +u, and the row of the nearest point, by Newton's method for the
 * foot of the normal: the zero of (u - p(s)) p'(s) + v - s. */
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
