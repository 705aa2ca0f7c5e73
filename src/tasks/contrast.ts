/** The rule `contrast`: MTF of lens and camera at one frequency, in the worst direction. */
import type { Accuracy } from '../numeric/gauss-legendre.js';
import { bandMtf, pixelMtf } from '../optics/otf.js';
import { pixelPitchMm } from '../optics/rig.js';
import { type BandView, type Bench, bandViews, type Place } from './bench.js';
import type { BandFigure, Figure } from './figures.js';
import { worstBand } from './figures.js';
import type { PixelRuleOf } from './rules.js';
import { worstDirection } from './worst-direction.js';

/** MTF of lens and camera at the rule's frequency, in the worst band and in the worst of all directions.
 *
 * The pixel's share is the sinc along its rows, as in the figures of contrast by zone; along other directions it is no lower below half
 * a cycle a pixel. Above half a cycle a pixel the camera shows aliases and not the detail, so the figure is 0.
 */
export function contrastAt(
  bench: Bench,
  place: Place,
  { lpPerMm }: PixelRuleOf<'contrast'>,
  accuracy: Accuracy = 'full',
): Figure {
  const { camera } = bench.rig;
  const pixel = isResolved(bench, lpPerMm) ? pixelMtf(camera, lpPerMm) : 0;
  const figures = bandViews(bench, place).map((view) => ({
    ...bandContrast(view, lpPerMm, pixel, accuracy),
    band: view.band.name,
  }));
  return worstBand(figures, (value, than) => value < than);
}

/** Whether a frequency is within half a cycle a pixel. */
export function isResolved({ rig }: Bench, lpPerMm: number): boolean {
  return lpPerMm * pixelPitchMm(rig.camera) <= 0.5 * (1 + 1e-9);
}

function bandContrast(
  { lines, fNumber, isRound }: BandView,
  lpPerMm: number,
  pixel: number,
  accuracy: Accuracy,
): BandFigure {
  const mtf = (directionDeg: number) => pixel * bandMtf(lines, fNumber, lpPerMm, directionDeg);
  const tangential = pixel * bandMtf(lines, fNumber, lpPerMm, 'tangential');
  if (isRound || pixel === 0) return { value: tangential, tangential, sagittal: tangential, directionDeg: 0 };
  const sagittal = pixel * bandMtf(lines, fNumber, lpPerMm, 'sagittal');
  // squared, since the MTF has a crease where it touches 0; 7.5 degrees follow even an MTF with several lobes
  const [steps, points] = accuracy === 'full' ? [12, 9] : [8, 0];
  const { directionDeg } = worstDirection((angle) => -(mtf(angle) ** 2), steps, points);
  const value = Math.min(mtf(directionDeg), tangential, sagittal);
  return { value, tangential, sagittal, directionDeg };
}
