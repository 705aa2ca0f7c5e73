/** The optical transfer function of a field point: how much contrast the lens and the camera keep at a
 * spatial frequency. */
import { type Accuracy, gaussLegendre, nodesForPhase } from '../numeric/gauss-legendre.js';
import { quadraticPhaseIntegral } from '../numeric/quadratic-phase.js';
import type { WavefrontLine } from './psf.js';
import { type Band, type Camera, pixelPitchMm, type Rig } from './rig.js';
import { type LocalWavefront, wavefrontAt } from './wavefront.js';

/** Direction of the modulation: along the radius (`tangential`), across it (`sagittal`), or at an angle in
 * degrees from the outward radius, turning toward +s as the azimuth turns from +x to +y. */
export type Direction = 'tangential' | 'sagittal' | number;

/** The complex OTF of one wavelength, H(0) = 1, for any strength of aberration: to 2e-7 at worst, mostly to
 * 1e-9.
 *
 * The autocorrelation of the pupil, with p along the modulation, q across it and nu = f lambda N (1 at the
 * cut-off, beyond which H is 0):
 *
 *     H = (1/pi) integral of exp(i 2 pi [W(p + nu, q) - W(p - nu, q)]) dp dq
 *
 * over the lens-shaped overlap (|p| + nu)^2 + q^2 < 1. For the third-order terms the difference is quadratic
 * in q, in every direction: the terms of W that hold p q^3 are missing. So the integral over q is Fresnel's,
 * in closed form, and the one over p is left to a Gauss-Legendre rule in phi, |p| = cos phi - nu, q = t sin
 * phi, in which the rim of the overlap is smooth.
 *
 * The phase is that of the transform with exp(-i 2 pi f x) of a PSF whose centroid lies at the mean of eps =
 * -2 N lambda grad W: a tilt w11 moves the image by -2 N lambda w11 along the radius and gives H = exp(+i 4
 * pi nu w11) times the MTF, tangentially.
 *
 * @param nu 0 or more
 * @param out two numbers, real and imaginary part
 * Source: H. H. Hopkins, Proc. R. Soc. A 231 (1955) 91; J. W. Goodman, Introduction to Fourier Optics, 6.4
 * (both cited from memory)
 */
export function otf(
  wavefront: LocalWavefront,
  nu: number,
  direction: Direction,
  out: Float64Array,
  accuracy: Accuracy = 'full',
): void {
  out[0] = 0;
  out[1] = 0;
  if (nu >= 1) return;
  const { w40, w31, w22, w20, w11 } = wavefront;
  const c = cosineOf(direction);
  const s = sineOf(direction);
  // phase = constant + linear p + square p^2 + cubic p^3 + (bend + twist p) q^2 + (skew + shear p) q, in
  // radians
  const k = 2 * Math.PI * nu;
  const constant = 2 * k * c * (w31 * nu * nu + w11);
  const linear = k * (8 * w40 * nu * nu + 4 * (w22 * c * c + w20));
  const square = 6 * k * w31 * c;
  const cubic = 8 * k * w40;
  const bend = 2 * k * w31 * c;
  const twist = cubic;
  const skew = -4 * k * w22 * c * s;
  const shear = -4 * k * w31 * s;

  const widest = Math.acos(nu);
  const steepest = steepestPhase(nu, linear, square, cubic, bend, skew, shear);
  const { nodes, weights } = gaussLegendre(nodesForPhase(0.5 * steepest * widest, accuracy));
  // without these three the halves p < 0 and p > 0 are conjugate
  const isOdd = constant === 0 && square === 0 && bend === 0;
  const inner = innerIntegral;
  let re = 0;
  let im = 0;
  for (let i = 0; i < nodes.length; i++) {
    const phi = 0.5 * widest * (1 + nodes[i]);
    const p = Math.cos(phi) - nu;
    const chord = Math.sin(phi);
    const weight = weights[i] * chord * chord;
    const chord2 = chord * chord;
    const even = constant + square * p * p;
    const odd = p * (linear + cubic * p * p);
    quadraticPhaseIntegral(even + odd, (bend + twist * p) * chord2, (skew + shear * p) * chord, inner);
    re += weight * inner[0];
    im += weight * inner[1];
    if (isOdd) continue;
    quadraticPhaseIntegral(even - odd, (bend - twist * p) * chord2, (skew - shear * p) * chord, inner);
    re += weight * inner[0];
    im += weight * inner[1];
  }
  const scale = (0.5 * widest) / Math.PI;
  out[0] = isOdd ? 2 * scale * re : scale * re;
  out[1] = isOdd ? 0 : scale * im;
}

const innerIntegral = new Float64Array(2);

function cosineOf(direction: Direction): number {
  if (direction === 'tangential') return 1;
  return direction === 'sagittal' ? 0 : Math.cos((direction * Math.PI) / 180);
}

function sineOf(direction: Direction): number {
  if (direction === 'tangential') return 0;
  return direction === 'sagittal' ? 1 : Math.sin((direction * Math.PI) / 180);
}

/** The steepest course of the phase with phi, in radians per radian, looked up on the middle line and the rim
 * of the overlap. */
function steepestPhase(
  nu: number,
  linear: number,
  square: number,
  cubic: number,
  bend: number,
  skew: number,
  shear: number,
): number {
  const widest = Math.acos(nu);
  let steepest = 0;
  for (let step = 1; step <= 4; step++) {
    const phi = 0.25 * step * widest;
    const chord = Math.sin(phi);
    const along = Math.cos(phi); // |p| + nu on the rim
    for (let side = -1; side <= 1; side += 2) {
      const p = side * (along - nu);
      const middle = linear + p * (2 * square + 3 * cubic * p);
      const rim = middle + cubic * chord * chord - 2 * side * along * (bend + cubic * p);
      const sheared = Math.abs(shear) * chord * chord + Math.abs((skew + shear * p) * along);
      steepest = Math.max(steepest, chord * Math.abs(middle), chord * Math.abs(rim) + sheared);
    }
  }
  return steepest;
}

/** The lines of a band with the wavefronts that a field point gives them. */
export function bandLines(rig: Rig, xMm: number, yMm: number, band: Band): WavefrontLine[] {
  return band.lines.map(({ nm, weight }) => ({
    nm,
    weight,
    wavefront: wavefrontAt(rig, xMm, yMm, nm, band),
  }));
}

/** The complex OTF of a band, the weighted sum of its lines' OTFs: their tilts against each other are lateral
 * colour and cost contrast.
 * @param lpPerMm frequency on the sensor, 0 or more
 * @param out two numbers, real and imaginary part
 */
export function bandOtf(
  lines: readonly WavefrontLine[],
  fNumber: number,
  lpPerMm: number,
  direction: Direction,
  out: Float64Array,
  accuracy: Accuracy = 'full',
): void {
  let re = 0;
  let im = 0;
  for (const { nm, weight, wavefront } of lines) {
    otf(wavefront, normalisedFrequency(lpPerMm, nm, fNumber), direction, out, accuracy);
    re += weight * out[0];
    im += weight * out[1];
  }
  out[0] = re;
  out[1] = im;
}

/** MTF of the lens for a band: the modulus of its OTF. */
export function bandMtf(
  lines: readonly WavefrontLine[],
  fNumber: number,
  lpPerMm: number,
  direction: Direction,
  accuracy: Accuracy = 'full',
): number {
  bandOtf(lines, fNumber, lpPerMm, direction, bandSum, accuracy);
  return Math.sqrt(bandSum[0] * bandSum[0] + bandSum[1] * bandSum[1]);
}

const bandSum = new Float64Array(2);

/** nu = f lambda N: 1 at the cut-off. */
export function normalisedFrequency(lpPerMm: number, nm: number, fNumber: number): number {
  return lpPerMm * nm * 1e-6 * fNumber;
}

/** MTF of a lens without aberrations: (2/pi) (acos nu - nu sqrt(1 - nu^2)), 0 from the cut-off on.
 * Source: J. W. Goodman, Introduction to Fourier Optics, 6.3 (cited from memory). */
export function diffractionMtf(nu: number): number {
  return nu >= 1 ? 0 : (2 / Math.PI) * (Math.acos(nu) - nu * Math.sqrt(1 - nu * nu));
}

/** Diffraction-limited MTF of a band: the weighted mean over its lines. */
export function bandDiffractionMtf(band: Band, fNumber: number, lpPerMm: number): number {
  return band.lines.reduce(
    (sum, { nm, weight }) => sum + weight * diffractionMtf(normalisedFrequency(lpPerMm, nm, fNumber)),
    0,
  );
}

/** MTF of a pixel's light-sensitive square: |sinc(b f)| for a modulation along its rows or columns, b = fill
 * factor x pitch.
 * @param angleDeg angle of the modulation against the rows: |sinc(b f cos) sinc(b f sin)| */
export function pixelMtf(camera: Camera, lpPerMm: number, angleDeg = 0): number {
  const cyclesPerBox = camera.fillFactor * pixelPitchMm(camera) * lpPerMm;
  const angle = (angleDeg * Math.PI) / 180;
  const along = angleDeg === 0 ? cyclesPerBox : cyclesPerBox * Math.cos(angle);
  const across = angleDeg === 0 ? 0 : cyclesPerBox * Math.sin(angle);
  return Math.abs(sinc(along) * sinc(across));
}

/** sin(pi x) / (pi x). */
function sinc(x: number): number {
  return x === 0 ? 1 : Math.sin(Math.PI * x) / (Math.PI * x);
}
