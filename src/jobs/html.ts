/** `--html` of `judge`, `sweep`, `derive` and `measure`: their reports as pages, each one file that loads nothing. That of `zones` needs
 * figures of its own: `zones-html.ts`. Everything is loaded where a page is wanted: the plotting library takes a tenth of a second. */
import { parseRig } from '../files/load-rig.js';
import type { RigFile } from '../files/schemas/rig.js';
import type { MeasureReport } from '../measure/figures.js';
import type { Rig } from '../optics/rig.js';
import type { DeriveReport } from '../prescription/derive-report.js';
import type { JudgeReport } from './judge.js';
import type { SweepReport } from './sweep.js';

/** A verdict as a text of HTML. @param report what `judge` made of the same rig */
export async function judgeHtml(rig: Rig, report: JudgeReport): Promise<string> {
  const { judgePage } = await import('../report/html/judge-page.js');
  return judgePage(rig, report);
}

/** A sweep as a text of HTML. @param report what `sweep` made of the same rig */
export async function sweepHtml(rig: Rig | RigFile, report: SweepReport): Promise<string> {
  const { sweepPage } = await import('../report/html/sweep-page.js');
  return sweepPage('axisPx' in rig.mount ? (rig as Rig) : parseRig(rig as RigFile), report);
}

/** A derived lens as a text of HTML. @param report of what `derive` returned */
export async function deriveHtml(report: DeriveReport): Promise<string> {
  const { derivePage } = await import('../report/html/derive-page.js');
  return derivePage(report);
}

/** A measurement as a text of HTML. @param rig the one that the figures are held against, if any */
export async function measureHtml(report: MeasureReport, rig?: Rig): Promise<string> {
  const { measurePage } = await import('../report/html/measure-page.js');
  return measurePage(report, rig?.lens.name);
}
