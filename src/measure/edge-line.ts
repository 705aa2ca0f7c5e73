/** Where an edge runs: the centroid of its slope in each row, and a smooth curve through them. */
import { fitPolynomial, polynomialAt } from '../numeric/polynomial-fit.js';
import type { Strip } from './strip.js';

/** The edge in a strip's coordinates: u = sum of c[k] t^k with t = (v - v0) / halfRows. */
export interface EdgeCurve {
  c: Float64Array;
  v0: number;
  halfRows: number;
  /** +1 where the light grows with u, -1 where it falls. */
  polarity: 1 | -1;
  /** RMS distance of the rows' centroids from the curve, in pixels. */
  scatterPx: number;
  /** Share of the rows in which the edge was found. */
  foundShare: number;
}

/** A parabola: straight edges, and what distortion makes of them over a patch. */
const DEGREE = 2;

/** Fit the curve.
 *
 * In each row the derivative, by central differences, is weighted with a Hamming window around the edge as
 * known so far; its centroid is the row's point of the edge. A row whose rise and fall cancel has none.
 *
 * Source: ISO 12233:2017, e-SFR, in outline (from memory); P. D. Burns, "Slanted-edge MTF for digital camera
 *   and scanner analysis", Proc. IS&T PICS (2000) 135 (from memory).
 * @param reachPx half the window's width
 * @param before  the curve of an earlier pass; left out: the strip's own guess
 */
export function fitEdge(strip: Strip, reachPx: number, before?: EdgeCurve): EdgeCurve {
  const { u0, v0, slope, halfRows, vFrom, height } = strip;
  const c0 = before?.c ?? Float64Array.of(u0, slope * halfRows);
  const first = Math.max(vFrom, Math.ceil(v0 - halfRows));
  const last = Math.min(vFrom + height - 1, Math.floor(v0 + halfRows));
  const t: number[] = [];
  const points: number[] = [];
  const rises: number[] = [];
  for (let v = first; v <= last; v++) {
    const at = (v - v0) / halfRows;
    const row = rowCentroid(strip, v, polynomialAt(c0, at), reachPx);
    if (row === undefined) continue;
    t.push(at);
    points.push(row.centroid);
    rises.push(row.rise);
  }
  const total = rises.reduce((sum, rise) => sum + rise, 0);
  const polarity = total < 0 ? -1 : 1;
  // a row that rises the other way, or by less than a third of the mean, holds something else than the edge
  const typical = Math.abs(total) / Math.max(1, rises.length);
  const isEdge = rises.map((rise) => rise * polarity > typical / 3);
  const rows = Math.max(1, last - first + 1);
  const kept = t.filter((_, i) => isEdge[i]);
  const keptPoints = points.filter((_, i) => isEdge[i]);
  if (kept.length <= DEGREE + 1)
    return { c: c0, v0, halfRows, polarity, scatterPx: Number.POSITIVE_INFINITY, foundShare: 0 };
  const c = fitPolynomial(kept, keptPoints, DEGREE);
  let squares = 0;
  for (const [i, at] of kept.entries()) squares += (keptPoints[i] - polynomialAt(c, at)) ** 2;
  return {
    c,
    v0,
    halfRows,
    polarity,
    scatterPx: Math.sqrt(squares / kept.length),
    foundShare: kept.length / rows,
  };
}

/** Centroid of the windowed derivative along a row, and its sum. */
function rowCentroid(
  { values, width, uFrom, vFrom }: Strip,
  v: number,
  middle: number,
  reachPx: number,
): { centroid: number; rise: number } | undefined {
  const base = (v - vFrom) * width - uFrom;
  const from = Math.max(uFrom + 1, Math.ceil(middle - reachPx));
  const to = Math.min(uFrom + width - 2, Math.floor(middle + reachPx));
  let sum = 0;
  let moment = 0;
  for (let u = from; u <= to; u++) {
    const slope = (values[base + u + 1] - values[base + u - 1]) / 2;
    const weight = slope * hamming((u - middle) / reachPx);
    sum += weight;
    moment += weight * (u - middle);
  }
  if (to - from < reachPx || sum === 0) return undefined; // more than half of the window lies outside
  const offset = moment / sum;
  return Math.abs(offset) <= reachPx ? { centroid: middle + offset, rise: sum } : undefined;
}

/** Hamming's window, 0.54 + 0.46 cos(pi t) for t from -1 to 1. */
export function hamming(t: number): number {
  return 0.54 + 0.46 * Math.cos(Math.PI * t);
}
