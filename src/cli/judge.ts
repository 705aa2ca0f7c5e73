/** `judge`: is the edge of the field good enough for a task. */
import { Command } from 'commander';
import {
  type CommonTexts,
  commonOptions,
  GROUP,
  grouped,
  type RigTexts,
  readRigValues,
  readThreads,
  rigOptions,
} from './common-options.js';
import { checkOutputs, readDestination } from './destinations.js';
import { EXIT } from './failure.js';
import { htmlOption, readHtmlFile } from './html-option.js';
import { interruptible } from './interrupt.js';
import { OptionValues } from './option-values.js';
import { deliver, deliverText, paintFor, print, warn } from './output.js';
import { openProgressBar } from './progress.js';

interface JudgeTexts extends RigTexts, CommonTexts {
  task: string;
  seed?: string;
  html?: string;
}

/** @param endWith takes the exit status of a task that is not met */
export function judgeCommand(endWith: (status: number) => void): Command {
  const command = new Command('judge')
    .usage('--rig FILE --task FILE ...')
    .summary('is the edge of the field good enough for a task, and by what margin')
    .description(
      'Judges each rule of a task in each of its zones: value, limit and margin. Says how far from the axis everything is met, which ' +
        'aberration limits it, and what to change first. Rules: contrast, placement, edge_blur, detect, decode (a decoder reads ' +
        'simulated symbols).',
    );
  for (const option of rigOptions()) command.addOption(option);
  command
    .addOption(
      grouped(GROUP.task, '--task <file>', 'task file: what the picture must show').makeOptionMandatory(),
    )
    .addOption(
      grouped(GROUP.task, '--seed <number>', 'draws the symbols of decode and the noise (default: 1)'),
    );
  command.addOption(htmlOption('the verdict, margins, what limits it, and the frame'));
  for (const option of commonOptions('the verdict')) command.addOption(option);
  return command
    .addHelpText(
      'after',
      '\nExample:\n  foreglass judge --rig tags.rig.yaml --task read-tags.task.yaml\n\nExit status: 0 the task is met, 1 it is not.',
    )
    .action(async (texts: JudgeTexts) => {
      const values = new OptionValues();
      const { rig: rigFile, overrides } = readRigValues(values, texts);
      const taskFile = values.path('--task', texts.task) ?? '';
      const seed = values.number('--seed', texts.seed, { min: 0, integer: true });
      const threads = readThreads(values, texts);
      const json = readDestination(values, '--json', texts.json);
      const page = readHtmlFile(values, texts.html);
      await checkOutputs(
        values,
        { '--rig': rigFile, '--task': taskFile },
        { '--json': json, '--html': page },
      );
      values.check();

      const { rig, report } = await interruptible(async (signal) => {
        const [{ loadRig }, { loadTask }, { judge }, bar] = await Promise.all([
          import('../files/load-rig.js'),
          import('../files/load-task.js'),
          import('../jobs/judge.js'),
          openProgressBar(texts.quiet === true),
        ]);
        try {
          const rig = loadRig(rigFile, overrides);
          const task = loadTask(taskFile);
          const options = { rig, task, seed, threads, signal };
          return { rig, report: await judge({ ...options, onProgress: (step) => bar.show(step) }) };
        } finally {
          bar.end();
        }
      });

      endWith(report.met ? EXIT.done : EXIT.notMet);
      warn(report.warnings, texts.quiet);
      await deliver(json, report);
      if (page.kind === 'file') {
        const { judgeHtml } = await import('../jobs/html.js');
        await deliverText(page, await judgeHtml(rig, report));
      }
      if (json.kind === 'stdout') return;
      const { judgeTable } = await import('../report/judge-table.js');
      await print(judgeTable(report, await paintFor(process.stdout)));
    });
}
