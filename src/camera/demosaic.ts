/** From one colour a pixel to three. */
import { InputError } from '../errors.js';
import type { MosaicSites } from './mosaic.js';

/** Fill in the two colours that each pixel of a mosaic did not see, for rows rowStart <= row < rowEnd: the
 * linear 5 x 5 filters of H. S. Malvar, L. He and R. Cutler, "High-quality linear interpolation for
 * demosaicing of Bayer-patterned color images", ICASSP 2004 (from memory). Each is a bilinear estimate
 * corrected by the Laplacian of the colour that was seen there, in the Wiener gains that the paper rounds to
 * eighths. Every filter sums to 1 and keeps linear ramps.
 *
 * Rows and columns past the border are mirrored without repeating the edge sample, which keeps the phase of
 * the mosaic.
 *
 * @param mosaic  one sample a pixel, row-major, width x height, at least 2 x 2
 * @param black   value of `mosaic` that becomes 0
 * @param scale   factor from there: 1 / (value that becomes 1 - black)
 * @param out     three planes of width x height in the order that `sites` counts them; not clipped: an
 *                overshoot at an edge or noise may leave 0..1; only these rows are written
 * @throws {InputError} for fewer than 2 x 2 pixels
 */
export function demosaicRows(
  mosaic: Float32Array | Uint16Array,
  width: number,
  height: number,
  sites: MosaicSites,
  black: number,
  scale: number,
  rowStart: number,
  rowEnd: number,
  out: readonly Float32Array[],
): void {
  checkSize(width, height);
  if (rowEnd <= rowStart) return;
  // five rows around the current one, with two mirrored samples at either end
  const rows: Float64Array[] = Array.from({ length: 5 }, () => new Float64Array(width + 4));
  const load = (row: number, into: Float64Array) => {
    const start = mirror(row, height) * width;
    for (let column = 0; column < width; column++)
      into[column + 2] = (mosaic[start + column] - black) * scale;
    for (const column of [-2, -1, width, width + 1]) into[column + 2] = into[mirror(column, width) + 2];
  };
  for (let k = 0; k < 4; k++) load(rowStart - 2 + k, rows[k]);
  const green = sites[0] === sites[3] ? sites[0] : sites[1];

  for (let row = rowStart; row < rowEnd; row++) {
    load(row + 2, rows[4]);
    const left = sites[2 * (row & 1)];
    const right = sites[2 * (row & 1) + 1];
    // red or blue: `own` is the one that this row sees beside green, `other` the one of the rows above and
    // below
    const ownPhase = left === green ? 1 : 0;
    const own = left === green ? right : left;
    const other = 3 - green - own;
    const end = (row + 1) * width;
    fillOwnSites(rows, ownPhase, row * width, end, out[own], out[green], out[other]);
    fillGreenSites(rows, 1 - ownPhase, row * width, end, out[own], out[green], out[other]);
    rows.push(rows.shift() as Float64Array);
  }
}

/** Pixels that see red or blue: green and the opposite colour are missing. */
function fillOwnSites(
  rows: readonly Float64Array[],
  phase: number,
  start: number,
  end: number,
  own: Float32Array,
  green: Float32Array,
  other: Float32Array,
): void {
  const [above2, above, row, below, below2] = rows;
  for (let i = start + phase, x = phase + 2; i < end; i += 2, x += 2) {
    const centre = row[x];
    const cross = above[x] + below[x] + row[x - 1] + row[x + 1];
    const diagonal = above[x - 1] + above[x + 1] + below[x - 1] + below[x + 1];
    const far = above2[x] + below2[x] + row[x - 2] + row[x + 2];
    own[i] = centre;
    green[i] = (4 * centre + 2 * cross - far) / 8;
    other[i] = (6 * centre + 2 * diagonal - 1.5 * far) / 8;
  }
}

/** Pixels that see green: red and blue are missing, one beside it in the row, the other in the column. */
function fillGreenSites(
  rows: readonly Float64Array[],
  phase: number,
  start: number,
  end: number,
  own: Float32Array,
  green: Float32Array,
  other: Float32Array,
): void {
  const [above2, above, row, below, below2] = rows;
  for (let i = start + phase, x = phase + 2; i < end; i += 2, x += 2) {
    const centre = row[x];
    const alongRow = row[x - 1] + row[x + 1];
    const alongColumn = above[x] + below[x];
    const diagonal = above[x - 1] + above[x + 1] + below[x - 1] + below[x + 1];
    const farRow = row[x - 2] + row[x + 2];
    const farColumn = above2[x] + below2[x];
    green[i] = centre;
    own[i] = (5 * centre + 4 * alongRow - diagonal - farRow + 0.5 * farColumn) / 8;
    other[i] = (5 * centre + 4 * alongColumn - diagonal - farColumn + 0.5 * farRow) / 8;
  }
}

/** The index inside 0..n-1 that i mirrors to about the end samples. */
function mirror(i: number, n: number): number {
  const period = 2 * (n - 1);
  const inPeriod = ((i % period) + period) % period;
  return inPeriod < n ? inPeriod : period - inPeriod;
}

function checkSize(width: number, height: number): void {
  if (width >= 2 && height >= 2) return;
  throw new InputError({
    key: 'camera.pixels',
    message: 'a mosaic repeats every 2 x 2 pixels, so the sensor has at least as many',
    found: `${width} x ${height}`,
    allowed: '2 x 2 and more',
    advice: 'Set mosaic: none, or give the sensor more pixels.',
  });
}
