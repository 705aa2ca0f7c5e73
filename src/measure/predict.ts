/** What the rig's optics say of the places and edges that are measured. */
import { type DistortionMap, distortionMap } from '../optics/distortion.js';
import { bandLines, bandMtf, pixelMtf } from '../optics/otf.js';
import { type Band, pixelPitchMm, type Rig } from '../optics/rig.js';
import { sinc } from './sfr.js';

/** From ideal to real places on the sensor, in pixels. */
export interface PlaceMap {
  landed(x: number, y: number): [x: number, y: number];
  ideal(x: number, y: number): [x: number, y: number];
}

/** The map of a radial distortion around the axis. */
export function radialMap(axisPx: readonly [number, number], pitchMm: number, map: DistortionMap): PlaceMap {
  const moved = (x: number, y: number, radiusTo: (mm: number) => number): [number, number] => {
    const [dx, dy] = [x - axisPx[0], y - axisPx[1]];
    const radiusMm = Math.hypot(dx, dy) * pitchMm;
    const scale = radiusMm === 0 ? 1 : radiusTo(radiusMm) / radiusMm;
    return [axisPx[0] + dx * scale, axisPx[1] + dy * scale];
  };
  return {
    landed: (x, y) => moved(x, y, (mm) => map.distorted(mm)),
    ideal: (x, y) => moved(x, y, (mm) => map.ideal(mm)),
  };
}

/** Where the rig puts the points of an ideal image in one band. */
export function rigMap(rig: Rig, band: Band): PlaceMap {
  return radialMap(rig.mount.axisPx, pixelPitchMm(rig.camera), distortionMap(rig.lens, band));
}

/** Where the centroid of a disc lands: the place of its middle, moved along the radius by
 *
 * - the PSF's own centroid, which coma and the colours of a band put at the mean of eps = -2 N lambda dW/dm
 *   over the pupil, -2 N lambda (w31 + w11);
 * - the bending of the map over the disc, 3 c R^2 r for r' = a r + c r^3: its parts farther out shrink or
 *   grow more than those farther in (the mean of the map over the disc, weighted with its determinant;
 *   derived).
 */
export function dotPlace(
  rig: Rig,
  band: Band,
  x: number,
  y: number,
  radiusPx: number,
): [x: number, y: number] {
  const pitchMm = pixelPitchMm(rig.camera);
  const [axisX, axisY] = rig.mount.axisPx;
  const [xMm, yMm] = [(x - axisX) * pitchMm, (y - axisY) * pitchMm];
  const [landedX, landedY] = rigMap(rig, band).landed(x, y);
  let shiftMm = 3 * distortionMap(rig.lens, band).c * (radiusPx * pitchMm) ** 2 * Math.hypot(xMm, yMm);
  const lines = bandLines(rig, xMm, yMm, band);
  for (const { nm, weight, wavefront } of lines)
    shiftMm -= weight * 2 * rig.mount.fNumber * nm * 1e-6 * (wavefront.w31 + wavefront.w11);
  const { cos, sin } = lines[0].wavefront;
  return [landedX + (shiftMm / pitchMm) * cos, landedY + (shiftMm / pitchMm) * sin];
}

/** A measured edge, as far as the prediction looks at it. */
export interface EdgePlace {
  from: readonly [x: number, y: number];
  to: readonly [x: number, y: number];
  normalDeg: number;
}

/** Points of an edge at which the PSF is looked at, as shares of its length, with their weights (Simpson's
 * rule): the PSF may change on the way. */
const ALONG: readonly (readonly [share: number, weight: number])[] = [
  [0, 1 / 12],
  [0.25, 4 / 12],
  [0.5, 2 / 12],
  [0.75, 4 / 12],
  [1, 1 / 12],
];

/** The MTF of lens and camera in the direction of an edge's normal, averaged along the edge, at frequencies
 * in cycles a pixel. */
export function predictedSfr(
  rig: Rig,
  band: Band,
  { from, to, normalDeg }: EdgePlace,
): (cyclesPerPixel: number) => number {
  const pitchMm = pixelPitchMm(rig.camera);
  const [axisX, axisY] = rig.mount.axisPx;
  const map = rigMap(rig, band);
  const points = ALONG.map(([share, weight]) => {
    const [x, y] = map.ideal(from[0] + share * (to[0] - from[0]), from[1] + share * (to[1] - from[1]));
    const lines = bandLines(rig, (x - axisX) * pitchMm, (y - axisY) * pitchMm, band);
    const { cos, sin } = lines[0].wavefront;
    return { weight, lines, directionDeg: normalDeg - (Math.atan2(sin, cos) * 180) / Math.PI };
  });
  return (cyclesPerPixel) => {
    const lpPerMm = cyclesPerPixel / pitchMm;
    let sum = 0;
    for (const { weight, lines, directionDeg } of points)
      sum += weight * bandMtf(lines, rig.mount.fNumber, lpPerMm, directionDeg);
    return sum * pixelMtf(rig.camera, lpPerMm, normalDeg);
  };
}

/** The response of a chart's own samples, squares of 1 / oversample of a pixel, in the direction of an edge's
 * normal. */
export function chartMtf(oversample: number, normalDeg: number, cyclesPerPixel: number): number {
  const angle = (normalDeg * Math.PI) / 180;
  const cycles = cyclesPerPixel / oversample;
  return sinc(cycles * Math.cos(angle)) * sinc(cycles * Math.sin(angle));
}
