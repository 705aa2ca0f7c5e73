/** `worker`: makes the pictures that `dataset --queue` hands out. */
import { Command } from 'commander';
import { type CommonTexts, commonOptions, GROUP, grouped, readThreads } from './common-options.js';
import { readDestination } from './destinations.js';
import { interruptible } from './interrupt.js';
import { OptionValues } from './option-values.js';
import { deliver, print } from './output.js';

interface WorkerTexts extends CommonTexts {
  queue: string;
  idle?: string;
  deadAfter: string;
}

export function workerCommand(): Command {
  const command = new Command('worker')
    .summary('makes the pictures that dataset --queue hands out')
    .description(
      'Takes ranges of pictures from a Redis server and makes them, until Ctrl-C. Start as many on as many machines as there are; each must ' +
        'find the recipe, its scenes and the folder of the data set under the names that the queue was filled with. The pictures of a ' +
        'worker that dies go to another.',
    )
    .usage('--queue URL ...')
    .addOption(
      grouped(GROUP.running, '--queue <url>', 'the Redis server: redis://HOST:6379').makeOptionMandatory(),
    )
    .addOption(
      grouped(
        GROUP.running,
        '--idle <seconds>',
        'end when nothing has come for so long (default: wait for ever)',
      ),
    )
    .addOption(
      grouped(
        GROUP.running,
        '--dead-after <seconds>',
        'a worker that is silent for so long counts as dead',
      ).default('30', '30'),
    );
  for (const option of commonOptions('what was made')) command.addOption(option);
  return command
    .addHelpText('after', '\nExample:\n  foreglass worker --queue redis://queue.example:6379')
    .action(async (texts: WorkerTexts) => {
      const values = new OptionValues();
      const json = readDestination(values, '--json', texts.json);
      const options = {
        queue: texts.queue,
        idleSeconds: values.number('--idle', texts.idle, { min: 0, aboveMin: true }),
        deadSeconds: values.number('--dead-after', texts.deadAfter, { min: 1, max: 3600 }),
        threads: readThreads(values, texts),
      };
      values.check();
      const { workOnQueue } = await import('../jobs/dataset-worker.js');
      const record = await interruptible((signal) => workOnQueue({ ...options, signal }));
      await deliver(json, record);
      if (texts.quiet || json.kind === 'stdout') return;
      await print(`Made ${record.made} pictures in ${record.ranges} ranges.\n`);
    });
}
