/** Distortion and relative illumination: each sample takes the scene at the ideal place of the light that lands on it.
 *
 * Cubic convolution over 4 x 4 samples (Keys 1981, a = -1/2; from memory). Its four weights along one axis, for a place f past the second
 * of them, are polynomials in f, worked out as four lanes:
 *   -f^3/2 + f^2 - f/2,  3 f^3/2 - 5 f^2/2 + 1,  -3 f^3/2 + 2 f^2 + f/2,  f^3/2 - f^2/2
 */
import { add, mul, splat } from './vector';

/** What a warp works on; fields in this order. */
@unmanaged
export class WarpRequest {
  width: i32;
  height: i32;
  /** Where the optical axis meets the picture, in samples. */
  axisX: f64;
  axisY: f64;
  /** Table steps per squared sample of distance from the axis. */
  stepsPerSquare: f64;
  /** float64 tables over the squared landed radius: ideal over landed radius, relative illumination. */
  scale: usize;
  illumination: usize;
  /** float32 planes, row-major. */
  scene: usize;
  out: usize;
}

/** Warp the rows from rowStart up to rowEnd. */
export function warpRows(request: WarpRequest, rowStart: i32, rowEnd: i32): void {
  const width = request.width;
  for (let row = rowStart; row < rowEnd; row++) {
    const y = <f64>row - request.axisY;
    let to = request.out + (<usize>row * <usize>width << 2);
    for (let column = 0; column < width; column++, to += 4) {
      const x = <f64>column - request.axisX;
      const place = (x * x + y * y) * request.stepsPerSquare;
      const step = <u32>place;
      const part = place - <f64>step;
      const shrink = between(request.scale, step, part);
      const light = between(request.illumination, step, part);
      store<f32>(to, <f32>light * cubicSample(request, request.axisX + x * shrink, request.axisY + y * shrink));
    }
  }
}

/** Light the rows of a picture that no distortion moves. */
export function lightRows(request: WarpRequest, rowStart: i32, rowEnd: i32): void {
  const width = request.width;
  for (let row = rowStart; row < rowEnd; row++) {
    const y = <f64>row - request.axisY;
    let at = <usize>row * <usize>width << 2;
    for (let column = 0; column < width; column++, at += 4) {
      const x = <f64>column - request.axisX;
      const place = (x * x + y * y) * request.stepsPerSquare;
      const step = <u32>place;
      const light = between(request.illumination, step, place - <f64>step);
      store<f32>(request.out + at, <f32>light * load<f32>(request.scene + at));
    }
  }
}

/** Linear interpolation in a table. */
@inline
function between(table: usize, step: u32, part: f64): f64 {
  const at = table + (<usize>step << 3);
  const low = load<f64>(at);
  return low + part * (load<f64>(at, 8) - low);
}

/** The scene at (x, y); past its frame its edge goes on. */
@inline
function cubicSample(request: WarpRequest, x: f64, y: f64): f32 {
  const left = Math.floor(x);
  const top = Math.floor(y);
  const column = <i32>left - 1;
  const row = <i32>top - 1;
  const along = keysWeights(<f32>(x - left));
  const down = keysWeights(<f32>(y - top));
  let sum = mul(f32x4.splat(f32x4.extract_lane(down, 0)), four(request, row, column));
  sum = add(sum, mul(f32x4.splat(f32x4.extract_lane(down, 1)), four(request, row + 1, column)));
  sum = add(sum, mul(f32x4.splat(f32x4.extract_lane(down, 2)), four(request, row + 2, column)));
  sum = add(sum, mul(f32x4.splat(f32x4.extract_lane(down, 3)), four(request, row + 3, column)));
  const products = mul(sum, along);
  const halves = add(products, v128.shuffle<f32>(products, products, 2, 3, 0, 1));
  return f32x4.extract_lane(halves, 0) + f32x4.extract_lane(halves, 1);
}

@inline
function keysWeights(f: f32): v128 {
  const place = f32x4.splat(f);
  let sum = f32x4(-0.5, 1.5, -1.5, 0.5);
  sum = add(mul(sum, place), f32x4(1, -2.5, 2, -0.5));
  sum = add(mul(sum, place), f32x4(-0.5, 0, 0.5, 0));
  return add(mul(sum, place), f32x4(0, 1, 0, 0));
}

/** Samples column ... column + 3 of a row. */
@inline
function four(request: WarpRequest, row: i32, column: i32): v128 {
  const width = request.width;
  const start = request.scene + (<usize>clamp(row, request.height) * <usize>width << 2);
  if (column >= 0 && column + 4 <= width) return v128.load(start + (<usize>column << 2));
  return fourAtEdge(start, width, column);
}

function fourAtEdge(start: usize, width: i32, column: i32): v128 {
  let samples = splat(start + (<usize>clamp(column, width) << 2));
  samples = f32x4.replace_lane(samples, 1, load<f32>(start + (<usize>clamp(column + 1, width) << 2)));
  samples = f32x4.replace_lane(samples, 2, load<f32>(start + (<usize>clamp(column + 2, width) << 2)));
  return f32x4.replace_lane(samples, 3, load<f32>(start + (<usize>clamp(column + 3, width) << 2)));
}

@inline
function clamp(index: i32, count: i32): i32 {
  return min(max(index, 0), count - 1);
}
