/** Best focus, and the frequency that keeps half of the contrast. */
import { bracketedRoot } from '../numeric/bracketed-root.js';
import { smoothMaximum } from '../numeric/smooth-maximum.js';
import { bandMtf, type Direction, normalisedFrequency, pixelMtf } from './otf.js';
import type { WavefrontLine } from './psf.js';
import type { Camera } from './rig.js';
import { defocusWaves, type LocalWavefront } from './wavefront.js';

/** Directions in which focus is looked for. */
type FieldDirection = Exclude<Direction, number>;

/** The sensor shift, from where the sensor stands, at which the MTF of a band is highest at one frequency, in
 * um, + away from the lens.
 *
 * Contrast has many maxima over focus once aberrations are strong. So the range between the foci of every
 * part of the pupil and every line is scanned in steps of a quarter of the depth of focus, and each peak of
 * the scan that may be the highest is refined, to far better than 0.01 um. The pixel's MTF does not depend on
 * focus, so the answer is the same for the lens and for lens and camera. Of two equal maxima (a strong
 * spherical aberration has such twins) the one nearer to the sensor is given.
 *
 * @returns null where no focus brings any contrast, at and above the cut-off
 */
export function bestFocusUm(
  lines: readonly WavefrontLine[],
  fNumber: number,
  lpPerMm: number,
  direction: FieldDirection,
): number | null {
  const seen = lines.filter(({ nm }) => normalisedFrequency(lpPerMm, nm, fNumber) < 1);
  if (seen.length === 0) return null;
  const { fromUm, toUm, depthUm } = focusRange(seen, fNumber, lpPerMm, direction);
  const steps = Math.ceil((toUm - fromUm) / (0.25 * depthUm));
  const stepUm = (toUm - fromUm) / steps;

  const shifted = new ShiftedLines(seen, fNumber);
  const mtfAt = (shiftUm: number) => bandMtf(shifted.at(shiftUm), fNumber, lpPerMm, direction);
  const scan = new Float64Array(steps + 1);
  let highest = 0;
  for (let i = 0; i <= steps; i++) {
    scan[i] = bandMtf(shifted.at(fromUm + i * stepUm), fNumber, lpPerMm, direction, 'rough');
    highest = Math.max(highest, scan[i]);
  }
  let best = { shiftUm: 0, mtf: Number.NEGATIVE_INFINITY };
  for (let i = 0; i <= steps; i++) {
    const isPeak = scan[i] >= (scan[i - 1] ?? 0) && scan[i] >= (scan[i + 1] ?? 0);
    if (!isPeak || scan[i] < LEAST_SHARE * highest) continue;
    const middleUm = fromUm + i * stepUm;
    const squared = (shiftUm: number) => mtfAt(shiftUm) ** 2; // smooth even where the MTF touches 0
    const shiftUm = smoothMaximum(squared, middleUm - stepUm, middleUm + stepUm);
    const mtf = mtfAt(shiftUm);
    const isTwin = Math.abs(mtf - best.mtf) < 1e-7;
    if (isTwin ? Math.abs(shiftUm) < Math.abs(best.shiftUm) - 1e-6 * depthUm : mtf > best.mtf)
      best = { shiftUm, mtf };
  }
  return best.shiftUm;
}

/** How high a sample next to the highest peak must stand at least. Along focus the MTF has no spectrum above
 * some 4 radians a depth of focus, so (Bernstein's inequality) it cannot bend down by more than 16/2 (1/8)^2
 * of its height over half a step; the rest is for the scan's rough integrals. */
const LEAST_SHARE = 0.86;

/** Where to look: from the first to the last focus of any part of the pupil, and half a depth of focus
 * beyond.
 *
 * The depth is where a defocused OTF has its first zero, close to W020 nu (1 - nu) = 0.16 (0.16 to 0.161 from
 * the exact zeros at 0.75, 1 and 2 waves).
 */
function focusRange(
  lines: readonly WavefrontLine[],
  fNumber: number,
  lpPerMm: number,
  direction: FieldDirection,
): { fromUm: number; toUm: number; depthUm: number } {
  let fromUm = Number.POSITIVE_INFINITY;
  let toUm = Number.NEGATIVE_INFINITY;
  let depthUm = Number.POSITIVE_INFINITY;
  for (const { nm, wavefront } of lines) {
    const { w40, w31, w22, w20 } = wavefront;
    const umPerWave = 1 / defocusWaves(1, fNumber, nm / 1000);
    const nu = normalisedFrequency(lpPerMm, nm, fNumber);
    const depthWaves = 0.16 / (nu * (1 - nu));
    const isTangential = direction === 'tangential';
    const paraxial = -w20 - (isTangential ? w22 : 0);
    const marginal = paraxial - 2 * w40;
    // coma puts either half of the pupil out of focus, in opposite senses
    const coma = (isTangential ? 3 : 1) * Math.abs(w31);
    fromUm = Math.min(fromUm, umPerWave * (Math.min(paraxial, marginal) - coma - 0.5 * depthWaves));
    toUm = Math.max(toUm, umPerWave * (Math.max(paraxial, marginal) + coma + 0.5 * depthWaves));
    depthUm = Math.min(depthUm, umPerWave * depthWaves);
  }
  return { fromUm, toUm, depthUm };
}

/** The lines of a band with the sensor moved, in one set of objects used again and again. */
class ShiftedLines {
  readonly #lines: { nm: number; weight: number; wavefront: LocalWavefront }[];
  readonly #w20: number[];
  readonly #wavesPerUm: number[];

  constructor(lines: readonly WavefrontLine[], fNumber: number) {
    this.#lines = lines.map(({ nm, weight, wavefront }) => {
      // spelt out, so that these objects are of the same make as all others: the engine's compiled code takes
      // one make
      const { w40, w31, w22, w20, w11, cos, sin } = wavefront;
      return { nm, weight, wavefront: { w40, w31, w22, w20, w11, cos, sin } };
    });
    this.#w20 = lines.map(({ wavefront }) => wavefront.w20);
    this.#wavesPerUm = lines.map(({ nm }) => defocusWaves(1, fNumber, nm / 1000));
  }

  at(shiftUm: number): readonly WavefrontLine[] {
    for (let i = 0; i < this.#lines.length; i++)
      this.#lines[i].wavefront.w20 = this.#w20[i] + this.#wavesPerUm[i] * shiftUm;
    return this.#lines;
  }
}

/** The first frequency at which the MTF of lens and camera falls to a half, in line pairs per mm.
 *
 * Steps of a fifth of the frequency at which a blur of the same variance would reach it find the place; the
 * root is then exact to 1e-7.
 */
export function mtf50LpPerMm(
  lines: readonly WavefrontLine[],
  fNumber: number,
  camera: Camera,
  direction: FieldDirection,
): number {
  const aboveHalf = (lpPerMm: number) =>
    bandMtf(lines, fNumber, lpPerMm, direction) * pixelMtf(camera, lpPerMm) - 0.5;
  const step = gaussianMtf50(lines, fNumber, camera, direction) / 5;
  let low = 0;
  let atLow = 0.5;
  for (;;) {
    const high = low + step; // ends at the cut-off, where the MTF is 0
    const atHigh = aboveHalf(high);
    if (atHigh <= 0) return bracketedRoot(aboveHalf, low, high, atLow, atHigh, 1e-7);
    low = high;
    atLow = atHigh;
  }
}

/** Where a Gaussian with the variance of the blur has fallen to a half: sqrt(ln 2 / 2) / (pi sigma).
 *
 * The variance is that of the transverse aberrations eps = -2 N lambda dW over the pupil, of the lateral
 * colour within the band, of the pixel's box, and (0.464 lambda N)^2 for diffraction, which puts its half
 * where diffractionMtf has it, at nu = 0.404.
 */
function gaussianMtf50(
  lines: readonly WavefrontLine[],
  fNumber: number,
  camera: Camera,
  direction: FieldDirection,
): number {
  const isTangential = direction === 'tangential';
  let varianceUm2 = (camera.fillFactor * camera.pixelPitchUm) ** 2 / 12;
  for (const { nm, weight, wavefront } of lines) {
    const { w40, w31, w22, w20, w11 } = wavefront;
    const focus = w20 + (isTangential ? w22 : 0);
    // variance over the unit pupil of dW/dm or dW/ds; coma does not mix with the rest, which is odd where
    // coma is even
    const spherical = 2 * w40 * w40 + (8 / 3) * w40 * focus + focus * focus;
    const coma = (w31 * w31) / (isTangential ? 2 : 6);
    const slope2 = Math.max(0, spherical) + coma + (isTangential ? w11 * w11 : 0);
    const airyUm = (nm / 1000) * fNumber;
    varianceUm2 += weight * airyUm * airyUm * (4 * slope2 + 0.215);
  }
  return (1000 * Math.sqrt(Math.LN2 / 2)) / (Math.PI * Math.sqrt(varianceUm2));
}
