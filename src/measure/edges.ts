/** All edges of one band of a picture: those of a chart's truth, and those of regions that a user marked. */
import type { ChartTruth, EdgeTruth } from '../charts/truth.js';
import { InputError } from '../errors.js';
import type { Band, Rig } from '../optics/rig.js';
import type { EdgeFigures, SfrValue, Skipped } from './figures.js';
import { findEdge, MOST_HALF_WIDTH_PX } from './find-edge.js';
import { fieldOfEdge, mapOf, type OpticalFrame } from './optical-frame.js';
import type { PixelRect, Plane } from './plane.js';
import { chartMtf, type PlaceMap, predictedSfr, radialMap } from './predict.js';
import { cubicMap, type RadialPair } from './radial-fit.js';
import { halfFrequency } from './sfr.js';
import { type MeasuredEdge, measureEdge } from './slanted-edge.js';
import type { EdgeGuess } from './strip.js';

/** What the edges of a picture are measured with. */
export interface EdgeSetting {
  rig?: Rig;
  /** The rig's own band. */
  band?: Band;
  bandName: string;
  frame?: OpticalFrame;
  truth?: ChartTruth;
  cyclesPerPixel: readonly number[];
}

/** At least so much of an edge is left out at its ends, where the corner blurs into it. */
const CORNER_PX = 24;
/** No more than this share of an edge is left out at either end. */
const CORNER_SHARE = 0.25;
/** How far the found normal may be off the expected one. */
const MOST_TURN_DEG = 15;

/** The edges of a chart, in the order of the truth.
 *
 * Where the rig is known, its distortion says where to look. Where it is not, the edges are taken from the
 * axis outward, and those found so far say, by a third-order distortion through them, where to look for the
 * next.
 */
export function chartEdges(
  plane: Plane,
  truth: ChartTruth,
  setting: EdgeSetting,
): { edges: EdgeFigures[]; skipped: Skipped[] } {
  const found = new Map<EdgeTruth, EdgeFigures>();
  const skipped = new Map<EdgeTruth, Skipped>();
  const pairs: RadialPair[] = [];
  const all = truth.edges ?? [];
  for (const edge of all.toSorted((a, b) => a.field - b.field)) {
    const map = searchMap(setting, pairs);
    try {
      const measured = measureEdge(plane, guessOf(edge, map));
      refuseOther(edge, measured);
      found.set(edge, figuresOf(measured, setting, edge));
      if (edge.direction === 'tangential') pairs.push(radialPair(edge, measured, setting.frame!));
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      const { x, y } = edge;
      skipped.set(edge, { what: 'edge', x, y, band: setting.bandName, reason: error.message });
    }
  }
  return {
    edges: all.map((edge) => found.get(edge)).filter((edge) => edge !== undefined),
    skipped: all.map((edge) => skipped.get(edge)).filter((edge) => edge !== undefined),
  };
}

/** The edge of a region. @throws {InputError} where there is none to be measured */
export function regionEdge(plane: Plane, region: PixelRect, setting: EdgeSetting): EdgeFigures {
  return figuresOf(measureEdge(plane, findEdge(plane, region), region), setting);
}

function searchMap({ rig, band, frame }: EdgeSetting, pairs: readonly RadialPair[]): PlaceMap {
  if (rig !== undefined) return mapOf(rig, band);
  return radialMap(frame!.axisPx, frame!.pitchMm, cubicMap(pairs));
}

function guessOf({ from, to, x, y, normalDeg, roomPx }: EdgeTruth, map: PlaceMap): EdgeGuess {
  const [start, end, middle] = [map.landed(...from), map.landed(...to), map.landed(x, y)];
  const [dx, dy] = [end[0] - start[0], end[1] - start[1]];
  const length = Math.hypot(dx, dy);
  const side = Math.cos((normalDeg * Math.PI) / 180) * dy - Math.sin((normalDeg * Math.PI) / 180) * dx;
  const [nx, ny] = side >= 0 ? [dy, -dx] : [-dy, dx];
  return {
    x: middle[0],
    y: middle[1],
    normalDeg: (Math.atan2(ny, nx) * 180) / Math.PI,
    lengthPx: length - 2 * Math.min(CORNER_PX, CORNER_SHARE * length),
    halfWidthPx: Math.min(MOST_HALF_WIDTH_PX, roomPx),
  };
}

/** Where a search goes astray it may meet the other side of the square, which is dark and bright the other
 * way round. */
function refuseOther({ normalDeg }: EdgeTruth, measured: MeasuredEdge): void {
  const turn = ((measured.normalDeg - normalDeg + 540) % 360) - 180;
  if (Math.abs(turn) <= MOST_TURN_DEG) return;
  throw new InputError({
    message: 'shows another edge than the chart has here',
    found: `a normal ${Math.abs(turn).toFixed(1)} degrees off`,
    allowed: `up to ${MOST_TURN_DEG} degrees`,
    advice: 'Is this the picture of that chart, the same way up?',
  });
}

/** How far out a tangential edge was found: its shift along the radius through its ideal middle. */
function radialPair(edge: EdgeTruth, measured: MeasuredEdge, { pitchMm, axisPx }: OpticalFrame): RadialPair {
  const normal = (measured.normalDeg * Math.PI) / 180;
  const [nx, ny] = [Math.cos(normal), Math.sin(normal)];
  const radius = Math.hypot(edge.x - axisPx[0], edge.y - axisPx[1]);
  const [outX, outY] = [(edge.x - axisPx[0]) / radius, (edge.y - axisPx[1]) / radius];
  const shift = ((measured.x - edge.x) * nx + (measured.y - edge.y) * ny) / (nx * outX + ny * outY);
  return { idealMm: radius * pitchMm, foundMm: (radius + shift) * pitchMm };
}

function figuresOf(measured: MeasuredEdge, setting: EdgeSetting, edge?: EdgeTruth): EdgeFigures {
  const { rig, band, frame, truth, cyclesPerPixel, bandName } = setting;
  const { x, y, normalDeg, angleDeg, lengthPx, edgeWidthPx, dark, bright, noise } = measured;
  const place = edge ?? fieldFrom(measured, setting);
  const predicted = rig === undefined || band === undefined ? undefined : predictedSfr(rig, band, measured);
  const response = (f: number) =>
    measured.sfr(f) / (truth === undefined ? 1 : chartMtf(truth.oversample, normalDeg, f));
  const sfr = cyclesPerPixel.map(
    (f): SfrValue => ({
      cyclesPerPixel: f,
      lpPerMm: frame && f / frame.pitchMm,
      value: response(f),
      predicted: predicted?.(f),
    }),
  );
  const sfr50 = halfFrequency(response);
  return {
    x,
    y,
    field: place?.field ?? null,
    azimuthDeg: place?.azimuthDeg ?? null,
    direction: place?.direction ?? null,
    offRadiusDeg: place?.offRadiusDeg ?? null,
    band: bandName,
    normalDeg,
    angleDeg,
    lengthPx,
    sfr,
    sfr50CyclesPerPixel: sfr50,
    sfr50LpPerMm: frame && (sfr50 === null ? null : sfr50 / frame.pitchMm),
    edgeWidthPx,
    dark,
    bright,
    noise,
  };
}

function fieldFrom({ x, y, normalDeg }: MeasuredEdge, { rig, band, frame }: EdgeSetting) {
  return frame && fieldOfEdge(frame, ...mapOf(rig, band).ideal(x, y), normalDeg);
}
