/** The part of the image library that the tests use. */
declare module 'opencv-wasm' {
  export interface Mat {
    readonly data32F: Float32Array;
    delete(): void;
  }
  export const cv: {
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
  };
}
