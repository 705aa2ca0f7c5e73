/** Integrals of exp(i phase) over an interval on which the phase is quadratic: Fresnel's integral, ready for
 * hot loops. */

/** out = integral over t from -1 to 1 of exp(i (psi + alpha t^2 + beta t)) dt, to about 1e-9.
 *
 * With F(x) = integral from x to infinity of exp(i t^2) dt = exp(i x^2) h(x) for x >= 0, completing the
 * square gives
 *
 *     [exp(i alpha - i beta) h(l - r) - exp(i alpha + i beta) h(l + r)] / r,
 *     r = sqrt(alpha), l = beta / (2 r), where l >= r;
 *
 * where l < r the stationary point lies inside and adds sqrt(pi / alpha) exp(i pi/4 - i l^2), and the first
 * term changes its sign (all this for psi = 0, alpha >= 0 and beta >= 0). h is smooth, so nothing cancels but
 * where alpha is nearly 0; there the first two terms of its power series take over.
 *
 * @param out two numbers, real and imaginary part
 * Source: M. Abramowitz and I. A. Stegun, Handbook of Mathematical Functions, 7.3 (auxiliary functions; cited
 * from memory)
 */
export function quadraticPhaseIntegral(psi: number, alpha: number, beta: number, out: Float64Array): void {
  // the conjugate integral serves alpha < 0; beta's sign is free because t runs both ways
  const isMirrored = alpha < 0;
  const a = Math.abs(alpha);
  const p = isMirrored ? -psi : psi;
  const b = Math.abs(beta);
  if (a < SMALL_ALPHA) {
    nearlyLinearPhase(p, a, b, out);
  } else {
    const r = Math.sqrt(a);
    const l = (0.5 * b) / r;
    const inside = l < r;
    fresnelTail(l + r);
    const farC = Math.cos(p + a + b);
    const farS = Math.sin(p + a + b);
    let re = farS * tail[1] - farC * tail[0];
    let im = -farS * tail[0] - farC * tail[1];
    if (b === 0) {
      re *= 2;
      im *= 2;
    } else {
      fresnelTail(inside ? r - l : l - r);
      const sign = inside ? -1 : 1;
      const nearC = sign * Math.cos(p + a - b);
      const nearS = sign * Math.sin(p + a - b);
      re += nearC * tail[0] - nearS * tail[1];
      im += nearS * tail[0] + nearC * tail[1];
    }
    if (inside) {
      const stationary = p - l * l + Math.PI / 4;
      re += SQRT_PI * Math.cos(stationary);
      im += SQRT_PI * Math.sin(stationary);
    }
    out[0] = re / r;
    out[1] = im / r;
  }
  if (isMirrored) out[1] = -out[1];
}

const SQRT_PI = Math.sqrt(Math.PI);

/** Below it alpha^2/2 times the fourth moment, the first term left out, is under 2e-9. */
const SMALL_ALPHA = 1e-4;

/** exp(i p) (M0 + i a M2), M_k the moments of t^k cos(b t) over [-1, 1]. */
function nearlyLinearPhase(p: number, a: number, b: number, out: Float64Array): void {
  const b2 = b * b;
  const moment0 = b === 0 ? 2 : (2 * Math.sin(b)) / b;
  const moment2 =
    b < 1
      ? 2 / 3 - b2 * (1 / 5 - b2 * (1 / 84 - b2 / 3240)) // the closed form loses digits here
      : moment0 + (4 * Math.cos(b) - 2 * moment0) / b2;
  const c = Math.cos(p);
  const s = Math.sin(p);
  out[0] = c * moment0 - s * a * moment2;
  out[1] = s * moment0 + c * a * moment2;
}

/** h(x) as the last call of `fresnelTail` left it, real and imaginary part: typed, so that the hottest
 * function allocates nothing. */
const tail = new Float64Array(2);

/** h(x) = exp(-i x^2) * integral from x to infinity of exp(i t^2) dt, x >= 0, to about 1e-11. */
function fresnelTail(x: number): void {
  if (x >= TABLE_END) {
    // i/(2x) (1 + z + 3 z^2 + 15 z^3 ...), z = 1/(2 i x^2), from parts taken again and again
    const y = 0.5 / (x * x);
    const y2 = y * y;
    const scale = 0.5 / x;
    tail[0] = scale * y * (1 - y2 * (15 - y2 * 945));
    tail[1] = scale * (1 - y2 * (3 - y2 * (105 - y2 * 10395)));
    return;
  }
  const cell = Math.floor(x * CELLS_PER_UNIT);
  const d = x - (cell + 0.5) / CELLS_PER_UNIT;
  let at = 2 * (cell * (ORDER + 1) + ORDER);
  let re = TABLE[at];
  let im = TABLE[at + 1];
  for (let k = ORDER; k > 0; k--) {
    at -= 2;
    re = TABLE[at] + d * re;
    im = TABLE[at + 1] + d * im;
  }
  tail[0] = re;
  tail[1] = im;
}

/** The Taylor series about the middle of a cell leaves 1e-12 at its ends. */
const ORDER = 7;
const CELLS_PER_UNIT = 16;
/** Here the first term left out of the asymptotic series, 135135 / (2 x^2)^7, is 2e-10 of h. */
const TABLE_END = 8;
const TABLE = taylorTable();

/** Taylor coefficients of h about the middle of each cell, from h(0) = sqrt(pi/8) (1 + i) and h' = -1 - 2 i x
 * h, which gives all higher derivatives: (k + 1) c[k+1] = -2 i (x c[k] + c[k-1]). A series of order 14
 * carries h from one middle to the next. */
function taylorTable(): Float64Array {
  const cells = TABLE_END * CELLS_PER_UNIT;
  const table = new Float64Array(2 * cells * (ORDER + 1));
  const order = 14;
  const re = new Float64Array(order + 1);
  const im = new Float64Array(order + 1);
  let hRe = Math.sqrt(Math.PI / 8);
  let hIm = hRe;
  for (let cell = -1; cell < cells; cell++) {
    // the first turn goes from 0 to the middle of the first cell
    const x = Math.max(0, (cell + 0.5) / CELLS_PER_UNIT);
    re[0] = hRe;
    im[0] = hIm;
    re[1] = -1 + 2 * x * hIm;
    im[1] = -2 * x * hRe;
    for (let k = 1; k < order; k++) {
      re[k + 1] = (2 * (x * im[k] + im[k - 1])) / (k + 1);
      im[k + 1] = (-2 * (x * re[k] + re[k - 1])) / (k + 1);
    }
    if (cell >= 0) {
      for (let k = 0, at = 2 * cell * (ORDER + 1); k <= ORDER; k++, at += 2) {
        table[at] = re[k];
        table[at + 1] = im[k];
      }
    }
    const step = (cell < 0 ? 0.5 : 1) / CELLS_PER_UNIT;
    hRe = 0;
    hIm = 0;
    for (let k = order; k >= 0; k--) {
      hRe = hRe * step + re[k];
      hIm = hIm * step + im[k];
    }
  }
  return table;
}
