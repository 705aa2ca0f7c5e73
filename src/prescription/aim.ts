/** Find the ray of a field point that passes the stop at a given place. */
import type { Ray } from './exact.js';
import { launch, trace } from './exact.js';
import type { LensAt } from './lens-model.js';

/** Steps of the search for one ray: a rim ray of a wide lens needs about 8. */
const MAX_STEPS = 40;

/** Leaves `ray` launched and traced up to the stop at (across, along) times the stop's radius, across the
 * field and along it (outward, as the paraxial pupil has it), and returns true; or false where no such ray
 * was found (`ray` then holds the last failure, if there was one).
 *
 * A secant method in two dimensions (Broyden's rank-one update, Math. Comp. 19 (1965) 577, cited from
 * memory), from the paraxial ray and the paraxial Jacobian. A step after which the ray fails is halved; where
 * the start itself fails, field and pupil are grown from nothing in small steps.
 *
 * @param h      field
 * @param start  x and y in the plane of the first vertex: from where to begin; where the ray was found, on
 *   return
 */
export function aim(
  ray: Ray,
  lens: LensAt,
  h: number,
  across: number,
  along: number,
  start: Float64Array,
): boolean {
  if (search(ray, lens, h, across, along, start)) return true;
  const { marginal, chief } = lens.paraxial;
  start[0] = 0;
  start[1] = 0;
  const stages = 16;
  for (let stage = 1; stage <= stages; stage++) {
    start[0] += (across * marginal.y[0]) / stages;
    start[1] += (along * marginal.y[0] + h * chief.y[0]) / stages;
    const part = stage / stages;
    if (!search(ray, lens, part * h, part * across, part * along, start)) return false;
  }
  return true;
}

/** The paraxial start for `aim`. */
export function paraxialStart(
  lens: LensAt,
  h: number,
  across: number,
  along: number,
  out: Float64Array,
): Float64Array {
  const { marginal, chief } = lens.paraxial;
  out[0] = across * marginal.y[0];
  out[1] = along * marginal.y[0] + h * chief.y[0];
  return out;
}

function search(
  ray: Ray,
  lens: LensAt,
  h: number,
  across: number,
  along: number,
  start: Float64Array,
): boolean {
  const { system, paraxial } = lens;
  const { marginal, stopRadiusMm } = paraxial;
  const field = h * paraxial.fieldScale;
  const end = system.stop + 1;
  const targetX = across * marginal.y[system.stop];
  const targetY = along * marginal.y[system.stop];
  let a = start[0];
  let b = start[1];
  // W is hardly touched: a ray that is off by e of the radius has its path off by e times the slope of W.
  // Rounding sets the second part
  const tolerance = 1e-12 * stopRadiusMm + 1e-14 * (Math.abs(a) + Math.abs(b));
  launch(ray, system, field, a, b);
  if (!trace(ray, system, end)) return false;
  let errorX = ray.x - targetX;
  let errorY = ray.y - targetY;
  // inverse Jacobian, at first the paraxial one
  let j00 = marginal.y[0] / marginal.y[system.stop];
  let j01 = 0;
  let j10 = 0;
  let j11 = j00;
  for (let step = 0; step < MAX_STEPS; step++) {
    if (Math.abs(errorX) + Math.abs(errorY) <= tolerance) {
      return store(start, a, b);
    }
    let da = -(j00 * errorX + j01 * errorY);
    let db = -(j10 * errorX + j11 * errorY);
    let halvings = 0;
    for (;;) {
      launch(ray, system, field, a + da, b + db);
      if (trace(ray, system, end)) break;
      if (++halvings > 30) return false;
      da /= 2;
      db /= 2;
    }
    const changeX = ray.x - targetX - errorX;
    const changeY = ray.y - targetY - errorY;
    a += da;
    b += db;
    errorX += changeX;
    errorY += changeY;
    // Sherman and Morrison: J^-1 += (d - J^-1 e) d^T J^-1 / (d^T J^-1 e)
    const ex = j00 * changeX + j01 * changeY;
    const ey = j10 * changeX + j11 * changeY;
    const scale = da * ex + db * ey;
    if (scale === 0) continue;
    const rx = (da - ex) / scale;
    const ry = (db - ey) / scale;
    const dx = da * j00 + db * j10;
    const dy = da * j01 + db * j11;
    j00 += rx * dx;
    j01 += rx * dy;
    j10 += ry * dx;
    j11 += ry * dy;
  }
  return Math.abs(errorX) + Math.abs(errorY) <= 1e-9 * stopRadiusMm && store(start, a, b);
}

function store(start: Float64Array, a: number, b: number): true {
  start[0] = a;
  start[1] = b;
  return true;
}
