/** What is measured: a plane of pixels in linear light, and places on it. */

/** One band of a picture: row-major, linear light, 1 being full scale. Pixel (0, 0) has its middle at (0, 0). */
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
