/** `judge --html` and `sweep --html`: verdict and sweep as pages. */
import { parseRig } from '../files/load-rig.js';
import type { RigFile } from '../files/schemas/rig.js';
import type { Rig } from '../optics/rig.js';
import type { JudgeReport } from './judge.js';
import type { SweepReport } from './sweep.js';

/** A verdict as a text of HTML, one file that loads nothing. @param report what `judge` made of the same rig */
export async function judgeHtml(rig: Rig, report: JudgeReport): Promise<string> {
  const { judgePage } = await import('../report/html/judge-page.js');
  return judgePage(rig, report);
}

/** A sweep as a text of HTML, one file that loads nothing. @param report what `sweep` made of the same rig */
export async function sweepHtml(rig: Rig | RigFile, report: SweepReport): Promise<string> {
  const { sweepPage } = await import('../report/html/sweep-page.js');
  return sweepPage('axisPx' in rig.mount ? (rig as Rig) : parseRig(rig as RigFile), report);
}
