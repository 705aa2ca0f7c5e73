/** The rule `edge_blur`: the 10-90 % rise of an edge, in the worst direction. */
import type { Accuracy } from '../numeric/gauss-legendre.js';
import { edgeWidthUm } from '../optics/edge-width.js';
import { type BandView, type Bench, bandViews, type Place } from './bench.js';
import type { BandFigure, Figure } from './figures.js';
import { worstBand } from './figures.js';
import type { PixelRuleOf } from './rules.js';
import { worstDirection } from './worst-direction.js';

/** The 10-90 % rise of an edge through lens and camera, in the worst band and the worst of all directions, in the rule's unit.
 * @param accuracy `rough`: 1 %, in three directions, for searches */
export function edgeBlurAt(
  bench: Bench,
  place: Place,
  { limit }: PixelRuleOf<'edge_blur'>,
  accuracy: Accuracy = 'full',
): Figure {
  const { camera } = bench.rig;
  const perUm = limit.perPixel / camera.pixelPitchUm;
  const figures = bandViews(bench, place).map((view) => ({
    ...bandEdgeWidth(
      view,
      (direction, how) => {
        return perUm * edgeWidthUm(view.lines, view.fNumber, camera, direction, how);
      },
      accuracy,
    ),
    band: view.band.name,
  }));
  return worstBand(figures, (value, than) => value > than);
}

type EdgeWidth = (directionDeg: number, accuracy: Accuracy) => number;

function bandEdgeWidth({ isRound }: BandView, width: EdgeWidth, accuracy: Accuracy): BandFigure {
  const tangential = width(0, accuracy);
  if (isRound) return { value: tangential, tangential, sagittal: tangential, directionDeg: 0 };
  const sagittal = width(90, accuracy);
  // The width bends as slowly with the angle as the blur's own second harmonic, whose extremes lie at 0 and 90 degrees; the looks in
  // between find the cases in which it does not.
  const inBetween = worstDirection((angle) => width(angle, 'rough'), accuracy === 'full' ? 6 : 2, 0);
  const isInBetween = inBetween.directionDeg > 0 && inBetween.directionDeg < 90;
  const oblique = isInBetween ? width(inBetween.directionDeg, accuracy) : 0;
  const value = Math.max(tangential, sagittal, oblique);
  const directionDeg = value === oblique ? inBetween.directionDeg : value === tangential ? 0 : 90;
  return { value, tangential, sagittal, directionDeg };
}
