/** Whether a changed rig still meets a task: yes or no, for those who look for where it ends. */
import { InputError } from '../errors.js';
import type { Rule } from '../files/load-task.js';
import { edgeWidthUm } from '../optics/edge-width.js';
import type { FieldPoint, FieldSpec } from '../optics/field-points.js';
import type { Rig } from '../optics/rig.js';
import { bandViews } from './bench.js';
import { isOpticsRule, judgeRule, type LaidOut, layOut } from './evaluate.js';
import { type Trials, tryAt } from './verdict.js';

/** Looks at the closed-form rules in all zones, and tries the symbols of `decode` in the zone with the widest edges. */
export class MetCheck {
  readonly #rules: readonly Rule[];
  readonly #fields: readonly FieldSpec[];
  readonly #trials: Trials;
  /** Rule and zone that failed last: the likeliest to fail again. */
  #suspect = { rule: 0, zone: 0 };

  constructor(rules: readonly Rule[], fields: readonly FieldSpec[], trials: Trials) {
    this.#rules = rules;
    this.#fields = fields;
    this.#trials = trials;
  }

  /** Whether there are closed-form rules, and whether there are symbols to try. */
  get hasOptics(): boolean {
    return this.#rules.some(({ kind }) => kind !== 'decode');
  }

  get hasTrials(): boolean {
    return this.#rules.some(({ kind }) => kind === 'decode');
  }

  async isMet(rig: Rig): Promise<boolean> {
    return this.isMetByOptics(rig) && (await this.isMetByTrials(rig));
  }

  /** The closed-form rules in all zones. */
  isMetByOptics(rig: Rig): boolean {
    const laidOut = this.#layOut(rig);
    if (laidOut === undefined) return false;
    if (!this.#isMetAt(laidOut, this.#suspect.rule, this.#suspect.zone)) return false;
    for (const rule of laidOut.rules.keys())
      for (const zone of laidOut.points.keys()) {
        if (this.#isMetAt(laidOut, rule, zone)) continue;
        this.#suspect = { rule, zone };
        return false;
      }
    return true;
  }

  /** The rules that are tried, in the zone with the widest edges. */
  async isMetByTrials(rig: Rig): Promise<boolean> {
    const laidOut = this.#layOut(rig);
    if (laidOut === undefined) return false;
    for (const rule of laidOut.rules) {
      if (rule.kind !== 'decode') continue;
      if (!(await tryAt(rig, rule, widestEdges(laidOut), this.#trials)).met) return false;
    }
    return true;
  }

  /** undefined where the rig is too steep to be computed, or folded over. */
  #layOut(rig: Rig): LaidOut | undefined {
    try {
      return layOut(rig, this.#rules, this.#fields);
    } catch (error) {
      if (error instanceof InputError) return undefined;
      throw error;
    }
  }

  #isMetAt({ bench, rules, points }: LaidOut, at: number, zone: number): boolean {
    const rule = rules[at];
    return !isOpticsRule(rule) || judgeRule(bench, rule, points[zone], 'rough').met;
  }
}

/** The zone in which edges along or across the radius are widest. */
function widestEdges({ bench, points }: LaidOut): FieldPoint {
  const { camera } = bench.rig;
  const width = (point: FieldPoint) => {
    const widths = bandViews(bench, point).flatMap(({ lines, fNumber }) =>
      ([0, 90] as const).map((direction) => edgeWidthUm(lines, fNumber, camera, direction, 'rough')),
    );
    return Math.max(...widths);
  };
  return points.reduce((widest, point) => (width(point) > width(widest) ? point : widest));
}
