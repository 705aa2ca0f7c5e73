/** How an edge is slanted so that it can be measured: the pixels must stand at many different distances from
 * it. */

/** Slopes p/q at which the lines of pixels along an edge are far apart: 1 / sqrt(p^2 + q^2) of a pixel, which
 * leaves quarter-pixel bins empty. */
const REPEATING: readonly (readonly [p: number, q: number])[] = [
  [0, 1],
  [1, 1],
  [1, 2],
  [1, 3],
  [2, 3],
];

/** Angle of a direction against the nearest row or column of pixels, 0 to 45 degrees. */
export function angleToPixels(directionDeg: number): number {
  const turned = ((directionDeg % 90) + 90) % 90;
  return Math.min(turned, 90 - turned);
}

/** How often the pixels along an edge run through all distances from it: how far their lines drift along the
 * edge, over the gap that lies between two lines, at the worst slope nearby. 1 and more: the gap is filled.
 * @param angleDeg  of the edge against the pixels, 0 to 45
 * @param lengthPx  of the edge
 * @param gapPx     gaps up to this one do no harm
 */
export function phaseCycles(angleDeg: number, lengthPx: number, gapPx: number): number {
  return Math.min(
    ...REPEATING.filter(([p, q]) => 1 / Math.hypot(p, q) > gapPx).map(([p, q]) => {
      const offDeg = angleDeg - (Math.atan2(p, q) * 180) / Math.PI;
      const drift = lengthPx * Math.abs(Math.sin((offDeg * Math.PI) / 180));
      return drift * Math.hypot(p, q);
    }),
  );
}

/** The slant nearest to `slantDeg` (either way round, larger where that does not do) that turns
 * `directionDeg` to an angle at which an edge of this length can be measured: its pixels drift through every
 * phase twice. */
export function measurableSlant(directionDeg: number, slantDeg: number, lengthPx: number): number {
  for (let more = 0; more < 45; more += 0.25) {
    for (const slant of [slantDeg + more, -slantDeg - more]) {
      const angleDeg = angleToPixels(directionDeg + slant);
      const isEnough = angleDeg >= Math.min(slantDeg, LEAST_ANGLE_DEG) - 1e-9;
      if (isEnough && phaseCycles(angleDeg, lengthPx, FINEST_GAP_PX) >= LEAST_CYCLES) return slant;
    }
  }
  return slantDeg; // an edge too short for any slant: its measurement says so
}

const LEAST_CYCLES = 2;
/** No gap in quarter-pixel bins. */
const FINEST_GAP_PX = 0.25;
const LEAST_ANGLE_DEG = 3;
