/** Is it good enough: the verdict on a task, zone by zone, and what stands behind it. */
import type { Task } from '../files/load-task.js';
import { defaultFields, type FieldPoint } from '../optics/field-points.js';
import type { Rig } from '../optics/rig.js';
import { type Advice, adviceFor } from './advice.js';
import { isOpticsRule, judgeRule, type LaidOut, layOut } from './evaluate.js';
import { type PartGain, partGains } from './gains.js';
import { cornerField, diagonalPoints, largestField } from './largest-field.js';
import type { PixelRuleOf } from './rules.js';
import { Scoring } from './scoring.js';
import { type RuleVerdict, type Trials, tryAt, verdicts } from './verdict.js';
import { taskWarnings } from './warnings.js';

export interface JudgeReport {
  /** Name of the task. */
  task: string;
  /** Name of the lens. */
  rig: string;
  fNumber: number;
  sensorShiftUm: number;
  model: 'third-order';
  /** Draws the symbols, their places and the noise of `decode`. */
  seed: number;
  met: boolean;
  /** The least margin of all rules in all zones. */
  margin: number;
  /** The largest h such that everything is met from the axis out to it along the diagonals of the sensor: 0 where it is not met on the axis,
   * `cornerField` where it is met all over. */
  largestField: number;
  /** h of the sensor's farthest corner. */
  cornerField: number;
  rules: RuleVerdict[];
  /** What the least margin gains when a part of the lens's or the mount's errors is set to zero, the largest gain first. */
  limits: PartGain[];
  /** What to change, the first thing first. Empty where everything is met. */
  advice: Advice[];
  warnings: string[];
}

/** Judge a task on a rig.
 * @throws {InputError} see `layOut` */
export async function judgeTask(rig: Rig, task: Task, trials: Trials): Promise<JudgeReport> {
  const laidOut = layOut(rig, task.rules, task.zones ?? defaultFields(rig));
  const rules = await verdicts(laidOut, trials);
  const met = rules.every((rule) => rule.met);
  const scoring = new Scoring(laidOut, rules, trials);
  const now = await scoring.margin(rig);
  const limits = await partGains(rig, scoring, now);
  return {
    task: task.name,
    rig: rig.lens.name,
    fNumber: rig.mount.fNumber,
    sensorShiftUm: rig.mount.sensorShiftUm,
    model: 'third-order',
    seed: trials.seed,
    met,
    margin: Math.min(...rules.map(({ margin }) => margin)),
    largestField: await metField(laidOut, trials),
    cornerField: cornerField(rig),
    rules,
    limits,
    advice: met ? [] : await adviceFor(rig, scoring, limits, now),
    warnings: taskWarnings(laidOut),
  };
}

/** Halvings of the field for rules that are tried: to 1/32. */
const TRIED_HALVINGS = 5;

/** The largest field at which all rules are met. Trials are taken to get no easier with the field; they begin where the other rules end. */
async function metField({ bench, rules }: LaidOut, trials: Trials): Promise<number> {
  const optics = rules.filter(isOpticsRule);
  const isMetAt = (points: readonly FieldPoint[]) =>
    optics.every((rule) => points.every((point) => judgeRule(bench, rule, point, 'rough').met));
  let met = largestField(bench.rig, isMetAt);
  for (const rule of rules.filter((one) => one.kind === 'decode'))
    met = await decodedField(bench.rig, rule, met, trials);
  return met;
}

async function decodedField(
  rig: Rig,
  rule: PixelRuleOf<'decode'>,
  farthest: number,
  trials: Trials,
): Promise<number> {
  const isMet = async (h: number) => {
    for (const point of diagonalPoints(rig, h))
      if (!(await tryAt(rig, rule, point, trials)).met) return false;
    return true;
  };
  if (await isMet(farthest)) return farthest;
  let [met, unmet] = [0, farthest];
  if (!(await isMet(0))) return 0;
  for (let i = 0; i < TRIED_HALVINGS; i++) {
    const middle = 0.5 * (met + unmet);
    if (await isMet(middle)) met = middle;
    else unmet = middle;
  }
  return met;
}
