/** The rule `placement`: how far a point lies from where it should. */
import { pixelPitchMm } from '../optics/rig.js';
import type { Bench, Place } from './bench.js';
import { type Figure, worstBand } from './figures.js';
import { landingMm } from './landing.js';
import type { PixelRuleOf } from './rules.js';

/** Distance between the centroid of a point's image and its ideal place, in the worst band, in the rule's unit; after the best radial
 * model of the rule's order, where it asks for one. Distortion, lateral colour, a change of scale (W111) and coma's shift count. */
export function placementAt(
  bench: Bench,
  { xMm, yMm }: Place,
  { limit, modelOrder }: PixelRuleOf<'placement'>,
): Figure {
  const { rig } = bench;
  const idealMm = Math.hypot(xMm, yMm);
  const model = modelOrder === null ? (landedMm: number) => landedMm : bench.models.ofOrder(modelOrder);
  const perMm = limit.perPixel / pixelPitchMm(rig.camera);
  const figures = rig.camera.bands.map((band) => ({
    value: perMm * Math.abs(model(landingMm(rig, band)(idealMm)) - idealMm),
    band: band.name,
  }));
  return worstBand(figures, (value, than) => value > than);
}
