/** The Strehl ratio of a band: how high its PSF stands against the one without aberration. */
import { gaussLegendre, nodesForPhase } from '../numeric/gauss-legendre.js';
import { findCoarsePeaks, type SlopeRange, slopeRange } from './coarse-peaks.js';
import type { WavefrontLine } from './psf.js';

/** The highest point of a band's PSF. */
export interface PsfPeak {
  /** Its height over the one without aberration, defocus or colour, at the same stop and wavelengths. */
  strehl: number;
  /** Where it lies, from the distorted image point, in um: along the radius, + outward, and across it (either
   * sign where not 0). */
  alongUm: number;
  acrossUm: number;
}

/** The true peak of the PSF of a band, wherever it lies, to 1e-5.
 *
 * A line of wavelength lambda with unit energy has the height pi / (4 lambda^2 N^2) |a|^2 at an image point
 * (x, y), with
 *
 *     a = (1/pi) integral over the unit pupil of exp(i 2 pi [W + (x m + y s) / (2 lambda N)]),
 *
 * so its share in the band counts with weight / lambda^2. A transform of the sampled pupil finds all peaks
 * that may be the highest; each is then climbed with a, its gradient and its second derivatives from a
 * Gauss-Legendre rule over the pupil.
 * Source: J. W. Goodman, Introduction to Fourier Optics, 6.2 to 6.4; Born and Wolf, Principles of Optics, 9.1
 * (both cited from memory)
 */
export function psfPeak(lines: readonly WavefrontLine[], fNumber: number): PsfPeak {
  const slopes = lines.map(({ wavefront }) => slopeRange(wavefront));
  const starts = findCoarsePeaks(lines, slopes, fNumber);
  const pupils = lines.map((line, i) => new PupilNodes(line, fNumber, slopes[i]));
  let best: PsfPeak = { strehl: 0, alongUm: 0, acrossUm: 0 };
  for (const [xUm, yUm] of starts) {
    const peak = climb(pupils, xUm, yUm);
    if (peak.strehl > best.strehl + 1e-9) best = peak; // of equal twins the first, nearer to the axis
  }
  return best;
}

/** Strehl ratio at the true peak of the PSF. */
export function strehlRatio(lines: readonly WavefrontLine[], fNumber: number): number {
  return psfPeak(lines, fNumber).strehl;
}

/** Height of the PSF at the reference point, where a ray without aberration lands, over the height without
 * aberration. At most the Strehl ratio, and much less where tilt or coma moves the peak. */
export function strehlAtReference(lines: readonly WavefrontLine[], fNumber: number): number {
  const pupils = lines.map((line) => {
    const slope = slopeRange(line.wavefront);
    slope.alongMax = Math.max(-slope.alongMin, slope.alongMax); // no tilt is taken out
    slope.alongMin = -slope.alongMax;
    return new PupilNodes(line, fNumber, slope);
  });
  return heightAt(pupils, 0, 0, new Float64Array(6));
}

/** The pupil function of one line at the nodes of a rule over the half s >= 0 of the pupil (W is even). */
class PupilNodes {
  /** Share of the line in the height without aberration, not yet divided by the sum over the lines. */
  readonly share: number;
  /** What turns um on the sensor into radians of phase at the rim: pi / (lambda N). */
  readonly radPerUm: number;
  readonly #m: Float64Array;
  readonly #s: Float64Array;
  readonly #re: Float64Array;
  readonly #im: Float64Array;
  readonly #acrossCount: number;
  readonly #moments = new Float64Array(12);

  constructor({ nm, weight, wavefront }: WavefrontLine, fNumber: number, slope: SlopeRange) {
    const lambdaUm = nm / 1000;
    this.share = weight / (lambdaUm * lambdaUm);
    this.radPerUm = Math.PI / (lambdaUm * fNumber);
    // m = -cos phi, s = t sin phi: the rim is smooth in phi and t. At a peak, the tilt of which is taken out,
    // about half of the range of slopes is left on either side; phi moves along m and, at the rim, along s
    const slopeAlong = 0.5 * (slope.alongMax - slope.alongMin);
    const slopeAny = Math.sqrt(slopeAlong * slopeAlong + slope.acrossMax * slope.acrossMax);
    const along = gaussLegendre(nodesForPhase(Math.PI * Math.PI * slopeAny));
    const across = gaussLegendre(nodesForPhase(2 * Math.PI * slope.acrossMax));
    const half = across.nodes.length / 2;
    const rows = along.nodes.length;
    this.#acrossCount = half;
    this.#m = new Float64Array(rows);
    this.#s = new Float64Array(rows * half);
    this.#re = new Float64Array(rows * half);
    this.#im = new Float64Array(rows * half);
    const { w40, w31, w22, w20, w11 } = wavefront;
    for (let i = 0; i < rows; i++) {
      const phi = 0.5 * Math.PI * (1 + along.nodes[i]);
      const m = -Math.cos(phi);
      const chord = Math.sin(phi);
      this.#m[i] = m;
      for (let j = 0; j < half; j++) {
        const s = chord * across.nodes[half + j];
        const rho2 = m * m + s * s;
        const phase = 2 * Math.PI * (rho2 * (w40 * rho2 + w31 * m + w20) + m * (w22 * m + w11));
        // dm ds = sin^2 phi dphi dt, both halves, over pi
        const weightHere = along.weights[i] * across.weights[half + j] * chord * chord;
        this.#s[i * half + j] = s;
        this.#re[i * half + j] = weightHere * Math.cos(phase);
        this.#im[i * half + j] = weightHere * Math.sin(phase);
      }
    }
  }

  /** Add this line's height at an image point, with its derivatives, to out: height, d/dx, d/dy, d2/dx2,
   * d2/dxdy, d2/dy2 (per um). */
  addHeight(xUm: number, yUm: number, out: Float64Array): void {
    this.#sum(xUm * this.radPerUm, yUm * this.radPerUm);
    const a = this.#moments; // a of P, then of m P, s P, m^2 P, m s P and s^2 P, real and imaginary parts
    const { share, radPerUm } = this;
    // da/dx = i k <m>, d2a/dx2 = -k^2 <m m>, and so on
    const first = 2 * share * radPerUm;
    const second = 2 * share * radPerUm * radPerUm;
    out[0] += share * (a[0] * a[0] + a[1] * a[1]);
    out[1] += first * (a[1] * a[2] - a[0] * a[3]);
    out[2] += first * (a[1] * a[4] - a[0] * a[5]);
    out[3] += second * (a[2] * a[2] + a[3] * a[3] - a[0] * a[6] - a[1] * a[7]);
    out[4] += second * (a[2] * a[4] + a[3] * a[5] - a[0] * a[8] - a[1] * a[9]);
    out[5] += second * (a[4] * a[4] + a[5] * a[5] - a[0] * a[10] - a[1] * a[11]);
  }

  /** Moments 1, m, s, m^2, m s, s^2 of P exp(i (u m + v s)) over the pupil; the sums over +s and -s leave
   * cos(v s) or i sin(v s). */
  #sum(u: number, v: number): void {
    const moments = this.#moments.fill(0);
    const half = this.#acrossCount;
    for (let i = 0, at = 0; i < this.#m.length; i++) {
      let re0 = 0;
      let im0 = 0;
      let re1 = 0;
      let im1 = 0;
      let re2 = 0;
      let im2 = 0;
      for (let j = 0; j < half; j++, at++) {
        const s = this.#s[at];
        const re = this.#re[at];
        const im = this.#im[at];
        const c = v === 0 ? 1 : Math.cos(v * s);
        const d = v === 0 ? 0 : s * Math.sin(v * s);
        const s2c = s * s * c;
        re0 += c * re;
        im0 += c * im;
        re1 -= d * im; // i sin times P
        im1 += d * re;
        re2 += s2c * re;
        im2 += s2c * im;
      }
      const m = this.#m[i];
      const c = Math.cos(u * m);
      const d = Math.sin(u * m);
      const aRe = c * re0 - d * im0;
      const aIm = d * re0 + c * im0;
      const sRe = c * re1 - d * im1;
      const sIm = d * re1 + c * im1;
      moments[0] += aRe;
      moments[1] += aIm;
      moments[2] += m * aRe;
      moments[3] += m * aIm;
      moments[4] += sRe;
      moments[5] += sIm;
      moments[6] += m * m * aRe;
      moments[7] += m * m * aIm;
      moments[8] += m * sRe;
      moments[9] += m * sIm;
      moments[10] += c * re2 - d * im2;
      moments[11] += d * re2 + c * im2;
    }
  }
}

/** Height of the band's PSF over the one without aberration; `out` takes it and its derivatives. */
function heightAt(pupils: readonly PupilNodes[], xUm: number, yUm: number, out: Float64Array): number {
  out.fill(0);
  let total = 0;
  for (const pupil of pupils) {
    pupil.addHeight(xUm, yUm, out);
    total += pupil.share;
  }
  for (let i = 0; i < 6; i++) out[i] /= total;
  return out[0];
}

/** Climb from a point on the slope of a peak to its top.
 *
 * Newton's method with the curvatures taken as if all bent down (each step goes uphill, also off a saddle or
 * along the crest of a ring), inside a reach that shrinks after a step too far and grows again after a good
 * one.
 * Source: J. Nocedal and S. J. Wright, Numerical Optimization, 3.4 and 4.1 (cited from memory)
 */
function climb(pupils: readonly PupilNodes[], startX: number, startY: number): PsfPeak {
  // a fifth of lambda N of the shortest line: well inside a peak
  const longestStep = 0.2 * Math.min(...pupils.map(({ radPerUm }) => Math.PI / radPerUm));
  const h = new Float64Array(6);
  const step = new Float64Array(2);
  let best = { strehl: heightAt(pupils, startX, startY, h), alongUm: startX, acrossUm: startY };
  let reach = longestStep;
  uphill(h, best.acrossUm === 0, reach, step);
  for (let turn = 0; turn < 60; turn++) {
    const gain = h[1] * step[0] + h[2] * step[1] + 0.5 * Math.max(0, h[5]) * step[1] * step[1];
    if (gain < 1e-9) break;
    const x = best.alongUm + step[0];
    const y = best.acrossUm + step[1];
    const strehl = heightAt(pupils, x, y, h);
    if (strehl > best.strehl) {
      best = { strehl, alongUm: x, acrossUm: y };
      reach = Math.min(longestStep, 2 * reach);
    } else {
      reach = 0.3 * Math.sqrt(step[0] * step[0] + step[1] * step[1]);
      heightAt(pupils, best.alongUm, best.acrossUm, h);
    }
    uphill(h, best.acrossUm === 0, reach, step);
  }
  return best;
}

/** The step uphill, not longer than `reach`, from a height and its derivatives. */
function uphill(h: Float64Array, isOnRadius: boolean, reach: number, step: Float64Array): void {
  const [, gx, gy, hxx, hxy, hyy] = h;
  if (isOnRadius) {
    // even across the radius: no slope across, but twin peaks may stand on either side
    step[0] = gx / Math.max(Math.abs(hxx), Number.MIN_VALUE);
    step[1] = hyy > 0 ? reach : 0;
  } else {
    const mean = 0.5 * (hxx + hyy);
    const spread = Math.hypot(0.5 * (hxx - hyy), hxy);
    const angle = 0.5 * Math.atan2(hxy, 0.5 * (hxx - hyy)); // of the direction that bends by mean + spread
    const c = Math.cos(angle);
    const s = Math.sin(angle);
    // along the crest of a ring nothing bends
    const least = 1e-6 * (Math.abs(mean) + spread) + Number.MIN_VALUE;
    const first = (c * gx + s * gy) / Math.max(Math.abs(mean + spread), least);
    const second = (c * gy - s * gx) / Math.max(Math.abs(mean - spread), least);
    step[0] = c * first - s * second;
    step[1] = s * first + c * second;
  }
  const length = Math.hypot(step[0], step[1]);
  if (length <= reach) return;
  step[0] *= reach / length;
  step[1] *= reach / length;
}
