/** How much of each coefficient a task allows. */
import { COEFFICIENTS, type Coefficient, type Rig } from '../optics/rig.js';
import { endOfRange } from './end-of-range.js';
import { withWaves } from './lens-parts.js';
import type { MetCheck } from './met-check.js';

export interface CoefficientBudget {
  coefficient: Coefficient;
  /** As the rig has it, in waves. */
  present: number;
  /** The lowest and the highest value, everything else as it is, between which the task is met all the way from `present`, in waves. null:
   * no end within `BUDGET_REACH` waves of it; both are `present` where the task is not met as things stand. */
  lowest: number | null;
  highest: number | null;
}

/** How far a coefficient is followed, in waves. */
export const BUDGET_REACH = 200;

/** The first step, in waves. */
const FIRST_STEP = 0.05;

/** The budget of each coefficient, one at a time, in both directions. */
export async function coefficientBudgets(
  rig: Rig,
  check: MetCheck,
  onCoefficient: (done: number, total: number) => void,
): Promise<CoefficientBudget[]> {
  const budgets: CoefficientBudget[] = [];
  const isMetNow = await check.isMet(rig);
  for (const coefficient of COEFFICIENTS) {
    const present = rig.lens.waves[coefficient];
    const end = async (sign: number) => {
      if (!isMetNow) return present;
      const rigAt = (waves: number) => withWaves(rig, { [coefficient]: present + sign * waves });
      const distance = await endOfRange({ rigAt, step: FIRST_STEP, reach: BUDGET_REACH }, check);
      return distance === null ? null : present + sign * distance;
    };
    budgets.push({ coefficient, present, lowest: await end(-1), highest: await end(1) });
    onCoefficient(budgets.length, COEFFICIENTS.length);
  }
  return budgets;
}
