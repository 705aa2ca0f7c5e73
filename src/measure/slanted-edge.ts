/** One slanted edge: found, judged and measured. */
import { angleToPixels, phaseCycles } from '../charts/slant.js';
import { type Fault, InputError } from '../errors.js';
import { polynomialAt } from '../numeric/polynomial-fit.js';
import { type EdgeCurve, fitEdge } from './edge-line.js';
import { type EdgeSpread, edgeSpread } from './edge-spread.js';
import type { PixelRect, Plane } from './plane.js';
import { edgeWidthPx, lineSpread, sfrAt } from './sfr.js';
import { cutStrip, type EdgeGuess, fromStrip, narrowedTo, type Strip } from './strip.js';

/** What one edge shows. */
export interface MeasuredEdge {
  /** The middle of the measured part, on the edge. */
  x: number;
  y: number;
  /** Across the edge, from dark to bright: from +x toward +y, 0 up to 360. Frequencies count along it. */
  normalDeg: number;
  /** Of the edge against the nearest row or column of pixels, 0 to 45. */
  angleDeg: number;
  lengthPx: number;
  /** Ends of the measured part. */
  from: [x: number, y: number];
  to: [x: number, y: number];
  /** Spatial frequency response at a frequency in cycles a pixel along the normal. */
  sfr: (cyclesPerPixel: number) => number;
  /** 10 to 90 % of the step, along the normal. */
  edgeWidthPx: number | null;
  dark: number;
  bright: number;
  /** RMS of single pixels about the edge spread function. */
  noise: number;
}

/** What an edge must be, to be measured. */
export const EDGE_LIMITS = {
  /** Shorter edges give too few pixels for each quarter-pixel bin. */
  lengthPx: 20,
  /** The line spread function and its window need room. */
  halfWidthPx: 8,
  /** Straighter edges do not pass enough rows or columns to be sampled between the pixels. */
  angleDeg: 1.5,
  /** Times that the pixels along the edge run through all distances from it, gaps up to `gapPx` left aside:
   * see `phaseCycles`. */
  phaseCycles: 1,
  /** Gaps that the spline bridges: light that has come through a lens has no detail finer than a pixel. */
  gapPx: 0.5,
  /** Step over noise of a pixel. Below, the derivative is mostly noise. */
  stepOverNoise: 10,
  /** (bright - dark) / (bright + dark). */
  modulation: 0.05,
  /** Share of the pixels at the ends of the scale. */
  clippedShare: 0.01,
  /** RMS distance of the rows' centroids from the curve. */
  scatterPx: 1,
  /** Share of rows in which the edge is found. */
  foundShare: 0.8,
} as const;

/** Measure an edge.
 *
 * The edge is fitted by the centroids of its rows in three passes, the window around it getting narrower,
 * all pixels are projected along it into quarter-pixel bins, and the response is the transform of the
 * derivative under a Hamming window, corrected for derivative and bins. The frequency counts along the
 * edge's normal; along the rows of pixels it is f cos(angle).
 *
 * Source: ISO 12233:2017, e-SFR, in outline (from memory).
 * @param where  where to look; the edge may be up to half of `halfWidthPx` away. Narrowed to what fits
 *   between the borders of `bounds`
 * @param bounds only pixels in it are used
 * @throws {InputError} no edge, too short, too straight, clipped, too noisy, not one smooth line: with the
 *   limit and the value
 */
export function measureEdge(
  plane: Plane,
  where: EdgeGuess,
  bounds: PixelRect = wholeOf(plane),
): MeasuredEdge {
  const guess = narrowedTo(bounds, where);
  refuseSmall(guess);
  const strip = cutStrip(plane, guess, bounds);
  refuseClipped(strip);
  const coarse = fitEdge(strip, guess.halfWidthPx);
  if (coarse.foundShare < EDGE_LIMITS.foundShare)
    throw refusal(
      'shows no edge',
      `one in ${percent(coarse.foundShare)} of the rows`,
      `from ${percent(EDGE_LIMITS.foundShare)} up`,
    );
  const rough = edgeSpread(strip, coarse, guess.halfWidthPx, strip.halfRows);
  refuseFaint(rough);
  const reachPx = Math.min(guess.halfWidthPx, Math.max(5, 2 * (edgeWidthPx(rough) ?? guess.halfWidthPx)));
  const curve = fitEdge(strip, reachPx, fitEdge(strip, reachPx, coarse));
  refuseCrooked(curve);
  const ends = endsOf(strip, curve);
  const angleDeg = angleToPixels(ends.normalDeg);
  refuseStraight(angleDeg, ends.lengthPx);
  const spread = edgeSpread(strip, curve, guess.halfWidthPx, wholeCycles(curve));
  const line = lineSpread(spread);
  return {
    ...ends,
    angleDeg,
    sfr: (cyclesPerPixel) => sfrAt(line, cyclesPerPixel),
    edgeWidthPx: edgeWidthPx(spread),
    dark: spread.dark,
    bright: spread.bright,
    noise: spread.noise,
  };
}

export function wholeOf({ width, height }: Plane): PixelRect {
  return { x: 0, y: 0, width, height };
}

type Ends = Pick<MeasuredEdge, 'x' | 'y' | 'normalDeg' | 'lengthPx' | 'from' | 'to'>;

function endsOf(strip: Strip, { c, v0, halfRows, polarity }: EdgeCurve): Ends {
  const at = (t: number) => fromStrip(strip, polynomialAt(c, t), v0 + t * halfRows);
  const [from, middle, to] = [at(-1), at(0), at(1)];
  const slope = c[1] / halfRows;
  // the normal points toward +u: (1, -slope) in (u, v)
  const [nx, ny] = fromStrip(strip, polarity, -polarity * slope);
  const normalDeg = ((Math.atan2(ny, nx) * 180) / Math.PI + 360) % 360;
  return {
    x: middle[0],
    y: middle[1],
    normalDeg,
    lengthPx: Math.hypot(to[0] - from[0], to[1] - from[1]),
    from,
    to,
  };
}

/** Rows on either side of the middle in which the edge passes a whole number of columns, so that no distance
 * between pixel and edge occurs more often than another; all rows where it passes none, or so many that it
 * makes no difference. */
function wholeCycles({ c, halfRows }: EdgeCurve): number {
  const columns = 2 * Math.abs(c[1]);
  return columns >= 1 && columns < 12 ? (halfRows * Math.floor(columns)) / columns : halfRows;
}

function refuseSmall({ lengthPx, halfWidthPx }: EdgeGuess): void {
  if (lengthPx < EDGE_LIMITS.lengthPx)
    throw refusal('the edge is too short', `${lengthPx.toFixed(1)} px`, `from ${EDGE_LIMITS.lengthPx} px up`);
  if (halfWidthPx < EDGE_LIMITS.halfWidthPx)
    throw refusal(
      'the edge has too little room beside it',
      `${halfWidthPx.toFixed(1)} px`,
      `from ${EDGE_LIMITS.halfWidthPx} px up on either side`,
    );
}

/** A clipped value is 0 or 1 to the last bit. */
function refuseClipped({ values }: Strip): void {
  let clipped = 0;
  for (const value of values) if (value === 0 || value === 1) clipped++;
  const share = values.length === 0 ? 0 : clipped / values.length;
  if (share > EDGE_LIMITS.clippedShare)
    throw refusal(
      'the edge is clipped at black or white',
      `${percent(share)} of its pixels`,
      `up to ${percent(EDGE_LIMITS.clippedShare)}`,
      'Expose so that neither side reaches the end of the scale.',
    );
}

function refuseFaint({ dark, bright, noise }: EdgeSpread): void {
  const modulation = (bright - dark) / (bright + dark);
  if (!(bright > dark && modulation >= EDGE_LIMITS.modulation))
    throw refusal(
      'shows no edge',
      `a modulation of ${modulation.toFixed(3)}`,
      `from ${EDGE_LIMITS.modulation} up, (bright - dark) / (bright + dark)`,
    );
  const ratio = (bright - dark) / noise;
  if (ratio < EDGE_LIMITS.stepOverNoise)
    throw refusal(
      'the edge is too noisy',
      `a step of ${ratio.toFixed(1)} times the noise`,
      `from ${EDGE_LIMITS.stepOverNoise} times up`,
      'Average several pictures, or give more light.',
    );
}

function refuseCrooked({ scatterPx, foundShare }: EdgeCurve): void {
  if (scatterPx <= EDGE_LIMITS.scatterPx && foundShare >= EDGE_LIMITS.foundShare) return;
  throw refusal(
    'shows no single smooth edge',
    foundShare < EDGE_LIMITS.foundShare
      ? `one in ${percent(foundShare)} of the rows`
      : `${scatterPx.toFixed(2)} px between the rows' centroids and the curve through them`,
    `up to ${EDGE_LIMITS.scatterPx} px, in ${percent(EDGE_LIMITS.foundShare)} of the rows or more`,
  );
}

function refuseStraight(angleDeg: number, lengthPx: number): void {
  if (angleDeg < EDGE_LIMITS.angleDeg)
    throw refusal(
      'the edge is too straight',
      `${angleDeg.toFixed(2)} degrees against the pixels`,
      `from ${EDGE_LIMITS.angleDeg} degrees up`,
      'Turn the chart or the camera by about 5 degrees.',
    );
  const cycles = phaseCycles(angleDeg, lengthPx, EDGE_LIMITS.gapPx);
  if (cycles < EDGE_LIMITS.phaseCycles)
    throw refusal(
      angleDeg > 40 ? 'the edge is too steep' : 'the edge is too short for its angle',
      `at ${angleDeg.toFixed(2)} degrees over ${lengthPx.toFixed(0)} px its pixels run ${cycles.toFixed(2)} times through all distances from it`,
      `from ${EDGE_LIMITS.phaseCycles} time up`,
      'Choose a longer part of it, or turn it by a few degrees.',
    );
}

function refusal(message: string, found: string, allowed: string, advice?: string): InputError {
  const fault: Fault = { message, found, allowed };
  return new InputError(advice === undefined ? fault : { ...fault, advice });
}

function percent(share: number): string {
  return `${Number((100 * share).toPrecision(2))} %`;
}
