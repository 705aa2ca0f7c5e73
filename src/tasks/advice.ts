/** What to change where a task is not met. */
import { goldenMaximum } from '../numeric/bounded-maximum.js';
import { bandLines } from '../optics/otf.js';
import type { Rig } from '../optics/rig.js';
import { defocusWaves } from '../optics/wavefront.js';
import { benchFor } from './bench.js';
import { judgeRule } from './evaluate.js';
import type { PartGain } from './gains.js';
import { perfectRig, type RigPart, withShift, withStop } from './lens-parts.js';
import type { PixelRule } from './rules.js';
import type { Scoring } from './scoring.js';

/** A change, and what comes of it alone. */
export type Advice = {
  /** The least margin after the change, and whether it is 0 or more. */
  margin: number;
  met: boolean;
} & (
  | { change: 'focus'; sensorShiftUm: number }
  /** `whiteE`: electrons of a white scene that are left at this stop. */
  | { change: 'stop'; fNumber: number; whiteE?: number }
  | { change: 'lens'; coefficient: RigPart }
  /** Even a lens without any error does not meet this rule at this stop. */
  | { change: 'task'; rule: PixelRule['kind'] }
);

/** What to change, the first thing first: what no lens can mend; then what meets the task by moving the sensor, by the stop, by a better
 * lens, in this order, as they cost ever more; then what comes nearest to it.
 * @param now the least margin as things stand, by the same scoring */
export async function adviceFor(
  rig: Rig,
  scoring: Scoring,
  gains: readonly PartGain[],
  now: number,
): Promise<Advice[]> {
  const beyond = await beyondAnyLens(rig, scoring);
  const candidates: Advice[] = [];
  const add = (advice: Advice) => {
    if (advice.margin > now + LEAST_GAIN) candidates.push(advice);
  };
  if (beyond === undefined) {
    const sensorShiftUm = bestShiftUm(rig, scoring);
    add({ change: 'focus', sensorShiftUm, ...(await outcome(withShift(rig, sensorShiftUm), scoring)) });
  }
  const fNumber = bestStop(rig, scoring);
  if (fNumber !== rig.mount.fNumber) {
    const stopped = withStop(rig, fNumber);
    const { sensor } = stopped.camera;
    const whiteE = sensor === undefined ? {} : { whiteE: sensor.whiteE };
    add({ change: 'stop', fNumber, ...whiteE, ...(await outcome(stopped, scoring)) });
  }
  const [best] = gains;
  if (beyond === undefined && best !== undefined && best.gain > 0)
    add({
      change: 'lens',
      coefficient: best.coefficient,
      margin: best.margin,
      met: best.margin >= 0,
    });
  const meeting = candidates.filter(({ met }) => met);
  const others = candidates.filter(({ met }) => !met).sort((a, b) => b.margin - a.margin);
  return [...(beyond === undefined ? [] : [beyond]), ...meeting, ...others];
}

/** A gain that is worth a word. */
const LEAST_GAIN = 0.005;

async function outcome(rig: Rig, scoring: Scoring): Promise<{ margin: number; met: boolean }> {
  const margin = await scoring.margin(rig);
  return { margin, met: margin >= 0 };
}

/** The rule that fails by most with a lens and a mount without error, if any does. */
async function beyondAnyLens(rig: Rig, scoring: Scoring): Promise<Advice | undefined> {
  const perfect = perfectRig(rig);
  const decode = await scoring.triedMargin(perfect);
  let worst: Advice | undefined;
  const look = (rule: PixelRule['kind'], margin: number) => {
    if (margin < Math.min(0, worst?.margin ?? 0)) worst = { change: 'task', rule, margin, met: false };
  };
  look('decode', decode);
  if (!scoring.hasOptics) return worst;
  const bench = benchFor(perfect);
  for (const rule of scoring.rules)
    for (const point of scoring.points) look(rule.kind, judgeRule(bench, rule, point, 'rough').margin);
  return worst;
}

/** Steps of the first look over focus. */
const FOCUS_STEPS = 14;

/** The sensor shift with the largest margin, to about a seventieth of the range of foci. */
function bestShiftUm(rig: Rig, scoring: Scoring): number {
  const reachUm = focusReachUm(rig, scoring);
  const middle = rig.mount.sensorShiftUm;
  const margin = (shiftUm: number, floor?: number) => scoring.searchMargin(withShift(rig, shiftUm), floor);
  let best = { x: middle, value: margin(middle) };
  const step = (2 * reachUm) / FOCUS_STEPS;
  for (let i = 0; i <= FOCUS_STEPS; i++) {
    const x = middle - reachUm + i * step;
    const value = margin(x, best.value);
    if (value > best.value) best = { x, value };
  }
  const refined = goldenMaximum(margin, best.x - step, best.x + step, 0.2 * step);
  return tidy(refined.value > best.value ? refined.x : best.x, 2);
}

/** How far from the sensor the foci of any part of the pupil lie in any zone. */
function focusReachUm(rig: Rig, { points }: Scoring): number {
  let reach = 0;
  for (const { xMm, yMm } of points)
    for (const band of rig.camera.bands)
      for (const { nm, wavefront } of bandLines(rig, xMm, yMm, band)) {
        const { w40, w31, w22, w20 } = wavefront;
        const waves = Math.abs(w20) + Math.abs(w22) + 2 * Math.abs(w40) + Math.abs(w31) + 0.5;
        reach = Math.max(reach, waves / defocusWaves(1, rig.mount.fNumber, nm / 1000));
      }
  return reach;
}

/** Half stops that are looked at, from the lens's own stop on. */
const HALF_STOPS = 10;

/** Of the half stops that meet the closed-form rules the one nearest to the stop in use, which costs the least light or depth; else the one
 * with the largest margin. The change of light is included. */
function bestStop(rig: Rig, scoring: Scoring): number {
  const { fNumber: now } = rig.mount;
  let best = { fNumber: now, margin: scoring.searchMargin(rig) };
  for (let half = 0; half <= HALF_STOPS; half++) {
    const fNumber = Math.max(rig.lens.fNumber, tidy(rig.lens.fNumber * 2 ** (half / 4), 2));
    const floor = Math.min(best.margin, 0);
    const margin = scoring.searchMargin(withStop(rig, fNumber), floor - 1e-12);
    const isNearer = Math.abs(Math.log(fNumber / now)) < Math.abs(Math.log(best.fNumber / now));
    const isBetter = best.margin >= 0 ? margin >= 0 && isNearer : margin > best.margin;
    if (isBetter) best = { fNumber, margin };
  }
  return best.fNumber;
}

/** A number as one would set it. */
function tidy(value: number, digits: number): number {
  return Number(value.toPrecision(digits));
}
