/** Tables of the ziggurat under the normal distribution: 256 layers of one area, the tail in the lowest.
 *
 * Source: G. Marsaglia and W. W. Tsang, "The Ziggurat Method for Generating Random Variables", J. Statistical
 * Software 5 (2000) 8, and J. A. Doornik, "An Improved Ziggurat Method to Generate Normal Random Samples"
 * (2005), whose form this is (both from memory).
 */

/** f(x) = exp(-x^2 / 2), the density without its constant. */
export function bell(x: number): number {
  return Math.exp(-0.5 * x * x);
}

/** Where the tail begins. */
export const TAIL_START = 3.6541528853610088;

/** Area of each layer under `bell`: r f(r) and the tail beyond r = TAIL_START. */
const LAYER_AREA = 0.00492867323399;

/** Half widths of the layers from the lowest up: [0] that of a rectangle of the lowest layer's area, [1]
 * TAIL_START, ..., [256] 0. */
export const HALF_WIDTH = new Float64Array(257);

/** The share of each layer's width that lies wholly under the curve. */
export const INNER_SHARE = new Float64Array(256);

HALF_WIDTH[0] = LAYER_AREA / bell(TAIL_START);
HALF_WIDTH[1] = TAIL_START;
for (let i = 2; i < 256; i++) {
  const below = HALF_WIDTH[i - 1];
  HALF_WIDTH[i] = Math.sqrt(-2 * Math.log(LAYER_AREA / below + bell(below)));
}
for (let i = 0; i < 256; i++) INNER_SHARE[i] = HALF_WIDTH[i + 1] / HALF_WIDTH[i];
