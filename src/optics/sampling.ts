/** How finely a pupil and its PSF must be sampled, and the refusal where no affordable sampling is enough. */
import { InputError } from '../errors.js';
import { nextPowerOfTwo } from '../numeric/fft.js';
import type { Rig } from './rig.js';
import { type LocalWavefront, wavefrontAt } from './wavefront.js';

/** The largest pupil grid. A step beyond it costs a second and 300 MB for one PSF. */
export const LARGEST_GRID = 4096;

/** The fewest samples across a pupil: its soft rim then takes less than 0.5 % out of the far tails (measured: 0.26 / diameter). */
const LEAST_DIAMETER = 64;

/** Samples of the PSF per picture sample: the smallest whole s with pitch / s <= lambda N / 2 (Nyquist of the intensity). */
export function samplesPerPixel(pitchUm: number, shortestNm: number, fNumber: number): number {
  return Math.max(1, Math.ceil(pitchUm / ((shortestNm / 1000) * (fNumber / 2)) - 1e-12));
}

/** The largest slope |grad W| over the pupil, in waves per pupil radius, looked up on rings of the pupil. */
export function largestSlope(wavefront: LocalWavefront): number {
  const { w40, w31, w22, w20, w11 } = wavefront;
  let largest = 0;
  for (const rho of [0.5, 0.8, 1]) {
    for (let step = 0; step <= 24; step++) {
      const m = rho * Math.cos((Math.PI * step) / 24); // W is even in s, so half a turn is all
      const s = rho * Math.sin((Math.PI * step) / 24);
      const rho2 = rho * rho;
      const alongField = m * (4 * w40 * rho2 + 2 * w31 * m + 2 * w20 + 2 * w22) + w31 * rho2 + w11;
      const acrossField = s * (4 * w40 * rho2 + 2 * w31 * m + 2 * w20);
      largest = Math.max(largest, Math.hypot(alongField, acrossField));
    }
  }
  return largest;
}

/** Diameter of the pupil in samples of an n-grid whose image step is `stepUm`: d = n dx / (lambda N), not rounded. */
export function pupilDiameterSamples(n: number, stepUm: number, nm: number, fNumber: number): number {
  return (n * stepUm) / ((nm / 1000) * fNumber);
}

/** The smallest grid on which the phase moves by less than pi/2 from one pupil sample to the next: 2 pi |grad W| 2/d < pi/2. */
export function gridForPhase(wavefront: LocalWavefront, stepUm: number, nm: number, fNumber: number): number {
  const diameter = Math.max(LEAST_DIAMETER, 8 * largestSlope(wavefront));
  return nextPowerOfTwo((diameter * (nm / 1000) * fNumber) / stepUm);
}

/** Refuse a rig whose wavefront is too steep to be sampled anywhere among the given image points.
 * @param pointsMm ideal image points to look at
 * @param stepUm   image step dx of the PSF's fine grid
 * @throws {InputError} naming the coefficient that is the steepest, its size and a stop that would fit
 */
export function refuseTooSteep(
  rig: Rig,
  pointsMm: readonly (readonly [xMm: number, yMm: number])[],
  stepUm: number,
): void {
  const lines = rig.camera.bands.flatMap((band) => band.lines.map(({ nm }) => ({ nm, band })));
  const fits = (fNumber: number) => {
    const stopped = { ...rig, mount: { ...rig.mount, fNumber } };
    return lines.every(({ nm, band }) =>
      pointsMm.every(([xMm, yMm]) => {
        const wavefront = wavefrontAt(stopped, xMm, yMm, nm, band);
        return gridForPhase(wavefront, stepUm, nm, fNumber) <= LARGEST_GRID;
      }),
    );
  };
  const { fNumber } = rig.mount;
  if (fits(fNumber)) return;
  let enough = fNumber;
  while (enough < 1000 && !fits(enough)) enough *= 1.02;
  const { name, waves } = steepestCoefficient(rig, pointsMm);
  throw new InputError({
    key: `lens.waves.${name}`,
    message: `the wavefront at f/${fNumber} is too steep to be sampled: ${name} alone is ${Math.abs(waves).toPrecision(3)} waves at its worst field point`,
    found: `${rig.lens.waves[name as keyof typeof rig.lens.waves] ?? waves} waves at f/${rig.lens.fNumber}`,
    allowed: `what fits a pupil grid of ${LARGEST_GRID} samples`,
    advice:
      enough < 1000
        ? `Lower ${name}, move the sensor nearer to the focus, or stop down to f/${(Math.ceil(enough * 10) / 10).toFixed(1)} or more.`
        : `Lower ${name} or move the sensor nearer to the focus.`,
  });
}

/** The term with the largest slope of its own over the given field points, at the stop in use. */
function steepestCoefficient(
  rig: Rig,
  pointsMm: readonly (readonly [number, number])[],
): { name: string; waves: number } {
  const shortestNm = Math.min(...rig.camera.bands.flatMap((band) => band.lines.map(({ nm }) => nm)));
  let steepest = { name: 'W020', waves: 0, slope: 0 };
  for (const [xMm, yMm] of pointsMm) {
    const w = wavefrontAt(rig, xMm, yMm, shortestNm);
    const h = Math.hypot(xMm, yMm) / rig.lens.fullFieldMm;
    const q = rig.lens.fNumber / rig.mount.fNumber;
    const curvature = (rig.lens.wavelengthNm / shortestNm) * rig.lens.waves.W220 * h ** 2 * q ** 2;
    const terms = [
      { name: 'W040', waves: w.w40, slope: 4 * Math.abs(w.w40) },
      { name: 'W131', waves: w.w31, slope: 3 * Math.abs(w.w31) },
      { name: 'W222', waves: w.w22, slope: 2 * Math.abs(w.w22) },
      { name: 'W220', waves: curvature, slope: 2 * Math.abs(curvature) },
      { name: 'W020', waves: w.w20 - curvature, slope: 2 * Math.abs(w.w20 - curvature) },
    ];
    for (const term of terms) if (term.slope > steepest.slope) steepest = term;
  }
  return steepest;
}
