/** Float32 transforms of four columns at once, one a lane. Radix 4, with one stage of radix 2 where log2 n is odd.
 *
 * Forward: X[k] = sum over r of x[r] exp(-i 2 pi r k/n), decimation in frequency; the spectrum is left in digit-reversed
 * order (see `positionOf`), which costs nothing, since products of spectra do not care.
 * Inverse: x[r] = sum over k of X[k] exp(+i 2 pi r k/n), decimation in time, from that order. Neither is scaled.
 *
 * In both directions the first and the last stage stand apart: they read from or write to another place, and do on the
 * way what would otherwise be a pass of its own (weights, known zeros, transposition).
 *
 * A forward butterfly of radix 4 over x0 ... x3, with w the root of unity of its column:
 *   a = x0 + x2, b = x0 - x2, c = x1 + x3, d = x1 - x3
 *   y0 = a + c, y1 = (b - i d) w, y2 = (a - c) w^2, y3 = (b + i d) w^3
 * The inverse one undoes it, but for the scale:
 *   t0 = y0, t1 = y1 conj w, t2 = y2 conj w^2, t3 = y3 conj w^3
 *   x0 = (t0 + t2) + (t1 + t3), x1 = (t0 - t2) + i (t1 - t3), x2 = (t0 + t2) - (t1 + t3), x3 = (t0 - t2) - i (t1 - t3)
 *
 * Source of the stages: Cooley and Tukey 1965; Gentleman and Sande 1966 for decimation in frequency (from memory).
 */
import { ROOTS, radixOf, rootsOf } from './tables';
import {
  IM, RE, ROW, add, conjProductIm, conjProductRe, highHalves, interleaveHigh, interleaveLow, lowHalves, mul,
  productIm, productRe, splat, storeComplex, sub,
} from './vector';

/** Forward transform of a panel of n rows whose rows from `used` on count as zero and are never read.
 * Row r is multiplied by weights[r] (float32) on the way. `target` may be `source`. */
export function forward(source: usize, weights: usize, used: u32, target: usize, n: u32): void {
  forwardFirst(source, weights, weights, used, target, n);
  forwardMiddle(target, n);
  forwardLast(target, n);
}

/** As `forward`, with weights of their own for the real and the imaginary parts, and the spectrum written as lines: four
 * neighbouring positions become the lanes of one line. The work is done in `panel`. Line m (positions 4m ... 4m + 3)
 * starts at lines + m lineBytes; the four columns become four complex rows of it, one after another. */
export function forwardToLines(
  source: usize, weightsRe: usize, weightsIm: usize, used: u32,
  panel: usize, n: u32, lines: usize, lineBytes: usize,
): void {
  forwardFirst(source, weightsRe, weightsIm, used, panel, n);
  forwardMiddle(panel, n);
  forwardLastToLines(panel, n, lines, lineBytes);
}

/** Inverse transform of a panel of n rows. `target` may be `source`, which is destroyed. */
export function inverse(source: usize, target: usize, n: u32): void {
  inverseFirst(source, n);
  inverseMiddle(source, n);
  inverseLast(source, target, n);
}

/** As `inverse`, with the spectrum read from lines as `forwardToLines` writes them. */
export function inverseFromLines(lines: usize, lineBytes: usize, panel: usize, n: u32): void {
  inverseFirstFromLines(lines, lineBytes, panel, n);
  inverseMiddle(panel, n);
  inverseLast(panel, panel, n);
}

// Forward stages

/** First stage: butterflies over rows j, j + n/4, j + n/2, j + 3n/4, of which only those below `used` are not zero. */
function forwardFirst(
  source: usize, weightsRe: usize, weightsIm: usize, used: u32, target: usize, n: u32,
): void {
  const quarter = n / 4;
  const terms = used / quarter;
  const reach = used % quarter; // the first rows of a quarter have one term more
  firstButterflies(source, weightsRe, weightsIm, target, n, 0, reach, terms + 1);
  firstButterflies(source, weightsRe, weightsIm, target, n, reach, quarter, terms);
}

/** The butterflies j = from ... to - 1 of the first stage, with `terms` inputs that are not zero. */
function firstButterflies(
  source: usize, weightsRe: usize, weightsIm: usize, target: usize, n: u32, from: u32, to: u32, terms: u32,
): void {
  const x = source + <usize>from * ROW;
  const end = source + <usize>to * ROW;
  const gRe = weightsRe + (<usize>from << 2);
  const gIm = weightsIm + (<usize>from << 2);
  const y = target + <usize>from * ROW;
  const w = rootsOf(n) + <usize>from * ROOTS;
  if (terms == 4) fourTerms(x, end, gRe, gIm, y, n, w);
  else if (terms == 3) threeTerms(x, end, gRe, gIm, y, n, w);
  else if (terms == 2) twoTerms(x, end, gRe, gIm, y, n, w);
  else if (terms == 1) oneTerm(x, end, gRe, gIm, y, n, w);
  else for (let q: u32 = 0; q < 4; q++) memory.fill(y + <usize>(q * (n / 4)) * ROW, 0, end - x);
}

// One function for each number of terms, so that each is compiled with what it needs and nothing else.

function fourTerms(x: usize, end: usize, gRe: usize, gIm: usize, y: usize, n: u32, w: usize): void {
  firstButterfliesOf(4, x, end, gRe, gIm, y, n, w);
}

function threeTerms(x: usize, end: usize, gRe: usize, gIm: usize, y: usize, n: u32, w: usize): void {
  firstButterfliesOf(3, x, end, gRe, gIm, y, n, w);
}

function twoTerms(x: usize, end: usize, gRe: usize, gIm: usize, y: usize, n: u32, w: usize): void {
  firstButterfliesOf(2, x, end, gRe, gIm, y, n, w);
}

function oneTerm(x: usize, end: usize, gRe: usize, gIm: usize, y: usize, n: u32, w: usize): void {
  firstButterfliesOf(1, x, end, gRe, gIm, y, n, w);
}

@inline
function firstButterfliesOf(
  terms: u32, x: usize, end: usize, gRe: usize, gIm: usize, y: usize, n: u32, w: usize,
): void {
  const step = <usize>(n / 4) * ROW;
  const gStep = <usize>(n / 4) * 4;
  for (; x < end; x += ROW, y += ROW, w += ROOTS, gRe += 4, gIm += 4) {
    firstButterfly(terms, x, step, gRe, gIm, gStep, y, w);
  }
}

/** The forward butterfly over the weighted rows gRe Re x + i gIm Im x, where x[p] = 0 from p = `terms` on. */
@inline
function firstButterfly(
  terms: u32, x: usize, step: usize, gRe: usize, gIm: usize, gStep: usize, y: usize, w: usize,
): void {
  const zero = f32x4.splat(0);
  const x0Re = weighted(x + RE, gRe);
  const x0Im = weighted(x + IM, gIm);
  const x1Re = terms > 1 ? weighted(x + step + RE, gRe + gStep) : zero;
  const x1Im = terms > 1 ? weighted(x + step + IM, gIm + gStep) : zero;
  const x2Re = terms > 2 ? weighted(x + 2 * step + RE, gRe + 2 * gStep) : zero;
  const x2Im = terms > 2 ? weighted(x + 2 * step + IM, gIm + 2 * gStep) : zero;
  const x3Re = terms > 3 ? weighted(x + 3 * step + RE, gRe + 3 * gStep) : zero;
  const x3Im = terms > 3 ? weighted(x + 3 * step + IM, gIm + 3 * gStep) : zero;
  const aRe = terms > 2 ? add(x0Re, x2Re) : x0Re;
  const aIm = terms > 2 ? add(x0Im, x2Im) : x0Im;
  const bRe = terms > 2 ? sub(x0Re, x2Re) : x0Re;
  const bIm = terms > 2 ? sub(x0Im, x2Im) : x0Im;
  const cRe = terms > 3 ? add(x1Re, x3Re) : x1Re;
  const cIm = terms > 3 ? add(x1Im, x3Im) : x1Im;
  const dRe = terms > 3 ? sub(x1Re, x3Re) : x1Re;
  const dIm = terms > 3 ? sub(x1Im, x3Im) : x1Im;
  storeForward(y, step, w, true, aRe, aIm, bRe, bIm, cRe, cIm, dRe, dIm);
}

@inline
function weighted(x: usize, g: usize): v128 {
  return mul(v128.load(x), splat(g));
}

/** All stages between the first and the last. */
function forwardMiddle(panel: usize, n: u32): void {
  const pieceRows = rowsAtATime(n);
  const end = panel + <usize>n * ROW;
  for (let piece = panel; piece < end; piece += <usize>pieceRows * ROW) {
    for (let block = n / 4; block > 4; ) {
      const radix = radixOf(block, n);
      if (radix == 2) forwardHalves(piece, pieceRows, block);
      else forwardQuarters(piece, pieceRows, block);
      block /= radix;
    }
  }
}

/** After the first stage the quarters of a panel are transforms of their own. Where the panel would strain the first
 * cache (32 to 48 KiB), they go through their stages one after the other. */
@inline
function rowsAtATime(n: u32): u32 {
  return n > 512 ? n / 4 : n;
}

/** One stage of radix 4 over blocks of `block` rows. */
function forwardQuarters(panel: usize, rows: u32, block: u32): void {
  const blockBytes = <usize>block * ROW;
  const step = blockBytes / 4;
  const end = panel + <usize>rows * ROW;
  for (let x = panel; x < end; x += blockBytes) forwardButterfly(x, step, 0, false);
  let w = rootsOf(block) + ROOTS;
  for (let start = panel + ROW; start < panel + step; start += ROW, w += ROOTS) {
    for (let x = start; x < end; x += blockBytes) forwardButterfly(x, step, w, true);
  }
}

/** One stage of radix 2 over blocks of `block` rows: y0 = x0 + x1, y1 = (x0 - x1) w. */
function forwardHalves(panel: usize, rows: u32, block: u32): void {
  const blockBytes = <usize>block * ROW;
  const step = blockBytes / 2;
  const end = panel + <usize>rows * ROW;
  let w = squaresOf(block);
  for (let start = panel; start < panel + step; start += ROW, w += ROOTS) {
    for (let x = start; x < end; x += blockBytes) {
      const x0Re = v128.load(x, RE);
      const x0Im = v128.load(x, IM);
      const x1Re = v128.load(x + step, RE);
      const x1Im = v128.load(x + step, IM);
      storeComplex(x, add(x0Re, x1Re), add(x0Im, x1Im));
      storeTimesRoot(x + step, sub(x0Re, x1Re), sub(x0Im, x1Im), w);
    }
  }
}

/** Roots exp(-i 2 pi j/block) for j < block/2, an entry every ROOTS bytes: the squares in the table of 2 block. */
@inline
function squaresOf(block: u32): usize {
  return rootsOf(2 * block) + 8;
}

/** Last stage: butterflies over neighbouring rows, all roots 1. */
function forwardLast(panel: usize, n: u32): void {
  const end = panel + <usize>n * ROW;
  for (let x = panel; x < end; x += 4 * ROW) forwardButterfly(x, ROW, 0, false);
}

/** Forward butterfly over four rows `step` bytes apart, in place; `turned` is false where all roots are 1. */
@inline
function forwardButterfly(x: usize, step: usize, w: usize, turned: bool): void {
  const x0Re = v128.load(x, RE);
  const x0Im = v128.load(x, IM);
  const x1Re = v128.load(x + step, RE);
  const x1Im = v128.load(x + step, IM);
  const x2Re = v128.load(x + 2 * step, RE);
  const x2Im = v128.load(x + 2 * step, IM);
  const x3Re = v128.load(x + 3 * step, RE);
  const x3Im = v128.load(x + 3 * step, IM);
  storeForward(
    x, step, w, turned,
    add(x0Re, x2Re), add(x0Im, x2Im), sub(x0Re, x2Re), sub(x0Im, x2Im),
    add(x1Re, x3Re), add(x1Im, x3Im), sub(x1Re, x3Re), sub(x1Im, x3Im),
  );
}

/** y0 = a + c, y1 = (b - i d) w, y2 = (a - c) w^2, y3 = (b + i d) w^3 */
@inline
function storeForward(
  y: usize, step: usize, w: usize, turned: bool,
  aRe: v128, aIm: v128, bRe: v128, bIm: v128, cRe: v128, cIm: v128, dRe: v128, dIm: v128,
): void {
  storeComplex(y, add(aRe, cRe), add(aIm, cIm));
  if (turned) {
    storeTimesRoot(y + step, add(bRe, dIm), sub(bIm, dRe), w);
    storeTimesRoot(y + 2 * step, sub(aRe, cRe), sub(aIm, cIm), w + 8);
    storeTimesRoot(y + 3 * step, sub(bRe, dIm), add(bIm, dRe), w + 16);
  } else {
    storeComplex(y + step, add(bRe, dIm), sub(bIm, dRe));
    storeComplex(y + 2 * step, sub(aRe, cRe), sub(aIm, cIm));
    storeComplex(y + 3 * step, sub(bRe, dIm), add(bIm, dRe));
  }
}

/** Write z w, the root w from memory. */
@inline
function storeTimesRoot(at: usize, re: v128, im: v128, w: usize): void {
  const wRe = splat(w);
  const wIm = splat(w + 4);
  storeComplex(at, productRe(re, im, wRe, wIm), productIm(re, im, wRe, wIm));
}

/** `forwardLast`, each butterfly's four rows of four columns written as four rows of four positions. */
function forwardLastToLines(panel: usize, n: u32, lines: usize, lineBytes: usize): void {
  const end = panel + <usize>n * ROW;
  for (let x = panel, line = lines; x < end; x += 4 * ROW, line += lineBytes) {
    const x0Re = v128.load(x, RE);
    const x1Re = v128.load(x, ROW + RE);
    const x2Re = v128.load(x, 2 * ROW + RE);
    const x3Re = v128.load(x, 3 * ROW + RE);
    const x0Im = v128.load(x, IM);
    const x1Im = v128.load(x, ROW + IM);
    const x2Im = v128.load(x, 2 * ROW + IM);
    const x3Im = v128.load(x, 3 * ROW + IM);
    const aRe = add(x0Re, x2Re);
    const bRe = sub(x0Re, x2Re);
    const cRe = add(x1Re, x3Re);
    const dRe = sub(x1Re, x3Re);
    const aIm = add(x0Im, x2Im);
    const bIm = sub(x0Im, x2Im);
    const cIm = add(x1Im, x3Im);
    const dIm = sub(x1Im, x3Im);
    storeTransposed(line + RE, add(aRe, cRe), add(bRe, dIm), sub(aRe, cRe), sub(bRe, dIm));
    storeTransposed(line + IM, add(aIm, cIm), sub(bIm, dRe), sub(aIm, cIm), add(bIm, dRe));
  }
}

/** Lane c of row r goes to lane r of row c. */
@inline
function storeTransposed(at: usize, r0: v128, r1: v128, r2: v128, r3: v128): void {
  const low01 = interleaveLow(r0, r1);
  const low23 = interleaveLow(r2, r3);
  v128.store(at, lowHalves(low01, low23));
  v128.store(at, highHalves(low01, low23), ROW);
  const high01 = interleaveHigh(r0, r1);
  const high23 = interleaveHigh(r2, r3);
  v128.store(at, lowHalves(high01, high23), 2 * ROW);
  v128.store(at, highHalves(high01, high23), 3 * ROW);
}

// Inverse stages: the forward ones undone in the opposite order

/** First stage: butterflies over neighbouring rows, all roots 1. */
function inverseFirst(panel: usize, n: u32): void {
  const end = panel + <usize>n * ROW;
  for (let y = panel; y < end; y += 4 * ROW) inverseButterfly(y, y, ROW, 0, false);
}

/** `inverseFirst`, each butterfly's rows gathered from the four rows of a line (the transpose of `storeTransposed`). */
function inverseFirstFromLines(lines: usize, lineBytes: usize, panel: usize, n: u32): void {
  const end = panel + <usize>n * ROW;
  for (let x = panel, line = lines; x < end; x += 4 * ROW, line += lineBytes) {
    const low01Re = interleaveLow(v128.load(line, RE), v128.load(line, ROW + RE));
    const low23Re = interleaveLow(v128.load(line, 2 * ROW + RE), v128.load(line, 3 * ROW + RE));
    const high01Re = interleaveHigh(v128.load(line, RE), v128.load(line, ROW + RE));
    const high23Re = interleaveHigh(v128.load(line, 2 * ROW + RE), v128.load(line, 3 * ROW + RE));
    const low01Im = interleaveLow(v128.load(line, IM), v128.load(line, ROW + IM));
    const low23Im = interleaveLow(v128.load(line, 2 * ROW + IM), v128.load(line, 3 * ROW + IM));
    const high01Im = interleaveHigh(v128.load(line, IM), v128.load(line, ROW + IM));
    const high23Im = interleaveHigh(v128.load(line, 2 * ROW + IM), v128.load(line, 3 * ROW + IM));
    storeInverse(
      x, ROW,
      lowHalves(low01Re, low23Re), lowHalves(low01Im, low23Im),
      highHalves(low01Re, low23Re), highHalves(low01Im, low23Im),
      lowHalves(high01Re, high23Re), lowHalves(high01Im, high23Im),
      highHalves(high01Re, high23Re), highHalves(high01Im, high23Im),
    );
  }
}

/** All stages between the first and the last. */
function inverseMiddle(panel: usize, n: u32): void {
  const pieceRows = rowsAtATime(n);
  const end = panel + <usize>n * ROW;
  for (let piece = panel; piece < end; piece += <usize>pieceRows * ROW) {
    for (let block: u32 = 4; block < n / 4; ) {
      const radix = radixOf(2 * block, n) == 2 ? 2 : 4;
      block *= radix;
      if (radix == 2) inverseHalves(piece, pieceRows, block);
      else inverseQuarters(piece, pieceRows, block);
    }
  }
}

/** One stage of radix 4 over blocks of `block` rows. */
function inverseQuarters(panel: usize, rows: u32, block: u32): void {
  const blockBytes = <usize>block * ROW;
  const step = blockBytes / 4;
  const end = panel + <usize>rows * ROW;
  for (let y = panel; y < end; y += blockBytes) inverseButterfly(y, y, step, 0, false);
  let w = rootsOf(block) + ROOTS;
  for (let start = panel + ROW; start < panel + step; start += ROW, w += ROOTS) {
    for (let y = start; y < end; y += blockBytes) inverseButterfly(y, y, step, w, true);
  }
}

/** One stage of radix 2 over blocks of `block` rows: x0 = y0 + y1 conj w, x1 = y0 - y1 conj w. */
function inverseHalves(panel: usize, rows: u32, block: u32): void {
  const blockBytes = <usize>block * ROW;
  const step = blockBytes / 2;
  const end = panel + <usize>rows * ROW;
  let w = squaresOf(block);
  for (let start = panel; start < panel + step; start += ROW, w += ROOTS) {
    for (let y = start; y < end; y += blockBytes) {
      const t0Re = v128.load(y, RE);
      const t0Im = v128.load(y, IM);
      const y1Re = v128.load(y + step, RE);
      const y1Im = v128.load(y + step, IM);
      const t1Re = conjProductRe(y1Re, y1Im, splat(w), splat(w + 4));
      const t1Im = conjProductIm(y1Re, y1Im, splat(w), splat(w + 4));
      storeComplex(y, add(t0Re, t1Re), add(t0Im, t1Im));
      storeComplex(y + step, sub(t0Re, t1Re), sub(t0Im, t1Im));
    }
  }
}

/** Last stage: butterflies over rows j, j + n/4, j + n/2, j + 3n/4. */
function inverseLast(source: usize, target: usize, n: u32): void {
  const step = (<usize>n * ROW) / 4;
  let w = rootsOf(n);
  for (let at: usize = 0; at < step; at += ROW, w += ROOTS) {
    inverseButterfly(source + at, target + at, step, w, true);
  }
}

/** Inverse butterfly over four rows `step` bytes apart; `turned` is false where all roots are 1. */
@inline
function inverseButterfly(y: usize, x: usize, step: usize, w: usize, turned: bool): void {
  const y1Re = v128.load(y + step, RE);
  const y1Im = v128.load(y + step, IM);
  const y2Re = v128.load(y + 2 * step, RE);
  const y2Im = v128.load(y + 2 * step, IM);
  const y3Re = v128.load(y + 3 * step, RE);
  const y3Im = v128.load(y + 3 * step, IM);
  storeInverse(
    x, step,
    v128.load(y, RE), v128.load(y, IM),
    turned ? conjProductRe(y1Re, y1Im, splat(w), splat(w + 4)) : y1Re,
    turned ? conjProductIm(y1Re, y1Im, splat(w), splat(w + 4)) : y1Im,
    turned ? conjProductRe(y2Re, y2Im, splat(w + 8), splat(w + 12)) : y2Re,
    turned ? conjProductIm(y2Re, y2Im, splat(w + 8), splat(w + 12)) : y2Im,
    turned ? conjProductRe(y3Re, y3Im, splat(w + 16), splat(w + 20)) : y3Re,
    turned ? conjProductIm(y3Re, y3Im, splat(w + 16), splat(w + 20)) : y3Im,
  );
}

/** x0 = a + c, x1 = b + i d, x2 = a - c, x3 = b - i d with a = t0 + t2, b = t0 - t2, c = t1 + t3, d = t1 - t3 */
@inline
function storeInverse(
  x: usize, step: usize,
  t0Re: v128, t0Im: v128, t1Re: v128, t1Im: v128, t2Re: v128, t2Im: v128, t3Re: v128, t3Im: v128,
): void {
  const aRe = add(t0Re, t2Re);
  const aIm = add(t0Im, t2Im);
  const bRe = sub(t0Re, t2Re);
  const bIm = sub(t0Im, t2Im);
  const cRe = add(t1Re, t3Re);
  const cIm = add(t1Im, t3Im);
  const dRe = sub(t1Re, t3Re);
  const dIm = sub(t1Im, t3Im);
  storeComplex(x, add(aRe, cRe), add(aIm, cIm));
  storeComplex(x + step, sub(bRe, dIm), add(bIm, dRe));
  storeComplex(x + 2 * step, sub(aRe, cRe), sub(aIm, cIm));
  storeComplex(x + 3 * step, add(bRe, dIm), sub(bIm, dRe));
}
