/** The edge in a region that a user has marked. */
import { InputError } from '../errors.js';
import { type PixelRect, type Plane, roomTo } from './plane.js';
import type { EdgeGuess } from './strip.js';

/** Widest useful strip: more room on the sides adds noise and no light of the edge. */
export const MOST_HALF_WIDTH_PX = 32;

/** The parts of a chord that are tried, as shares of it: the strip must fit between the region's sides. */
const CHORD_SHARES = Array.from({ length: 18 }, (_, i) => 1 - 0.05 * i);

/** Least share by which the slopes in a region agree on one direction, 0 (none) to 1 (all). */
const LEAST_COHERENCE = 0.3;

/** Where the edge of a region lies: through the centroid of its squared slopes, across their common direction
 * (the structure tensor's first axis), as long and as wide as a strip around it fits into the region.
 * Source: J. Bigun and G. H. Granlund, "Optimal orientation detection of linear symmetry", Proc. ICCV (1987)
 *   (from memory).
 * @throws {InputError} where the slopes have no common direction
 */
export function findEdge(plane: Plane, region: PixelRect): EdgeGuess {
  const { xx, xy, yy, x, y } = structureTensor(plane, region);
  const spread = Math.hypot(xx - yy, 2 * xy);
  const coherence = spread / (xx + yy);
  if (!(coherence >= LEAST_COHERENCE))
    throw new InputError({
      message: 'shows no edge, or several that cross',
      found: `slopes that agree to ${Number.isFinite(coherence) ? coherence.toFixed(2) : 0} on a direction`,
      allowed: `from ${LEAST_COHERENCE} up (1: all the same way)`,
      advice: 'Mark a region that one edge crosses.',
    });
  const angle = Math.atan2(2 * xy, xx - yy) / 2;
  return roomiest(region, x, y, angle);
}

interface Tensor {
  xx: number;
  xy: number;
  yy: number;
  /** Centroid of the squared slopes. */
  x: number;
  y: number;
}

/** Sums of products of the slopes over a region, its outermost pixels left out. The slopes are Sobel's,
 * smoothed against noise. */
function structureTensor({ width, samples }: Plane, region: PixelRect): Tensor {
  const tensor = { xx: 0, xy: 0, yy: 0, x: 0, y: 0 };
  for (let y = region.y + 1; y < region.y + region.height - 1; y++) {
    for (let x = region.x + 1; x < region.x + region.width - 1; x++) {
      const at = y * width + x;
      const column = (offset: number) =>
        samples[at + offset - width] + 2 * samples[at + offset] + samples[at + offset + width];
      const row = (offset: number) =>
        samples[at + offset - 1] + 2 * samples[at + offset] + samples[at + offset + 1];
      const dx = column(1) - column(-1);
      const dy = row(width) - row(-width);
      const square = dx * dx + dy * dy;
      tensor.xx += dx * dx;
      tensor.xy += dx * dy;
      tensor.yy += dy * dy;
      tensor.x += square * x;
      tensor.y += square * y;
    }
  }
  const total = tensor.xx + tensor.yy;
  return { ...tensor, x: tensor.x / total, y: tensor.y / total };
}

/** The strip around a line that holds the most pixels within a region, no wider than is of use. */
function roomiest(region: PixelRect, x: number, y: number, normal: number): EdgeGuess {
  const [nx, ny] = [Math.cos(normal), Math.sin(normal)];
  const back = roomTo(region, x, y, ny, -nx);
  const ahead = roomTo(region, x, y, -ny, nx);
  const middle = (ahead - back) / 2;
  const chord = ahead + back;
  let best = { lengthPx: 0, halfWidthPx: 0 };
  for (const share of CHORD_SHARES) {
    const lengthPx = share * chord;
    const halfWidthPx = Math.min(
      MOST_HALF_WIDTH_PX,
      ...[-1, 1].flatMap((end) => {
        const along = middle + (end * lengthPx) / 2;
        const [endX, endY] = [x - along * ny, y + along * nx];
        return [roomTo(region, endX, endY, nx, ny), roomTo(region, endX, endY, -nx, -ny)];
      }),
    );
    if (lengthPx * halfWidthPx > best.lengthPx * best.halfWidthPx) best = { lengthPx, halfWidthPx };
  }
  return { x: x - middle * ny, y: y + middle * nx, normalDeg: (normal * 180) / Math.PI, ...best };
}
