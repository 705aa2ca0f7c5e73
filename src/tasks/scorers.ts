/** What a sweep looks at: a task, an MTF or the wavefront. The more, the better. */
import type { Rule } from '../files/load-task.js';
import type { Accuracy } from '../numeric/gauss-legendre.js';
import { wavefrontAt, wavefrontRmsWaves } from '../optics/wavefront.js';
import type { Bench, Place } from './bench.js';
import { contrastAt } from './contrast.js';
import { isOpticsRule, judgeRule, type OpticsRule } from './evaluate.js';
import type { PixelRule } from './rules.js';
import { blurWithinModule } from './scoring.js';

export type SweepFigure =
  | { kind: 'margin'; rules: readonly Rule[] }
  | { kind: 'mtf'; lpPerMm: number }
  | { kind: 'wavefront_rms' };

/** One look at one place. */
export interface Scorer {
  /** The rule, of a task. */
  rule?: PixelRule['kind'];
  /** The figure as it is told, and the score to be made large: of a task its margin, of an MTF itself, of an RMS its negative. */
  look(bench: Bench, place: Place, accuracy: Accuracy): { value: number; margin: number };
}

/** @param rules of the task, in pixels of the rig at hand */
export function scorersOf(figure: SweepFigure, rules: readonly PixelRule[]): Scorer[] {
  switch (figure.kind) {
    case 'margin':
      return scoredRules(rules).map((rule) => ({
        rule: rule.kind,
        look: (bench, place, accuracy) => judgeRule(bench, rule, place, accuracy),
      }));
    case 'mtf': {
      const rule = { kind: 'contrast', lpPerMm: figure.lpPerMm, atLeast: 1 } as const;
      return [
        {
          look: (bench, place, accuracy) => {
            const { value } = contrastAt(bench, place, rule, accuracy);
            return { value, margin: value };
          },
        },
      ];
    }
    case 'wavefront_rms':
      return [
        {
          look: ({ rig }, { xMm, yMm }) => {
            const value = wavefrontRmsWaves(wavefrontAt(rig, xMm, yMm, rig.lens.wavelengthNm));
            return { value, margin: -value };
          },
        },
      ];
  }
}

/** The closed-form rules. Where there are none, edges within a module stand for symbols, to rank places that are all read or all unread. */
function scoredRules(rules: readonly PixelRule[]): OpticsRule[] {
  const optics = rules.filter(isOpticsRule);
  if (optics.length > 0) return optics;
  return rules.filter((rule) => rule.kind === 'decode').map((rule) => blurWithinModule(rule));
}
