/** What is measured: a plane of pixels in linear light, and places on it. */

/** One band of a picture: row-major, linear light, 1 being full scale. Pixel (0, 0) has its middle at (0, 0).
 */
export interface Plane {
  width: number;
  height: number;
  samples: Float32Array;
}

/** Whole pixels: `x` and `y` are the first column and row. */
export interface PixelRect {
  x: number;
  y: number;
  width: number;
  height: number;
}

/** Distance from a point of a region to its border in a direction; 0 outside. */
export function roomTo(
  { x: left, y: top, width, height }: PixelRect,
  x: number,
  y: number,
  dx: number,
  dy: number,
): number {
  const along = (at: number, step: number, from: number, size: number) =>
    step > 0
      ? (from + size - 0.5 - at) / step
      : step < 0
        ? (from - 0.5 - at) / step
        : Number.POSITIVE_INFINITY;
  return Math.max(0, Math.min(along(x, dx, left, width), along(y, dy, top, height)));
}
