/** Shapes onto a plane of samples, each sample the mean over its own square. */
import { coverage, distanceIn, distanceInRing } from './coverage.js';
import type { Shape } from './shape.js';
import type { ChartTruth } from './truth.js';

/** The samples of a chart: `oversample` x `oversample` of them make a sensor pixel. */
export interface ChartPlane {
  width: number;
  height: number;
  oversample: number;
  /** Linear light, 1 being full scale, row-major. */
  samples: Float32Array;
}

/** A drawn plane and what stands on it. */
export interface Drawn {
  plane: ChartPlane;
  found: Pick<ChartTruth, 'edges' | 'dots' | 'sectors' | 'bars' | 'corners' | 'cell'>;
}

/** Half of a square's diagonal over its side: a boundary farther from its middle does not cut it. */
const HALF_DIAGONAL = Math.SQRT1_2;

/** Add `change` to the samples of a shape, and the share of it that the shape covers on its rim. */
export function drawShape(plane: ChartPlane, shape: Shape, change: number): void {
  const { width, height, oversample, samples } = plane;
  const side = 1 / oversample;
  const reach = HALF_DIAGONAL * side;
  const toPx = (sample: number) => (sample - (oversample - 1) / 2) * side; // from samples to sensor pixels
  const [fromRow, toRow] = rowsOf(shape, reach);
  const first = Math.max(0, Math.ceil(toSample(fromRow, oversample)));
  const last = Math.min(height - 1, Math.floor(toSample(toRow, oversample)));
  for (let row = first; row <= last; row++) {
    const y = toPx(row);
    const [touchedFrom, touchedTo] = columnsOf(shape, y, reach);
    const [insideFrom, insideTo] = columnsOf(shape, y, -reach);
    const start = Math.max(0, Math.ceil(toSample(touchedFrom, oversample)));
    const end = Math.min(width - 1, Math.floor(toSample(touchedTo, oversample)));
    for (let column = start; column <= end; column++) {
      const x = toPx(column);
      const isFull = x >= insideFrom && x <= insideTo && isClearOfHole(shape, x, y, reach);
      samples[row * width + column] += change * (isFull ? 1 : coverage(shape, x, y, side));
    }
  }
}

function toSample(px: number, oversample: number): number {
  return px * oversample + (oversample - 1) / 2;
}

/** The y of a shape's lowest and highest points, `reach` wider; the whole plane where nothing bounds it. */
function rowsOf({ ring, halfPlanes }: Shape, reach: number): [from: number, to: number] {
  if (ring !== undefined) return [ring.y - ring.outerPx - reach, ring.y + ring.outerPx + reach];
  let from = Number.POSITIVE_INFINITY;
  let to = Number.NEGATIVE_INFINITY;
  for (const [at, a] of halfPlanes.entries()) {
    for (const b of halfPlanes.slice(at + 1)) {
      const cross = a.nx * b.ny - b.nx * a.ny;
      if (Math.abs(cross) < 1e-9) continue; // parallel sides do not meet
      const x = (a.c * b.ny - b.c * a.ny) / cross;
      const y = (a.nx * b.c - b.nx * a.c) / cross;
      if (halfPlanes.some((other) => other !== a && other !== b && distanceIn(other, x, y) < -1e-9)) continue;
      from = Math.min(from, y);
      to = Math.max(to, y);
    }
  }
  const isBounded = halfPlanes.length > 2 && from <= to;
  return isBounded ? [from - reach, to + reach] : [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY];
}

/** The x between which every point of a row lies inside of all half-planes and of the outer circle, moved
 * outward by `margin` (inward where it is negative). Empty: from > to. */
function columnsOf(shape: Shape, y: number, margin: number): [from: number, to: number] {
  let from = Number.NEGATIVE_INFINITY;
  let to = Number.POSITIVE_INFINITY;
  for (const { nx, ny, c } of shape.halfPlanes) {
    const room = c + margin - ny * y; // nx x <= room
    if (nx > 0) to = Math.min(to, room / nx);
    else if (nx < 0) from = Math.max(from, room / nx);
    else if (room < 0) return EMPTY;
  }
  if (shape.ring !== undefined) {
    const { x, y: middle, outerPx } = shape.ring;
    const radius = outerPx + margin;
    const chord2 = radius * radius - (y - middle) ** 2;
    if (radius <= 0 || chord2 < 0) return EMPTY;
    from = Math.max(from, x - Math.sqrt(chord2));
    to = Math.min(to, x + Math.sqrt(chord2));
  }
  return [from, to];
}

const EMPTY: [from: number, to: number] = [1, 0];

function isClearOfHole({ ring }: Shape, x: number, y: number, reach: number): boolean {
  return ring === undefined || ring.innerPx === 0 || distanceInRing(ring, x, y) > reach;
}
