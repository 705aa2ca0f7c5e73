/** The intensity of a PSF on a window of its fine grid, from the third-order wavefront:
 *
 *   I(x) = | sum over the pupil of A exp(i 2 pi W) exp(+i ...) |^2
 *
 * computed as the forward transform of the conjugate, which has the same modulus. Phases are worked out in float64 and reduced to one
 * turn before they are rounded to float32: a wavefront of many waves keeps its digits.
 *
 * The pupil lies at rows and columns 0 ... 2 half of the grid instead of about its middle. A shift of the pupil turns the phase of the
 * image only, and the transforms can pass over the rows and columns that are zero.
 */
import { forward, forwardToLines } from './fft';
import { IM, RE, ROW, add, highHalves, interleaveHigh, interleaveLow, lowHalves, mul, panelBytes, storeComplex, sub } from './vector';

/** What `psfIntensity` is asked for; fields in this order, nothing between them but the padding of eight-byte fields. */
@unmanaged
export class PsfRequest {
  /** Size of the grid. */
  n: u32;
  /** The pupil reaches from -half to half. */
  half: u32;
  /** Radius of the pupil in samples, not a whole number. */
  radius: f64;
  /** W = w40 rho^4 + w31 rho^2 m + w22 m^2 + w20 rho^2 + w11 m in waves, with m = x cos + y sin. */
  w40: f64;
  w31: f64;
  w22: f64;
  w20: f64;
  w11: f64;
  cos: f64;
  sin: f64;
  /** float32[2 half + 1], all 1. */
  ones: usize;
  /** Work space, `psfScratchBytes` bytes. */
  scratch: usize;
  /** Side of the window, a multiple of 4. */
  side: u32;
  /** uint32[side]: byte offset in a transformed line of the row that holds each column of the window. */
  columnOffsets: usize;
  /** int32[n]: row of the window that holds the frequency at each position of a spectrum; below 0 for none. */
  rowOfPosition: usize;
  /** float32[side][side], row-major. */
  out: usize;
}

/** Bytes of work space for a grid of n and a pupil of -half ... half. */
export function psfScratchBytes(n: u32, half: u32): usize {
  return 2 * panelBytes(n) + <usize>(n / 4) * panelBytes(paddedPupil(half));
}

/** Write the intensity on the window, not scaled. */
export function psfIntensity(request: PsfRequest): void {
  const n = request.n;
  const used = 2 * request.half + 1;
  const padded = paddedPupil(request.half);
  const pupil = request.scratch;
  const work = pupil + panelBytes(n);
  const lines = work + panelBytes(n);
  const lineBytes = panelBytes(padded);
  for (let column: u32 = 0; column < padded; column += 4) {
    fillPupil(request, column, pupil);
    forwardToLines(pupil, request.ones, request.ones, used, work, n, lines + <usize>column * ROW, lineBytes);
  }
  for (let m: u32 = 0; m < n / 4; m++) {
    const rows = request.rowOfPosition + (<usize>m << 4);
    if (load<i32>(rows) < 0 && load<i32>(rows, 4) < 0 && load<i32>(rows, 8) < 0 && load<i32>(rows, 12) < 0) continue;
    forward(lines + <usize>m * lineBytes, request.ones, used, work, n);
    writeIntensity(request, work, rows);
  }
}

/** Columns of a pupil, filled up to whole panels; the columns added are dark. */
@inline
function paddedPupil(half: u32): u32 {
  return (2 * half + 4) & ~3;
}

/** Four columns of conj P, P = A exp(i 2 pi W), rows 0 ... 2 half of a panel. */
function fillPupil(request: PsfRequest, column: u32, panel: usize): void {
  const half = <f64>request.half;
  const scale = 1 / request.radius;
  const xLow = pair(scale * (<f64>column - half), scale * (<f64>column + 1 - half));
  const xHigh = pair(scale * (<f64>column + 2 - half), scale * (<f64>column + 3 - half));
  for (let row: u32 = 0; row <= 2 * request.half; row++, panel += ROW) {
    const y = f64x2.splat(scale * (<f64>row - half));
    const amplitude = rim(squaredRadius(xLow, y), squaredRadius(xHigh, y), <f32>request.radius);
    if (!v128.any_true(f32x4.gt(amplitude, f32x4.splat(0)))) {
      storeComplex(panel, amplitude, amplitude);
      continue;
    }
    const turns = narrow(wavefrontTurns(request, xLow, y), wavefrontTurns(request, xHigh, y));
    const sine = sineOfHalf(turns);
    const cosine = cosineOfHalf(turns);
    // exp(-i 2 a) = 1 - 2 sin^2 a - i 2 sin a cos a
    const re = sub(f32x4.splat(1), mul(f32x4.splat(2), mul(sine, sine)));
    const im = mul(f32x4.splat(-2), mul(sine, cosine));
    storeComplex(panel, mul(amplitude, re), mul(amplitude, im));
  }
}

@inline
function pair(a: f64, b: f64): v128 {
  return f64x2.replace_lane(f64x2.splat(a), 1, b);
}

@inline
function squaredRadius(x: v128, y: v128): v128 {
  return f64x2.add(f64x2.mul(x, x), f64x2.mul(y, y));
}

/** A rim that is soft over one sample: A = (1 - rho) radius + 1/2, from 0 to 1. */
@inline
function rim(rho2Low: v128, rho2High: v128, radius: f32): v128 {
  const rho = narrow(f64x2.sqrt(rho2Low), f64x2.sqrt(rho2High));
  const inside = add(mul(sub(f32x4.splat(1), rho), f32x4.splat(radius)), f32x4.splat(0.5));
  return f32x4.min(f32x4.max(inside, f32x4.splat(0)), f32x4.splat(1));
}

/** W at two points of the pupil, less its nearest whole number: -1/2 to 1/2. */
@inline
function wavefrontTurns(request: PsfRequest, x: v128, y: v128): v128 {
  const rho2 = squaredRadius(x, y);
  const m = f64x2.add(f64x2.mul(x, f64x2.splat(request.cos)), f64x2.mul(y, f64x2.splat(request.sin)));
  const round = f64x2.add(
    f64x2.add(f64x2.mul(f64x2.splat(request.w40), rho2), f64x2.mul(f64x2.splat(request.w31), m)),
    f64x2.splat(request.w20),
  );
  const along = f64x2.add(f64x2.mul(f64x2.splat(request.w22), m), f64x2.splat(request.w11));
  const w = f64x2.add(f64x2.mul(rho2, round), f64x2.mul(m, along));
  return f64x2.sub(w, f64x2.nearest(w));
}

/** Two pairs of float64 as four float32. */
@inline
function narrow(low: v128, high: v128): v128 {
  return lowHalves(f32x4.demote_f64x2_zero(low), f32x4.demote_f64x2_zero(high));
}

/** sin(pi t) for t from -1/2 to 1/2, by its series up to the 11th power: 6e-8. */
@inline
function sineOfHalf(t: v128): v128 {
  const a = mul(t, f32x4.splat(3.14159265358979));
  const a2 = mul(a, a);
  let sum = f32x4.splat(-2.50521083854e-8); // -1/11!
  sum = next(sum, a2, 2.75573192239e-6); // 1/9!
  sum = next(sum, a2, -1.98412698413e-4); // -1/7!
  sum = next(sum, a2, 8.33333333333e-3); // 1/5!
  sum = next(sum, a2, -1.66666666667e-1); // -1/3!
  sum = next(sum, a2, 1);
  return mul(sum, a);
}

/** cos(pi t) for t from -1/2 to 1/2, by its series up to the 12th power: 6e-9. */
@inline
function cosineOfHalf(t: v128): v128 {
  const a = mul(t, f32x4.splat(3.14159265358979));
  const a2 = mul(a, a);
  let sum = f32x4.splat(2.08767569879e-9); // 1/12!
  sum = next(sum, a2, -2.75573192239e-7); // -1/10!
  sum = next(sum, a2, 2.48015873016e-5); // 1/8!
  sum = next(sum, a2, -1.38888888889e-3); // -1/6!
  sum = next(sum, a2, 4.16666666667e-2); // 1/4!
  sum = next(sum, a2, -0.5);
  return next(sum, a2, 1);
}

/** One step of Horner's rule: sum x + coefficient. */
@inline
function next(sum: v128, x: v128, coefficient: f32): v128 {
  return add(mul(sum, x), f32x4.splat(coefficient));
}

/** Re^2 + Im^2 of a transformed line, whose lanes are four rows of the window: turned into rows, four columns at a time. */
function writeIntensity(request: PsfRequest, line: usize, rows: usize): void {
  const stride = <usize>request.side << 2;
  const out = request.out;
  for (let column: usize = 0; column < stride; column += 16) {
    const offsets = request.columnOffsets + column;
    const a = power(line + load<u32>(offsets));
    const b = power(line + load<u32>(offsets, 4));
    const c = power(line + load<u32>(offsets, 8));
    const d = power(line + load<u32>(offsets, 12));
    // lanes are rows and vectors columns; transposed, lanes are columns
    const abLow = interleaveLow(a, b);
    const abHigh = interleaveHigh(a, b);
    const cdLow = interleaveLow(c, d);
    const cdHigh = interleaveHigh(c, d);
    storeRow(out, stride, column, load<i32>(rows), lowHalves(abLow, cdLow));
    storeRow(out, stride, column, load<i32>(rows, 4), highHalves(abLow, cdLow));
    storeRow(out, stride, column, load<i32>(rows, 8), lowHalves(abHigh, cdHigh));
    storeRow(out, stride, column, load<i32>(rows, 12), highHalves(abHigh, cdHigh));
  }
}

@inline
function power(row: usize): v128 {
  const re = v128.load(row, RE);
  const im = v128.load(row, IM);
  return add(mul(re, re), mul(im, im));
}

@inline
function storeRow(out: usize, stride: usize, column: usize, row: i32, values: v128): void {
  if (row >= 0) v128.store(out + <usize>row * stride + column, values);
}
