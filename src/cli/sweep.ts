/** `sweep`: where a task or an MTF is best over apertures, focus positions and other numbers of the rig. */
import { Command, type Option } from 'commander';
import { type CommonTexts, commonOptions, GROUP, grouped, readThreads } from './common-options.js';
import { checkOutputs, readDestination } from './destinations.js';
import { EXIT } from './failure.js';
import { htmlOption, readHtmlFile } from './html-option.js';
import { interruptible } from './interrupt.js';
import { numberList, variedKey } from './number-list.js';
import { OptionValues } from './option-values.js';
import { deliver, deliverText, paintFor, print, warn } from './output.js';
import { openProgressBar } from './progress.js';

interface SweepTexts extends CommonTexts {
  rig: string;
  task?: string;
  lpPerMm?: string;
  wavefrontRms?: boolean;
  fields?: string;
  fNumber?: string;
  sensorShift?: string;
  vary?: string[];
  keepLight?: boolean;
  budget?: boolean;
  depth?: boolean;
  seed?: string;
  csv?: true | string;
  html?: string;
}

const LIST = 'numbers with commas between, or FROM..TO/COUNT';

function sweepOptions(): Option[] {
  return [
    grouped(GROUP.rig, '--rig <file>', 'rig file: lens, camera and mount').makeOptionMandatory(),
    grouped(GROUP.task, '--task <file>', 'sweep the least margin of this task over its rules and zones'),
    grouped(
      GROUP.task,
      '--lp-per-mm <f>',
      'or sweep the MTF of lens and camera at this frequency, lowest over directions, bands and zones',
    ),
    grouped(
      GROUP.task,
      '--wavefront-rms',
      "or sweep the RMS of the wavefront at the lens's own wavelength, largest over the zones",
    ),
    grouped(GROUP.task, '--fields <list>', 'zones of MTF and RMS, as in zones (those of a task are its own)'),
    grouped(GROUP.task, '--seed <number>', 'draws the symbols of decode and the noise (default: 1)'),
    grouped(GROUP.sweep, '--f-number <list>', `f-numbers: ${LIST}, evenly in stops`),
    grouped(
      GROUP.sweep,
      '--sensor-shift <list>',
      `sensor shifts in micrometres, + away from the lens: ${LIST}`,
    ),
    grouped(
      GROUP.sweep,
      '--vary <path=list>',
      `values of any number in the rig file, such as lens.waves.W131=0,1,2; may be given more than once: ${LIST}`,
    ).argParser((text: string, before: string[] = []) => [...before, text]),
    grouped(
      GROUP.sweep,
      '--keep-light',
      "leave camera.sensor.white_e as it is at every stop (default: it goes with the stop's area, from mount.f_number of the rig)",
    ),
    grouped(
      GROUP.sweep,
      '--budget',
      'how far each coefficient may go up and down, alone, until the task is not met any more; at the best place of the sweep',
    ),
    grouped(GROUP.sweep, '--depth', 'from how near to how far away the object may lie, there, too'),
    grouped(
      GROUP.output,
      '--csv [file]',
      'the samples as CSV, on stdout in place of the table, or in the file',
    ),
  ];
}

/** @param endWith takes the exit status of a task that is not met */
export function sweepCommand(endWith: (status: number) => void): Command {
  const command = new Command('sweep')
    .usage('--rig FILE --task FILE --f-number LIST --sensor-shift LIST ...')
    .summary('the best stop and focus for a task; what it allows each coefficient; the depth')
    .description(
      'Looks at a task or an MTF over stops, focus positions and any other numbers of the rig, and searches on between the best samples. ' +
        'Stopping down costs light, and so detect and decode. Also: how much of each coefficient the task allows (--budget), and how deep ' +
        'the object may lie (--depth).',
    );
  for (const option of sweepOptions()) command.addOption(option);
  command.addOption(htmlOption('the best place on a map of the samples, budget and depth'));
  for (const option of commonOptions('the figures')) command.addOption(option);
  return command
    .addHelpText(
      'after',
      `
Example:
  foreglass sweep --rig tags.rig.yaml --task read-tags.task.yaml --f-number 2.8..8/7 --sensor-shift=-60..60/7

Exit status: 0 the task is met at the best place (or no task was swept), 1 it is not.`,
    )
    .action(async (texts: SweepTexts) => {
      const { parseFieldPoint } = await import('../optics/field-points.js');
      const values = new OptionValues();
      const rigFile = values.path('--rig', texts.rig) ?? '';
      const taskFile = values.path('--task', texts.task);
      const options = {
        lpPerMm: values.number('--lp-per-mm', texts.lpPerMm, { min: 0, aboveMin: true }),
        wavefrontRms: texts.wavefrontRms,
        fields: values
          .items('--fields', texts.fields)
          ?.map((item) => values.attempt('--fields', () => parseFieldPoint(item)))
          .filter((field) => field !== undefined),
        fNumbers: numberList(values, '--f-number', texts.fNumber, { min: 0, aboveMin: true }, true),
        sensorShiftsUm: numberList(values, '--sensor-shift', texts.sensorShift),
        vary: texts.vary?.map((text) => variedKey(values, '--vary', text)).filter((one) => one !== undefined),
        keepLight: texts.keepLight,
        budget: texts.budget,
        depth: texts.depth,
        seed: values.number('--seed', texts.seed, { min: 0, integer: true }),
        threads: readThreads(values, texts),
      };
      const json = readDestination(values, '--json', texts.json);
      const csv = readDestination(values, '--csv', texts.csv);
      const inputs = { '--rig': rigFile, ...(taskFile === undefined ? {} : { '--task': taskFile }) };
      const page = readHtmlFile(values, texts.html);
      await checkOutputs(values, inputs, { '--json': json, '--csv': csv, '--html': page });
      values.check();

      const { rig, report } = await interruptible(async (signal) => {
        const [{ loadRigFile }, { loadTask }, { sweep }, bar] = await Promise.all([
          import('../files/load-rig.js'),
          import('../files/load-task.js'),
          import('../jobs/sweep.js'),
          openProgressBar(texts.quiet === true),
        ]);
        try {
          const rig = loadRigFile(rigFile);
          const task = taskFile === undefined ? undefined : loadTask(taskFile);
          const onProgress = (step: Parameters<typeof bar.show>[0]) => bar.show(step);
          return { rig, report: await sweep({ ...options, rig, task, signal, onProgress }) };
        } finally {
          bar.end();
        }
      });

      endWith(report.met === false ? EXIT.notMet : EXIT.done);
      warn(report.warnings, texts.quiet);
      await deliver(json, report);
      if (csv.kind !== 'none') {
        const { sweepCsv } = await import('../report/sweep-csv.js');
        await deliverText(csv, sweepCsv(report));
      }
      if (page.kind === 'file') {
        const { sweepHtml } = await import('../jobs/html.js');
        await deliverText(page, await sweepHtml(rig, report));
      }
      if (json.kind === 'stdout' || csv.kind === 'stdout') return;
      const { sweepTable } = await import('../report/sweep-table.js');
      await print(sweepTable(report, await paintFor(process.stdout)));
    });
}
