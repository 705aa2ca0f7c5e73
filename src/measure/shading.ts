/** Light that falls off over the strip of an edge: taken out, so that it is read neither as blur nor as
 * noise. */
import type { ProjectedPixels } from './projection.js';

/** Quarter-pixel bins over the outer halves of both sides, where the light depends on the distance hardly at
 * all: for each, the pixels' number, mean light and mean place along the edge. */
class FlatBins {
  readonly #perPixel = 4;
  readonly #halfWidthPx: number;
  readonly count: Float64Array;
  readonly light: Float64Array;
  readonly along: Float64Array;

  constructor({ count, distance, along, light }: ProjectedPixels, halfWidthPx: number) {
    this.#halfWidthPx = halfWidthPx;
    const bins = Math.ceil(2 * halfWidthPx * this.#perPixel) + 1;
    this.count = new Float64Array(bins);
    this.light = new Float64Array(bins);
    this.along = new Float64Array(bins);
    for (let i = 0; i < count; i++) {
      const bin = this.binOf(distance[i]);
      if (bin < 0) continue;
      this.count[bin]++;
      this.light[bin] += light[i];
      this.along[bin] += along[i];
    }
    for (let bin = 0; bin < bins; bin++) {
      this.light[bin] /= this.count[bin];
      this.along[bin] /= this.count[bin];
    }
  }

  /** -1 near the edge. */
  binOf(distance: number): number {
    if (Math.abs(distance) < this.#halfWidthPx / 2) return -1;
    return Math.floor((distance + this.#halfWidthPx) * this.#perPixel);
  }
}

/** Divide by the light's fall-off along the edge: 1 + share x rows from its middle, the share that brings the
 * pixels of each bin nearest together. */
export function flattenAlong(pixels: ProjectedPixels, halfWidthPx: number): void {
  const { count, distance, along, light } = pixels;
  const bins = new FlatBins(pixels, halfWidthPx);
  let moment = 0;
  let square = 0;
  for (let i = 0; i < count; i++) {
    const bin = bins.binOf(distance[i]);
    if (bin < 0) continue;
    const off = bins.light[bin] * (along[i] - bins.along[bin]);
    moment += off * (light[i] - bins.light[bin]);
    square += off * off;
  }
  const share = square === 0 ? 0 : moment / square;
  for (let i = 0; i < count; i++) light[i] /= 1 + share * along[i];
}

/** RMS of the pixels about the mean of their bin, where the light is flat. */
export function flatNoise(pixels: ProjectedPixels, halfWidthPx: number): number {
  const { count, distance, light } = pixels;
  const bins = new FlatBins(pixels, halfWidthPx);
  let squares = 0;
  let free = 0;
  for (let i = 0; i < count; i++) {
    const bin = bins.binOf(distance[i]);
    if (bin < 0) continue;
    squares += (light[i] - bins.light[bin]) ** 2;
    free += 1 - 1 / bins.count[bin]; // the mean of a bin takes one pixel's freedom
  }
  return free < 1 ? 0 : Math.sqrt(squares / free);
}

/** Divide an edge spread function by the light's fall-off across the edge.
 *
 * Fall-off is a share of the light, so it tilts the bright side more than the dark one, by bright / dark,
 * while the skirts of a blur tilt both alike. So the difference of the two sides' tilts over their
 * difference of light is the fall-off alone.
 * @param values at even distances, that of the edge in the middle; not changed
 */
export function flattenAcross(values: Float64Array): Float64Array {
  const middle = (values.length - 1) / 2;
  const outer = values.length >> 2;
  const side = (from: number) => {
    const centre = from + (outer - 1) / 2;
    let sum = 0;
    let moment = 0;
    let square = 0;
    for (let k = from; k < from + outer; k++) {
      sum += values[k];
      moment += values[k] * (k - centre);
      square += (k - centre) ** 2;
    }
    return { light: sum / outer, tilt: moment / square };
  };
  const [dark, bright] = [side(0), side(values.length - outer)];
  const share = (bright.tilt - dark.tilt) / (bright.light - dark.light);
  if (!Number.isFinite(share)) return values; // no step: nothing can be told
  return values.map((value, k) => value / (1 + share * (k - middle)));
}
