/** How far from the axis a picture is good enough. */
import type { FieldPoint } from '../optics/field-points.js';
import { fieldPoint } from '../optics/field-points.js';
import { isSymmetric, type Rig } from '../optics/rig.js';

/** Steps of the first look along a diagonal, and halvings of the step in which it fails: to 1/2000 of the diagonal. */
const STEPS = 16;
const HALVINGS = 7;

/** The field points of the corners that must be looked at: one where they are all alike. */
function cornersOf(rig: Rig): FieldPoint[] {
  const corners = (['top_right', 'top_left', 'bottom_left', 'bottom_right'] as const).map((place) =>
    fieldPoint(rig, place),
  );
  return isSymmetric(rig) ? corners.slice(0, 1) : corners;
}

/** h of the farthest corner of the sensor. */
export function cornerField(rig: Rig): number {
  return Math.max(...cornersOf(rig).map(({ field }) => field));
}

/** The points at a field h on the diagonals of the sensor, as far as they lie on it. */
export function diagonalPoints(rig: Rig, h: number): FieldPoint[] {
  return cornersOf(rig)
    .filter(({ field }) => h <= field * (1 + 1e-9))
    .map(({ azimuthDeg }) => fieldPoint(rig, { field: h, azimuthDeg }));
}

/** The largest h such that everything is met from the axis out to it, along the diagonals of the sensor: 0 where it is not even met on the
 * axis, h of the farthest corner where it is met all over.
 * @param isMetAt whether everything is met at these points, which have the same h */
export function largestField(rig: Rig, isMetAt: (points: readonly FieldPoint[]) => boolean): number {
  const farthest = cornerField(rig);
  const isMet = (h: number) => isMetAt(diagonalPoints(rig, h));
  if (!isMet(0)) return 0;
  for (let step = 1; step <= STEPS; step++) {
    const outer = (farthest * step) / STEPS;
    if (isMet(outer)) continue;
    let [met, unmet] = [(farthest * (step - 1)) / STEPS, outer];
    for (let i = 0; i < HALVINGS; i++) {
      const middle = 0.5 * (met + unmet);
      if (isMet(middle)) met = middle;
      else unmet = middle;
    }
    return met;
  }
  return farthest;
}
