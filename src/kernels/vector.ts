/** Arithmetic on four float32 lanes at once, and on complex numbers whose parts are held in two such vectors.
 *
 * A "complex row" in memory is 32 bytes: the real parts of four neighbouring columns, then their imaginary parts.
 * A "panel" is a run of complex rows: four columns side by side, each lane a column of its own.
 */

/** Bytes of one complex row. */
export const ROW: usize = 32;
/** Where the real and the imaginary parts lie in a complex row. */
export const RE: usize = 0;
export const IM: usize = 16;

/** Bytes between neighbouring panels beyond their own length: an odd number of cache lines, since at distances of a power of two they
 * would compete for the same places of the cache. */
const PADDING: usize = 5 * 64;

/** Bytes to set apart for a panel or a line. */
@inline
export function panelBytes(rows: u32): usize {
  return <usize>rows * ROW + PADDING;
}

@inline
export function add(a: v128, b: v128): v128 {
  return f32x4.add(a, b);
}

@inline
export function sub(a: v128, b: v128): v128 {
  return f32x4.sub(a, b);
}

@inline
export function mul(a: v128, b: v128): v128 {
  return f32x4.mul(a, b);
}

/** One float32 from memory in all four lanes. */
@inline
export function splat(at: usize): v128 {
  return v128.load32_splat(at);
}

/** Re(a b) = Re a Re b - Im a Im b */
@inline
export function productRe(aRe: v128, aIm: v128, bRe: v128, bIm: v128): v128 {
  return sub(mul(aRe, bRe), mul(aIm, bIm));
}

/** Im(a b) = Re a Im b + Im a Re b */
@inline
export function productIm(aRe: v128, aIm: v128, bRe: v128, bIm: v128): v128 {
  return add(mul(aRe, bIm), mul(aIm, bRe));
}

/** Re(a conj b) = Re a Re b + Im a Im b */
@inline
export function conjProductRe(aRe: v128, aIm: v128, bRe: v128, bIm: v128): v128 {
  return add(mul(aRe, bRe), mul(aIm, bIm));
}

/** Im(a conj b) = Im a Re b - Re a Im b */
@inline
export function conjProductIm(aRe: v128, aIm: v128, bRe: v128, bIm: v128): v128 {
  return sub(mul(aIm, bRe), mul(aRe, bIm));
}

/** Write a complex row. */
@inline
export function storeComplex(at: usize, re: v128, im: v128): void {
  v128.store(at, re, RE);
  v128.store(at, im, IM);
}

/** (a0 a1 a2 a3) -> (a3 a2 a1 a0) */
@inline
export function reverseLanes(a: v128): v128 {
  return v128.shuffle<f32>(a, a, 3, 2, 1, 0);
}

/** (a0 b0 a1 b1) */
@inline
export function interleaveLow(a: v128, b: v128): v128 {
  return v128.shuffle<f32>(a, b, 0, 4, 1, 5);
}

/** (a2 b2 a3 b3) */
@inline
export function interleaveHigh(a: v128, b: v128): v128 {
  return v128.shuffle<f32>(a, b, 2, 6, 3, 7);
}

/** (a0 a1 b0 b1) */
@inline
export function lowHalves(a: v128, b: v128): v128 {
  return v128.shuffle<i64>(a, b, 0, 2);
}

/** (a2 a3 b2 b3) */
@inline
export function highHalves(a: v128, b: v128): v128 {
  return v128.shuffle<i64>(a, b, 1, 3);
}
