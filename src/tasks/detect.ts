/** The rule `detect`: whether a small feature stands out from the camera's noise. */
import { converterFor } from '../camera/converter.js';
import { flatFieldSignal } from '../camera/signal.js';
import { InputError } from '../errors.js';
import { besselJ0J1Squares } from '../numeric/bessel.js';
import type { Accuracy } from '../numeric/gauss-legendre.js';
import { bandMtf, pixelMtf } from '../optics/otf.js';
import { pixelPitchMm, type Sensor } from '../optics/rig.js';
import { type BandView, type Bench, bandViews, type Place } from './bench.js';
import { type Figure, worstBand } from './figures.js';
import type { PixelRuleOf } from './rules.js';

/** Contrast-to-noise ratio of a disc that is darker by the rule's contrast than a surround of scene value 1, in the worst band:
 *
 *     ratio = dE sqrt(A q) / sigma
 *
 * dE is the difference in electrons of disc and surround in the light that reaches this place, sigma the noise of a pixel of the
 * surround in one picture (shot noise, dark noise, rounding, PRNU, DSNU), A the disc's area in pixels that see the band, and q the share
 * of the disc's energy that blur leaves: the mean of MTF^2 (lens and pixel) over the disc's spectrum. It is the ratio of a filter
 * matched to the blurred disc in white noise, averaged over the disc's place on the pixel grid. Without blur q = 1, which is Rose's
 * C sqrt(photons in the disc) where shot noise is all.
 * Source: A. Rose, JOSA 38 (1948) 196; A. E. Burgess, JOSA A 16 (1999) 633 (both cited from memory)
 */
export function detectAt(
  bench: Bench,
  place: Place,
  rule: PixelRuleOf<'detect'>,
  accuracy: Accuracy = 'full',
): Figure {
  const sensor = sensorOf(bench);
  const light = bench.illumination(Math.hypot(place.xMm, place.yMm));
  const { differenceE, noiseE } = surroundSignal(sensor, light, rule.contrast);
  const areaPx = (Math.PI * rule.diameterPx ** 2) / 4;
  const azimuthDeg = (Math.atan2(place.yMm, place.xMm) * 180) / Math.PI;
  const figures = bandViews(bench, place).map((view, at) => {
    const kept = energyKept(bench, view, rule.diameterPx, azimuthDeg, accuracy);
    const value = (differenceE * Math.sqrt(areaPx * shareOfPixels(bench, at) * kept)) / noiseE;
    return { value, band: view.band.name };
  });
  return worstBand(figures, (value, than) => value < than);
}

/** The sensor, whose noise the rule needs. @throws {InputError} for a camera without noise */
export function sensorOf({ rig }: Bench): Sensor {
  const { sensor } = rig.camera;
  if (sensor !== undefined) return sensor;
  throw new InputError({
    key: 'camera.sensor',
    message: 'is missing, and the rule detect compares a feature with the noise of the sensor',
    advice: 'State the sensor in the rig, or leave the rule out.',
  });
}

/** Signal and noise of a pixel, in electrons. A full well cuts off what is brighter. */
function surroundSignal(
  sensor: Sensor,
  light: number,
  contrast: number,
): { differenceE: number; noiseE: number } {
  const roomE = sensor.fullWellE - sensor.darkE;
  const surroundE = sensor.whiteE * light;
  const seenE = Math.min(roomE, surroundE);
  const differenceE = Math.max(0, seenE - (1 - contrast) * surroundE);
  const converter = converterFor(sensor);
  const value = sensor.whiteE > 0 ? seenE / sensor.whiteE : 0;
  const { temporalVarianceDn2, spatialVarianceDn2 } = flatFieldSignal(sensor, converter, value);
  return { differenceE, noiseE: Math.sqrt(temporalVarianceDn2 + spatialVarianceDn2) / converter.gainDnPerE };
}

/** The share of the pixels that see a band. */
function shareOfPixels({ sites }: Bench, band: number): number {
  return sites === undefined ? 1 : sites.filter((site) => site === band).length / sites.length;
}

/** Frequencies and directions at which the MTF is looked at: to 0.1 % of the ratio, or 1 %. */
const LOOKS = { full: { steps: 32, directions: 4 }, rough: { steps: 16, directions: 3 } } as const;

/** Contrast whose square nothing hangs on any more. */
const FAINT = 0.01;

/** The mean of MTF^2 over the energy spectrum of a disc, 0..1.
 *
 * The disc's spectrum is (D/2) J1(pi D f)/f, and the share of its energy below f is 1 - J0(pi D f)^2 - J1(pi D f)^2 (Rayleigh's closed
 * form for the energy in an Airy disc). So the mean is the integral of MTF^2, averaged over the directions, against that share: taken
 * piecewise, it needs no samples of the disc's own ripples.
 */
function energyKept(
  { rig }: Bench,
  { lines, fNumber, isRound }: BandView,
  diameterPx: number,
  azimuthDeg: number,
  accuracy: Accuracy,
): number {
  const { steps, directions } = LOOKS[accuracy];
  const diameterMm = diameterPx * pixelPitchMm(rig.camera);
  const cutOff = Math.max(...lines.map(({ nm }) => 1 / (nm * 1e-6 * fNumber)));
  let below = 0;
  let mtf2 = 1;
  let kept = 0;
  for (let i = 1; i <= steps; i++) {
    const lpPerMm = cutOff * (i / steps) ** 2; // close at the low frequencies, where most of the energy is
    const share = 1 - besselJ0J1Squares(Math.PI * diameterMm * lpPerMm);
    let next = 0;
    let lens = 0;
    for (let k = 0; k < directions; k++) {
      const angle = (90 * (k + 0.5)) / directions;
      if (k === 0 || !isRound) lens = bandMtf(lines, fNumber, lpPerMm, angle, 'rough');
      for (const side of [-1, 1]) {
        const mtf = lens * pixelMtf(rig.camera, lpPerMm, azimuthDeg + side * angle);
        next += (mtf * mtf) / (2 * directions);
      }
    }
    kept += 0.5 * (mtf2 + next) * (share - below);
    below = share;
    mtf2 = next;
    if (mtf2 < FAINT * FAINT) break;
  }
  return kept;
}
