/** Mean, noise and signal-to-noise ratio of a part of a picture that should be even. */
import { InputError } from '../errors.js';
import { solveLinear } from '../numeric/solve-linear.js';
import type { PixelRect, Plane } from './plane.js';

export interface FlatFigures {
  /** Mean light. */
  mean: number;
  /** RMS deviation of the pixels from the plane through them: noise over time, PRNU and DSNU together. */
  noise: number;
  /** Mean over noise; null without noise. */
  snr: number | null;
  /** 20 log10 of it. */
  snrDb: number | null;
  /** Difference of light between opposite sides, as shares of the mean: what the plane took out. */
  slope: { x: number; y: number };
}

const LEAST_PIXELS = 100;

/** Figures of a flat field in one picture. A plane is taken out first: the light may fall off across the
 * region.
 * @throws {InputError} too few pixels, no light
 */
export function flatField({ width, samples }: Plane, region: PixelRect): FlatFigures {
  const count = region.width * region.height;
  if (count < LEAST_PIXELS)
    throw new InputError({
      message: 'the flat region is too small',
      found: `${region.width} x ${region.height} pixels`,
      allowed: `from ${LEAST_PIXELS} pixels up`,
    });
  // in coordinates from -1 to 1 the sums of a plane's terms are diagonal
  const scaled = (at: number, size: number) => (size === 1 ? 0 : (2 * at) / (size - 1) - 1);
  const matrix = Array.from({ length: 3 }, () => new Float64Array(3));
  const right = new Float64Array(3);
  const visit = (look: (u: number, v: number, value: number) => void) => {
    for (let row = 0; row < region.height; row++)
      for (let column = 0; column < region.width; column++)
        look(
          scaled(column, region.width),
          scaled(row, region.height),
          samples[(region.y + row) * width + region.x + column],
        );
  };
  visit((u, v, value) => {
    const terms = [1, u, v];
    for (let i = 0; i < 3; i++) {
      for (let j = 0; j < 3; j++) matrix[i][j] += terms[i] * terms[j];
      right[i] += terms[i] * value;
    }
  });
  for (let i = 1; i < 3; i++) if (matrix[i][i] === 0) matrix[i][i] = 1; // one row or one column: no slope that way
  const [mean, alongX, alongY] = solveLinear(matrix, right);
  if (!(mean > 0))
    throw new InputError({
      message: 'the flat region holds no light',
      found: `a mean of ${mean}`,
      allowed: 'above 0',
    });
  let squares = 0;
  visit((u, v, value) => {
    squares += (value - mean - alongX * u - alongY * v) ** 2;
  });
  const noise = Math.sqrt(squares / (count - 3));
  // float32 pixels of an even field stray by 6e-8 of their light, which is no noise
  const isSilent = noise < 1e-6 * mean;
  const snr = isSilent ? null : mean / noise;
  return {
    mean,
    noise: isSilent ? 0 : noise,
    snr,
    snrDb: snr === null ? null : 20 * Math.log10(snr),
    slope: { x: (2 * alongX) / mean, y: (2 * alongY) / mean },
  };
}
