/** `start`: a folder to begin from. */
import { Command } from 'commander';
import { type CommonTexts, commonOptions, readThreads } from './common-options.js';
import { checkOutputs, readDestination } from './destinations.js';
import { interruptible } from './interrupt.js';
import { OptionValues } from './option-values.js';
import { deliver, print } from './output.js';

export function startCommand(): Command {
  const command = new Command('start')
    .usage('FOLDER ...')
    .summary('make a folder with a rig, a task, a recipe and scenes to begin from')
    .description(
      'Makes a folder to begin from: a commented rig, task and recipe of a fruit packing hall, scenes, and the schemas with which ' +
        'an editor checks and completes the files. Files that are there already are never touched.',
    )
    .argument('<FOLDER>', 'folder to fill; made where there is none');
  for (const option of commonOptions('the list of the files made')) command.addOption(option);
  return command
    .addHelpText('after', '\nExample:\n  foreglass start hall')
    .action(async (folder: string, texts: CommonTexts) => {
      const values = new OptionValues();
      values.path('FOLDER', folder);
      readThreads(values, texts);
      const json = readDestination(values, '--json', texts.json);
      await checkOutputs(values, {}, { '--json': json });
      values.check();

      const { start } = await import('../jobs/start.js');
      const record = await interruptible((signal) => start({ folder, signal }));

      await deliver(json, record);
      if (texts.quiet || json.kind === 'stdout') return;
      const { startSummary } = await import('../report/start-summary.js');
      await print(startSummary(record));
    });
}
