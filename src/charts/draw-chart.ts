/** Test charts sized for a rig, with the truth of what they show. */
import type { Rig } from '../optics/rig.js';
import { VERSION } from '../version.js';
import { drawBars } from './bars.js';
import { drawChecker } from './checker.js';
import { drawDots } from './dots.js';
import type { ChartPlane, Drawn } from './draw.js';
import { drawEdges } from './edges.js';
import { type ChartChoices, type SettledChoices, settleChoices } from './options.js';
import { Sheet } from './sheet.js';
import { drawStar } from './star.js';
import type { ChartKind, ChartTruth } from './truth.js';

const DRAWERS: Readonly<Record<ChartKind, (sheet: Sheet, choices: SettledChoices) => Drawn>> = {
  edges: drawEdges,
  dots: drawDots,
  star: drawStar,
  bars: drawBars,
  checker: drawChecker,
};

/** Draw a chart on the rig's sensor, `oversample` samples a pixel on each side.
 *
 * Every sample is the mean over its own square in closed form, so the chart's own blur is exactly that
 * square; the mean of oversample x oversample samples is the mean over the pixel.
 *
 * @returns one plane in linear light, (oversample x width) x (oversample x height), and the truth
 * @throws {InputError} choices that are out of range or do not fit the frame
 */
export function drawChart(
  kind: ChartKind,
  rig: Rig,
  choices: ChartChoices = {},
): { plane: ChartPlane; truth: ChartTruth } {
  const settled = settleChoices(kind, choices);
  const { plane, found } = DRAWERS[kind](new Sheet(rig), settled);
  const [width, height] = rig.camera.pixels;
  const truth: ChartTruth = {
    foreglass: VERSION,
    chart: kind,
    rig: rig.lens.name,
    pixels: [width, height],
    pixelPitchUm: rig.camera.pixelPitchUm,
    axisPx: [rig.mount.axisPx[0], rig.mount.axisPx[1]],
    fullFieldMm: rig.lens.fullFieldMm,
    oversample: settled.oversample,
    levels: { white: settled.white, dark: settled.dark },
    ...found,
  };
  return { plane, truth };
}
