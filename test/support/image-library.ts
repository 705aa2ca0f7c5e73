/** The general-purpose image library that warp and blur are held against: OpenCV 4.3.0, in the package opencv-wasm 4.3.0-10. */
import { createRequire } from 'node:module';

export interface Mat {
  readonly data32F: Float32Array;
  delete(): void;
}
interface Cv {
  readonly CV_32F: number;
  readonly CV_32FC1: number;
  readonly INTER_LINEAR: number;
  readonly INTER_CUBIC: number;
  readonly INTER_LANCZOS4: number;
  readonly BORDER_REPLICATE: number;
  readonly Mat: new () => Mat;
  readonly Point: new (x: number, y: number) => object;
  readonly Scalar: new () => object;
  matFromArray(rows: number, cols: number, type: number, values: ArrayLike<number>): Mat;
  /** Correlates: out(x) = sum over i of kernel(i) source(x + i - anchor). */
  filter2D(
    source: Mat,
    out: Mat,
    depth: number,
    kernel: Mat,
    anchor: object,
    delta: number,
    border: number,
  ): void;
  /** out(x, y) = source(mapX(x, y), mapY(x, y)), places rounded to 1/32 of a pixel. */
  remap(
    source: Mat,
    out: Mat,
    mapX: Mat,
    mapY: Mat,
    interpolation: number,
    border: number,
    value: object,
  ): void;
}

// Required, not imported: the package's types are sources of its own that our compiler settings do not pass. Here is what the tests use.
export const { cv } = createRequire(import.meta.url)('opencv-wasm') as { cv: Cv };
