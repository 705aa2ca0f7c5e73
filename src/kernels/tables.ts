/** Tables of the transforms: roots of unity, and where the negative of each frequency lies. Made once an instance. */
import { ROW } from './vector';

export const SMALLEST_FFT: u32 = 64;
export const LARGEST_FFT: u32 = 2048;

/** Smallest block whose butterflies have roots other than 1. */
const SMALLEST_BLOCK: u32 = 16;
/** Bytes of one entry of a root table: w, w^2, w^3, each as real and imaginary float32. */
export const ROOTS: usize = 24;

const ROOT_BYTES: usize = rootOffset(2 * LARGEST_FFT);
const MIRROR_BYTES: usize = mirrorOffset(2 * LARGEST_FFT);

const PI: f64 = 3.141592653589793;

let tables: usize = 0;

/** Entries of the tables for block sizes 16, 32 ... below `block` lie in front: a quarter of a block each. */
@inline
function rootOffset(block: u32): usize {
  return <usize>((block - SMALLEST_BLOCK) >> 2) * ROOTS;
}

@inline
function mirrorOffset(n: u32): usize {
  return <usize>(n - SMALLEST_FFT) * 4;
}

/** Bytes that `prepare` fills. */
export function tablesBytes(): usize {
  return ROOT_BYTES + MIRROR_BYTES;
}

/** Fill the tables at `at` and remember where they are; call once an instance, before anything else. */
export function prepare(at: usize): void {
  tables = at;
  for (let block = SMALLEST_BLOCK; block <= LARGEST_FFT; block *= 2) fillRoots(block);
  for (let n = SMALLEST_FFT; n <= LARGEST_FFT; n *= 2) fillMirrors(n);
}

/** The table of w^j, w^2j, w^3j with w = exp(-i 2 pi/block), for j = 0 ... block/4 - 1, ROOTS bytes an entry. */
@inline
export function rootsOf(block: u32): usize {
  return tables + rootOffset(block);
}

/** For each position p of a spectrum of n samples in digit-reversed order: byte offset, within a panel, of the row that
 * holds the negative of the frequency at p. uint32 an entry. */
@inline
export function mirrorsOf(n: u32): usize {
  return tables + ROOT_BYTES + mirrorOffset(n);
}

/** Computed in float64, rounded once to float32. */
function fillRoots(block: u32): void {
  let at = rootsOf(block);
  for (let j: u32 = 0; j < block / 4; j++) {
    for (let power: u32 = 1; power <= 3; power++) {
      const angle = (-2 * PI * <f64>(power * j)) / <f64>block;
      store<f32>(at, <f32>JSMath.cos(angle));
      store<f32>(at + 4, <f32>JSMath.sin(angle));
      at += 8;
    }
  }
}

function fillMirrors(n: u32): void {
  const at = mirrorsOf(n);
  for (let k: u32 = 0; k < n; k++) {
    store<u32>(at + 4 * <usize>positionOf(k, n), positionOf((n - k) % n, n) * <u32>ROW);
  }
}

/** Radix of the stage that splits blocks of `block` samples in a transform of n: 4, but for the second stage where
 * log2 n is odd. Both the first and the last stage are radix 4. */
@inline
export function radixOf(block: u32, n: u32): u32 {
  return block == n / 4 && (ctz(n) & 1) == 1 ? 2 : 4;
}

/** Row of frequency k in a spectrum as the transforms leave it: the digits of k, the lowest one first. */
export function positionOf(k: u32, n: u32): u32 {
  let position: u32 = 0;
  for (let block = n; block > 1; ) {
    const radix = radixOf(block, n);
    block /= radix;
    position += (k % radix) * block;
    k /= radix;
  }
  return position;
}
