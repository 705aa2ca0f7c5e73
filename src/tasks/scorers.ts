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

/** The closed-form rules of a task; or the MTF, or the RMS.
 * @param rules of the task, in pixels of the rig at hand */
export function scorersOf(figure: SweepFigure, rules: readonly PixelRule[]): Scorer[] {
  switch (figure.kind) {
    case 'margin':
      return rules.filter(isOpticsRule).map(scorerOf);
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

/** Edges within a module, which stand for symbols where their rates are alike: all read, or all unread. */
export function standInScorers(rules: readonly PixelRule[]): Scorer[] {
  return rules.filter((rule) => rule.kind === 'decode').map((rule) => scorerOf(blurWithinModule(rule)));
}

function scorerOf(rule: OpticsRule): Scorer {
  return {
    rule: rule.kind,
    look: (bench, place, accuracy) => judgeRule(bench, rule, place, accuracy),
  };
}
