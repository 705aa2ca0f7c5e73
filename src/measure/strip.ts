/** The pixels around an edge, seen so that the edge runs down. */
import { type PixelRect, type Plane, roomTo } from './plane.js';

/** Where an edge is thought to lie. */
export interface EdgeGuess {
  /** A point of it: the middle of the part to be measured. */
  x: number;
  y: number;
  /** Direction across it, from +x toward +y; either way round. */
  normalDeg: number;
  /** Length of the part to be measured. */
  lengthPx: number;
  /** How far pixels on either side of it belong to the measurement. */
  halfWidthPx: number;
}

/** The guess with no more width than there is between the ends of the edge and the borders of a region. */
export function narrowedTo(bounds: PixelRect, guess: EdgeGuess): EdgeGuess {
  const angle = (guess.normalDeg * Math.PI) / 180;
  const [nx, ny] = [Math.cos(angle), Math.sin(angle)];
  const half = guess.lengthPx / 2;
  const rooms = [-half, half].flatMap((along) => {
    const [x, y] = [guess.x - along * ny, guess.y + along * nx];
    return [roomTo(bounds, x, y, nx, ny), roomTo(bounds, x, y, -nx, -ny)];
  });
  return { ...guess, halfWidthPx: Math.min(guess.halfWidthPx, ...rooms) };
}

/** Pixels in coordinates u, v in which the edge runs within 45 degrees of the v axis: u = x and v = y, or
 * turned about, u = y and v = x. Sample (u, v) is values[(v - vFrom) * width + (u - uFrom)]. */
export interface Strip {
  isTurned: boolean;
  uFrom: number;
  vFrom: number;
  width: number;
  height: number;
  values: Float64Array;
  /** The guess in these coordinates: u = u0 + slope (v - v0) for |v - v0| <= halfRows. */
  u0: number;
  v0: number;
  slope: number;
  halfRows: number;
}

/** Pixels kept around the strip, so that derivatives at its border have both neighbours. */
const MARGIN_PX = 2;

/** Cut the strip out.
 * @param bounds no pixel outside of it is looked at; within the plane */
export function cutStrip(plane: Plane, guess: EdgeGuess, bounds: PixelRect): Strip {
  const { x, y, normalDeg, lengthPx, halfWidthPx } = guess;
  const angle = (normalDeg * Math.PI) / 180;
  const isTurned = Math.abs(Math.sin(angle)) > Math.abs(Math.cos(angle));
  const [across, along] = isTurned ? [Math.sin(angle), Math.cos(angle)] : [Math.cos(angle), Math.sin(angle)];
  const [u0, v0] = isTurned ? [y, x] : [x, y];
  const slope = -along / across;
  const halfRows = (lengthPx / 2) * Math.abs(across);
  const reachU = halfWidthPx * Math.abs(across) + (lengthPx / 2) * Math.abs(along) + MARGIN_PX;
  const reachV = halfRows + halfWidthPx * Math.abs(along) + MARGIN_PX;
  const [boundU, boundV, sizeU, sizeV] = isTurned
    ? [bounds.y, bounds.x, bounds.height, bounds.width]
    : [bounds.x, bounds.y, bounds.width, bounds.height];
  const uFrom = Math.max(boundU, Math.floor(u0 - reachU));
  const vFrom = Math.max(boundV, Math.floor(v0 - reachV));
  const width = Math.max(0, Math.min(boundU + sizeU - 1, Math.ceil(u0 + reachU)) - uFrom + 1);
  const height = Math.max(0, Math.min(boundV + sizeV - 1, Math.ceil(v0 + reachV)) - vFrom + 1);
  const values = new Float64Array(width * height);
  const [stepU, stepV] = isTurned ? [plane.width, 1] : [1, plane.width];
  for (let row = 0; row < height; row++)
    for (let column = 0; column < width; column++)
      values[row * width + column] = plane.samples[(uFrom + column) * stepU + (vFrom + row) * stepV];
  return { isTurned, uFrom, vFrom, width, height, values, u0, v0, slope, halfRows };
}

/** A point of the strip's coordinates in the plane's. */
export function fromStrip({ isTurned }: Strip, u: number, v: number): [x: number, y: number] {
  return isTurned ? [v, u] : [u, v];
}
