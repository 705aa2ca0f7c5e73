/** Distortion and relative illumination: each sample takes the scene at the ideal place of the light that lands on it.
 *
 * Cubic convolution over 4 x 4 samples (Keys 1981, a = -1/2; from memory). Its four weights along one axis, for a place f past the second
 * of them, are polynomials in f, worked out as four lanes:
 *   -f^3/2 + f^2 - f/2,  3 f^3/2 - 5 f^2/2 + 1,  -3 f^3/2 + 2 f^2 + f/2,  f^3/2 - f^2/2
 */
import { add, lowHalves, mul, splat, sub } from './vector';

/** What a warp works on; fields in this order. */
@unmanaged
export class WarpRequest {
  /** Size of the picture, and of the scene, which may reach past it on every side. */
  width: i32;
  height: i32;
  sceneWidth: i32;
  sceneHeight: i32;
  /** Where the optical axis meets the picture, and where it meets the scene, in samples of each. */
  axisX: f64;
  axisY: f64;
  sceneAxisX: f64;
  sceneAxisY: f64;
  /** Table steps per squared sample of distance from the axis. */
  stepsPerSquare: f64;
  /** float64 tables over the squared landed radius: ideal over landed radius, relative illumination. */
  scale: usize;
  illumination: usize;
  /** Number of planes, and for each the addresses of scene and result: float32, row-major. All are moved alike. */
  planes: u32;
  scene0: usize;
  out0: usize;
  scene1: usize;
  out1: usize;
  scene2: usize;
  out2: usize;
}

/** Bytes from a plane's two addresses to the next plane's. */
const PLANE: usize = 8;

@inline
function sceneOf(request: WarpRequest, plane: u32): usize {
  return load<usize>(changetype<usize>(request) + <usize>plane * PLANE, offsetof<WarpRequest>('scene0'));
}

@inline
function outOf(request: WarpRequest, plane: u32): usize {
  return load<usize>(changetype<usize>(request) + <usize>plane * PLANE, offsetof<WarpRequest>('out0'));
}

/** Samples between look-ups of the radial curves. */
const STRIDE: i32 = 8;

/** Warp the rows from rowStart up to rowEnd, four samples at a time.
 *
 * Along a row the radial curves are smooth: they are looked up at every eighth sample, the scale joined by cubics and the illumination
 * by parabolas. With parabolas for both, pictures of noise came out up to 2e-5 of full scale away from the reference; so, 2e-6.
 */
export function warpRows(request: WarpRequest, rowStart: i32, rowEnd: i32): void {
  for (let row = rowStart; row < rowEnd; row++) {
    const y = <f64>row - request.axisY;
    const start = <usize>row * <usize>request.width << 2;
    let scale0 = curve(request, request.scale, -request.axisX, y);
    let scale1 = curve(request, request.scale, STRIDE - request.axisX, y);
    let scale2 = curve(request, request.scale, 2 * STRIDE - request.axisX, y);
    let light0 = curve(request, request.illumination, -request.axisX, y);
    let light1 = curve(request, request.illumination, STRIDE - request.axisX, y);
    for (let column = 0; column < request.width; column += STRIDE) {
      const x = <f64>column - request.axisX;
      const scale3 = curve(request, request.scale, x + 3 * STRIDE, y);
      const light2 = curve(request, request.illumination, x + 2 * STRIDE, y);
      const first = scale1 - scale0;
      const second = scale2 - scale1 - first;
      const third = scale3 - scale2 - (scale2 - scale1) - second;
      const slope = f64x2.splat(first);
      const bend = f64x2.splat(second / 2);
      const twist = f64x2.splat(third / 6);
      const lightBend = f32x4.splat(<f32>((light2 - light1 - (light1 - light0)) / 2));
      const lightSlope = f32x4.splat(<f32>(light1 - light0));
      let t = f64x2(0, 1.0 / STRIDE);
      const last = min(column + STRIDE, request.width);
      for (let four = column; four < last; four += 4, t = f64x2.add(t, f64x2.splat(4.0 / STRIDE))) {
        const tHigh = f64x2.add(t, f64x2.splat(2.0 / STRIDE));
        const scaleLow = cubic(f64x2.splat(scale0), slope, bend, twist, t);
        const scaleHigh = cubic(f64x2.splat(scale0), slope, bend, twist, tHigh);
        const xs = f64x2.splat(<f64>four - request.axisX);
        warpFour(
          request,
          start + (<usize>four << 2),
          request.width - four,
          parabola(f32x4.splat(<f32>light0), lightSlope, lightBend, narrow(t, tHigh)),
          place(request.sceneAxisX, f64x2.mul(scaleLow, f64x2.add(xs, f64x2(0, 1)))),
          place(request.sceneAxisX, f64x2.mul(scaleHigh, f64x2.add(xs, f64x2(2, 3)))),
          place(request.sceneAxisY, f64x2.mul(scaleLow, f64x2.splat(y))),
          place(request.sceneAxisY, f64x2.mul(scaleHigh, f64x2.splat(y))),
        );
      }
      scale0 = scale1;
      scale1 = scale2;
      scale2 = scale3;
      light0 = light1;
      light1 = light2;
    }
  }
}

/** A radial curve at a distance (x, y) from the axis in samples. */
@inline
function curve(request: WarpRequest, table: usize, x: f64, y: f64): f64 {
  const place = (x * x + y * y) * request.stepsPerSquare;
  const step = <i32>place;
  return between(table, step, place - <f64>step);
}

/** Newton's forward formula, a + t (slope + (t - 1) (bend + (t - 2) twist)): through four places of equal distance, with the first
 * difference, half the second and a sixth of the third. */
@inline
function cubic(a: v128, slope: v128, bend: v128, twist: v128, t: v128): v128 {
  const inner = f64x2.add(bend, f64x2.mul(f64x2.sub(t, f64x2.splat(2)), twist));
  const middle = f64x2.add(slope, f64x2.mul(f64x2.sub(t, f64x2.splat(1)), inner));
  return f64x2.add(a, f64x2.mul(t, middle));
}

/** The same through three places, in float32. */
@inline
function parabola(a: v128, slope: v128, bend: v128, t: v128): v128 {
  return add(a, mul(t, add(slope, mul(sub(t, f32x4.splat(1)), bend))));
}

@inline
function place(axis: f64, distance: v128): v128 {
  return f64x2.add(f64x2.splat(axis), distance);
}

/** Up to four samples of every plane, from the scene at four places.
 * @param to byte offset of the first in its plane
 * @param count how many of the four lie inside the picture */
@inline
function warpFour(
  request: WarpRequest, to: usize, count: i32, lights: v128, xLow: v128, xHigh: v128, yLow: v128, yHigh: v128,
): void {
  const leftLow = f64x2.floor(xLow);
  const leftHigh = f64x2.floor(xHigh);
  const topLow = f64x2.floor(yLow);
  const topHigh = f64x2.floor(yHigh);
  const left = <i32>f64x2.extract_lane(leftLow, 0) - 1;
  const top = <i32>f64x2.extract_lane(topLow, 0) - 1;
  // as a rule four neighbours take four neighbours
  const areNeighbours = v128.and(
    v128.and(
      f64x2.eq(leftLow, f64x2.add(f64x2.splat(<f64>(left + 1)), f64x2(0, 1))),
      f64x2.eq(leftHigh, f64x2.add(f64x2.splat(<f64>(left + 1)), f64x2(2, 3))),
    ),
    v128.and(f64x2.eq(topLow, f64x2.splat(<f64>(top + 1))), f64x2.eq(topHigh, f64x2.splat(<f64>(top + 1)))),
  );
  if (left < 0 || left + 7 > request.sceneWidth || !i64x2.all_true(areNeighbours)) {
    for (let plane: u32 = 0; plane < request.planes; plane++) {
      const samples = fourApart(request, sceneOf(request, plane), xLow, xHigh, yLow, yHigh);
      storeSome(outOf(request, plane) + to, count, mul(lights, samples));
    }
    return;
  }
  const along = narrow(f64x2.sub(xLow, leftLow), f64x2.sub(xHigh, leftHigh));
  const down = narrow(f64x2.sub(yLow, topLow), f64x2.sub(yHigh, topHigh));
  const a0 = keys0(along);
  const a1 = keys1(along);
  const a2 = keys2(along);
  const a3 = keys3(along);
  const start = <usize>left << 2;
  const row0 = start + rowBytes(request, top);
  const row1 = start + rowBytes(request, top + 1);
  const row2 = start + rowBytes(request, top + 2);
  const row3 = start + rowBytes(request, top + 3);
  const d0 = mul(lights, keys0(down));
  const d1 = mul(lights, keys1(down));
  const d2 = mul(lights, keys2(down));
  const d3 = mul(lights, keys3(down));
  for (let plane: u32 = 0; plane < request.planes; plane++) {
    const scene = sceneOf(request, plane);
    let sum = mul(d0, filterRow(scene + row0, a0, a1, a2, a3));
    sum = add(sum, mul(d1, filterRow(scene + row1, a0, a1, a2, a3)));
    sum = add(sum, mul(d2, filterRow(scene + row2, a0, a1, a2, a3)));
    sum = add(sum, mul(d3, filterRow(scene + row3, a0, a1, a2, a3)));
    storeSome(outOf(request, plane) + to, count, sum);
  }
}

/** Byte offset of a row of the scene; past its border its edge goes on. */
@inline
function rowBytes(request: WarpRequest, row: i32): usize {
  return <usize>clamp(row, request.sceneHeight) * <usize>request.sceneWidth << 2;
}

/** Each lane: four neighbours from its own place on, weighted. */
@inline
function filterRow(at: usize, a0: v128, a1: v128, a2: v128, a3: v128): v128 {
  return add(
    add(mul(a0, v128.load(at)), mul(a1, v128.load(at, 4))),
    add(mul(a2, v128.load(at, 8)), mul(a3, v128.load(at, 12))),
  );
}

/** Keys's weights, one function a neighbour: -f^3/2 + f^2 - f/2 */
@inline
function keys0(f: v128): v128 {
  return mul(f, add(mul(f, add(mul(f, f32x4.splat(-0.5)), f32x4.splat(1))), f32x4.splat(-0.5)));
}

/** 3 f^3/2 - 5 f^2/2 + 1 */
@inline
function keys1(f: v128): v128 {
  return add(mul(mul(f, f), add(mul(f, f32x4.splat(1.5)), f32x4.splat(-2.5))), f32x4.splat(1));
}

/** -3 f^3/2 + 2 f^2 + f/2 */
@inline
function keys2(f: v128): v128 {
  return mul(f, add(mul(f, add(mul(f, f32x4.splat(-1.5)), f32x4.splat(2))), f32x4.splat(0.5)));
}

/** f^3/2 - f^2/2 */
@inline
function keys3(f: v128): v128 {
  return mul(mul(f, f), add(mul(f, f32x4.splat(0.5)), f32x4.splat(-0.5)));
}

@inline
function narrow(low: v128, high: v128): v128 {
  return lowHalves(f32x4.demote_f64x2_zero(low), f32x4.demote_f64x2_zero(high));
}

function fourApart(request: WarpRequest, scene: usize, xLow: v128, xHigh: v128, yLow: v128, yHigh: v128): v128 {
  let samples = f32x4.splat(cubicSample(request, scene, f64x2.extract_lane(xLow, 0), f64x2.extract_lane(yLow, 0)));
  const second = cubicSample(request, scene, f64x2.extract_lane(xLow, 1), f64x2.extract_lane(yLow, 1));
  const third = cubicSample(request, scene, f64x2.extract_lane(xHigh, 0), f64x2.extract_lane(yHigh, 0));
  const fourth = cubicSample(request, scene, f64x2.extract_lane(xHigh, 1), f64x2.extract_lane(yHigh, 1));
  samples = f32x4.replace_lane(samples, 1, second);
  samples = f32x4.replace_lane(samples, 2, third);
  return f32x4.replace_lane(samples, 3, fourth);
}

/** Store the first `count` lanes. */
@inline
function storeSome(at: usize, count: i32, values: v128): void {
  if (count >= 4) {
    v128.store(at, values);
    return;
  }
  v128.store32_lane(at, values, 0);
  if (count > 1) v128.store32_lane(at, values, 1, 4);
  if (count > 2) v128.store32_lane(at, values, 2, 8);
}

/** Light the rows of a picture that no distortion moves. */
export function lightRows(request: WarpRequest, rowStart: i32, rowEnd: i32): void {
  const width = request.width;
  // whole samples by which the scene begins before the picture
  const left = <i32>Math.round(request.sceneAxisX - request.axisX);
  const top = <i32>Math.round(request.sceneAxisY - request.axisY);
  for (let row = rowStart; row < rowEnd; row++) {
    const y = <f64>row - request.axisY;
    let at = <usize>row * <usize>width << 2;
    let from = <usize>((row + top) * request.sceneWidth + left) << 2;
    for (let column = 0; column < width; column++, at += 4, from += 4) {
      const x = <f64>column - request.axisX;
      const place = (x * x + y * y) * request.stepsPerSquare;
      const step = <i32>place;
      const light = between(request.illumination, step, place - <f64>step);
      for (let plane: u32 = 0; plane < request.planes; plane++) {
        store<f32>(outOf(request, plane) + at, <f32>light * load<f32>(sceneOf(request, plane) + from));
      }
    }
  }
}

/** Linear interpolation in a table. */
@inline
function between(table: usize, step: i32, part: f64): f64 {
  const at = table + (<usize>step << 3);
  const low = load<f64>(at);
  return low + part * (load<f64>(at, 8) - low);
}

/** The scene at (x, y); past its border its edge goes on. */
@inline
function cubicSample(request: WarpRequest, scene: usize, x: f64, y: f64): f32 {
  const left = Math.floor(x);
  const top = Math.floor(y);
  const column = <i32>left - 1;
  const row = <i32>top - 1;
  const along = keysWeights(<f32>(x - left));
  const down = keysWeights(<f32>(y - top));
  let sum = mul(f32x4.splat(f32x4.extract_lane(down, 0)), four(request, scene, row, column));
  sum = add(sum, mul(f32x4.splat(f32x4.extract_lane(down, 1)), four(request, scene, row + 1, column)));
  sum = add(sum, mul(f32x4.splat(f32x4.extract_lane(down, 2)), four(request, scene, row + 2, column)));
  sum = add(sum, mul(f32x4.splat(f32x4.extract_lane(down, 3)), four(request, scene, row + 3, column)));
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
function four(request: WarpRequest, scene: usize, row: i32, column: i32): v128 {
  const width = request.sceneWidth;
  const start = scene + rowBytes(request, row);
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
