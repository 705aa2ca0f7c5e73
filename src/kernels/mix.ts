/** Products of lines of spectra, and the two halves of real kernels' spectra.
 *
 * A line holds four frequencies along y as lanes (positions 4m ... 4m + 3) and all frequencies along x as rows. The negatives
 * of the four lie in one line again, in opposite order (for m = 0 in the order 0 3 2 1), and the negatives along x in the rows
 * that `mirrorsOf` lists. */
import { mirrorsOf } from './tables';
import {
  IM, RE, ROW, add, conjProductIm, conjProductRe, productIm, productRe, reverseLanes, storeComplex, sub,
} from './vector';

/** The line that holds the negatives of line m's frequencies, of n along y. */
@inline
export function lineOfNegatives(m: u32, n: u32): u32 {
  return load<u32>(mirrorsOf(n) + ((<usize>m * 4) << 2)) / (4 * <u32>ROW);
}

/** sum += z K */
export function mix(z: usize, kernel: usize, sum: usize, n: u32): void {
  const end = z + <usize>n * ROW;
  for (; z < end; z += ROW, kernel += ROW, sum += ROW) {
    addProduct(sum, v128.load(z, RE), v128.load(z, IM), kernel);
  }
}

/** sum += z K where z lies in the line of negatives of the line that K is given for: K(-k) = conj K(k) for a real kernel. */
export function mixNegatives(z: usize, kernel: usize, sum: usize, n: u32): void {
  const end = z + <usize>n * ROW;
  let mirror = mirrorsOf(n);
  for (; z < end; z += ROW, mirror += 4, sum += ROW) {
    const zRe = v128.load(z, RE);
    const zIm = v128.load(z, IM);
    const opposite = kernel + load<u32>(mirror);
    const kRe = reverseLanes(v128.load(opposite, RE));
    const kIm = reverseLanes(v128.load(opposite, IM));
    storeComplex(
      sum,
      add(v128.load(sum, RE), conjProductRe(zRe, zIm, kRe, kIm)),
      add(v128.load(sum, IM), conjProductIm(zRe, zIm, kRe, kIm)),
    );
  }
}

/** product = factor z, the same factor for all rows of z */
export function multiply(factor: usize, z: usize, product: usize, n: u32): void {
  const fRe = v128.load(factor, RE);
  const fIm = v128.load(factor, IM);
  const end = z + <usize>n * ROW;
  for (; z < end; z += ROW, product += ROW) {
    const zRe = v128.load(z, RE);
    const zIm = v128.load(z, IM);
    storeComplex(product, productRe(zRe, zIm, fRe, fIm), productIm(zRe, zIm, fRe, fIm));
  }
}

/** Two real tiles in one transform, z = a + i b, each with its own kernel:
 *   2 a(k) = z(k) + conj z(-k), 2 i b(k) = z(k) - conj z(-k)
 *   sumA += 2 a A, sumB += 2 i b B
 * @param negatives the line of negatives of line `z`, which is the same line where m = 0 or where it is its own mirror */
export function mixPair(
  z: usize, negatives: usize, kernelA: usize, kernelB: usize, sumA: usize, sumB: usize,
  n: u32, isFirstLine: bool,
): void {
  const mirrors = mirrorsOf(n);
  for (let at: usize = 0, row: usize = 0; row < n; at += ROW, row++) {
    const zRe = v128.load(z + at, RE);
    const zIm = v128.load(z + at, IM);
    const opposite = negatives + load<u32>(mirrors + (row << 2));
    const nRe = negativeLanes(v128.load(opposite, RE), isFirstLine);
    const nIm = negativeLanes(v128.load(opposite, IM), isFirstLine);
    addProduct(sumA + at, add(zRe, nRe), sub(zIm, nIm), kernelA + at);
    addProduct(sumB + at, sub(zRe, nRe), add(zIm, nIm), kernelB + at);
  }
}

/** The lanes of the opposite frequencies along y. */
@inline
function negativeLanes(a: v128, isFirstLine: bool): v128 {
  return isFirstLine ? v128.shuffle<f32>(a, a, 0, 3, 2, 1) : reverseLanes(a);
}

/** sum += z K */
@inline
function addProduct(sum: usize, zRe: v128, zIm: v128, kernel: usize): void {
  const kRe = v128.load(kernel, RE);
  const kIm = v128.load(kernel, IM);
  storeComplex(
    sum,
    add(v128.load(sum, RE), productRe(zRe, zIm, kRe, kIm)),
    add(v128.load(sum, IM), productIm(zRe, zIm, kRe, kIm)),
  );
}

/** Join what `mixPair` summed: with p = a A and q = i b B the spectrum of the blurred pair is p + q at k, and conj(p - q) at -k,
 * since a A and b B are spectra of real tiles. `sumA` becomes the line itself, `negatives` its line of negatives (unless 0). */
export function joinPair(sumA: usize, sumB: usize, negatives: usize, n: u32): void {
  const mirrors = mirrorsOf(n);
  for (let at: usize = 0, row: usize = 0; row < n; at += ROW, row++) {
    const pRe = v128.load(sumA + at, RE);
    const pIm = v128.load(sumA + at, IM);
    const qRe = v128.load(sumB + at, RE);
    const qIm = v128.load(sumB + at, IM);
    storeComplex(sumA + at, add(pRe, qRe), add(pIm, qIm));
    if (negatives != 0) {
      const opposite = negatives + load<u32>(mirrors + (row << 2));
      storeComplex(opposite, reverseLanes(sub(pRe, qRe)), reverseLanes(sub(qIm, pIm)));
    }
  }
}
