/** How finely a pupil and its PSF must be sampled, and the refusal where no affordable sampling is enough. */
import { InputError } from '../errors.js';
import { nextPowerOfTwo } from '../numeric/fft.js';
import { axialColourUm } from './colour.js';
import type { Coefficient, Rig } from './rig.js';
import { defocusWaves, type LocalWavefront, tiltShiftUm, wavefrontAt } from './wavefront.js';

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

/** The smallest grid on which the phase moves by less than pi/2 from one pupil sample to the next, 2 pi |grad W| 2/d < pi/2, and on which
 * the pupil has the fewest samples that its rim needs, as far as the largest grid gives them. */
export function gridForPhase(wavefront: LocalWavefront, stepUm: number, nm: number, fNumber: number): number {
  const gridOf = (diameter: number) => nextPowerOfTwo((diameter * (nm / 1000) * fNumber) / stepUm);
  return Math.max(gridOf(8 * largestSlope(wavefront)), Math.min(LARGEST_GRID, gridOf(LEAST_DIAMETER)));
}

/** Refuse a rig whose wavefront is too steep to be sampled anywhere among the given image points.
 * @param pointsMm ideal image points to look at
 * @param pitchUm  distance of the picture's samples: the fine grid of the PSF follows from it at every stop
 * @throws {InputError} naming what is the steepest, its size and the lowest stop that would fit
 */
export function refuseTooSteep(
  rig: Rig,
  pointsMm: readonly (readonly [xMm: number, yMm: number])[],
  pitchUm: number,
): void {
  const lines = rig.camera.bands.flatMap((band) => band.lines.map(({ nm }) => ({ nm, band })));
  const shortestNm = Math.min(...lines.map(({ nm }) => nm));
  const fits = (fNumber: number) => {
    const stopped = { ...rig, mount: { ...rig.mount, fNumber } };
    const stepUm = pitchUm / samplesPerPixel(pitchUm, shortestNm, fNumber);
    return lines.every(({ nm, band }) =>
      pointsMm.every(([xMm, yMm]) => {
        const wavefront = wavefrontAt(stopped, xMm, yMm, nm, band);
        return gridForPhase(wavefront, stepUm, nm, fNumber) <= LARGEST_GRID;
      }),
    );
  };
  const { fNumber } = rig.mount;
  if (fits(fNumber)) return;
  const stop = lowestStop(fNumber, fits);
  const { key, name, found, waves } = steepestPart(rig, pointsMm, shortestNm);
  const lower = `Lower ${name}${key.startsWith('lens.waves') ? ', move the sensor nearer to the focus' : ''}`;
  throw new InputError({
    key,
    message: `the wavefront at f/${fNumber} is too steep to be sampled: ${name} alone is ${waves.toPrecision(3)} waves at its worst field point`,
    found,
    allowed: `what fits a pupil grid of ${LARGEST_GRID} samples`,
    advice: stop === undefined ? `${lower}.` : `${lower}, or stop down to f/${stop} or more.`,
  });
}

/** The lowest f-number that fits, in tenths. Past f/100 none is looked for: no lens of a camera is closed that far. */
function lowestStop(fNumber: number, fits: (fNumber: number) => boolean): number | undefined {
  for (let tenths = Math.floor(10 * fNumber) + 1; tenths <= 1000; tenths++) {
    if (fits(tenths / 10)) return tenths / 10;
  }
  return undefined;
}

/** A part of the wavefront that one key of the rig is to blame for. */
interface WavefrontPart {
  key: string;
  name: string;
  /** The key's own value. */
  found: string;
  /** Its size at the stop in use and the shortest wavelength, without sign. */
  waves: number;
}

/** The part with the largest slope of its own over the given field points. */
function steepestPart(
  rig: Rig,
  pointsMm: readonly (readonly [number, number])[],
  shortestNm: number,
): WavefrontPart {
  const { lens, mount } = rig;
  const still = { ...rig, mount: { ...mount, sensorShiftUm: 0, sensorTiltDeg: [0, 0] as const } };
  const focused = { ...still, lens: { ...lens, axialUm: [] } };
  let steepest = { slope: -1, part: { key: '', name: '', found: '', waves: 0 } };
  const look = (key: string, name: string, found: string, waves: number, steepness: number) => {
    const slope = steepness * Math.abs(waves);
    if (slope > steepest.slope) steepest = { slope, part: { key, name, found, waves: Math.abs(waves) } };
  };
  const coefficient = (name: Coefficient, waves: number, steepness: number) =>
    look(`lens.waves.${name}`, name, `${lens.waves[name]} waves at f/${lens.fNumber}`, waves, steepness);
  for (const [xMm, yMm] of pointsMm) {
    const { w40, w31, w22, w20 } = wavefrontAt(focused, xMm, yMm, shortestNm);
    const onAxis = wavefrontAt(focused, 0, 0, shortestNm).w20; // all of it W020, the curvature being none there
    coefficient('W040', w40, 4);
    coefficient('W131', w31, 3);
    coefficient('W222', w22, 2);
    coefficient('W220', w20 - onAxis, 2);
    coefficient('W020', onAxis, 2);
    const defocus = (defocusUm: number) => defocusWaves(defocusUm, mount.fNumber, shortestNm / 1000);
    const [aboutX, aboutY] = mount.sensorTiltDeg;
    const tilt = defocus(tiltShiftUm(rig, xMm, yMm));
    look(
      'mount.sensor_shift_um',
      'the shift of the sensor',
      `${mount.sensorShiftUm}`,
      defocus(mount.sensorShiftUm),
      2,
    );
    look('mount.sensor_tilt_deg', 'the tilt of the sensor', `[${aboutX}, ${aboutY}]`, tilt, 2);
    const colourUm = axialColourUm(lens, shortestNm);
    look('lens.colour.axial_um', 'axial colour', `${colourUm} at ${shortestNm} nm`, defocus(colourUm), 2);
  }
  return steepest.part;
}
