/** `dataset`: labelled pictures over the spread of lens and camera. */
import { Command } from 'commander';
import { type CommonTexts, commonOptions, GROUP, grouped, readThreads } from './common-options.js';
import { type Destination, readDestination } from './destinations.js';
import { interruptible } from './interrupt.js';
import { OptionValues } from './option-values.js';
import { deliver, print, warn } from './output.js';
import { openProgressBar } from './progress.js';

interface DatasetTexts extends CommonTexts {
  out: string;
  limit?: string;
  dryRun?: boolean;
  fresh?: boolean;
  shard?: string;
  merge?: boolean;
  queue?: string;
}

const SHARING = 'Work shared by several machines:';

export function datasetCommand(): Command {
  const command = new Command('dataset')
    .summary('labelled training images over lens and camera tolerances')
    .description(
      'Makes pictures of scenes through lenses and cameras drawn from the distributions of a recipe, with labels that lie where the ' +
        'lens puts the things. A run that was stopped goes on when it is started again: what is there is verified, and what is ' +
        'missing or damaged is made. Every picture depends on the recipe, its seed and its number alone.',
    )
    .usage('RECIPE --out FOLDER ...')
    .argument('<RECIPE>', 'recipe file: rigs, scenes with labels, what is varied and how')
    .addOption(
      grouped(
        GROUP.output,
        '--out <folder>',
        'where images/, labels.json, records.jsonl and dataset.json go',
      ).makeOptionMandatory(),
    )
    .addOption(grouped(GROUP.output, '--limit <number>', 'the first so many pictures only'))
    .addOption(
      grouped(GROUP.output, '--dry-run', 'write nothing: say how many pictures, how many bytes, how long'),
    )
    .addOption(
      grouped(
        GROUP.output,
        '--fresh',
        'remove the data set that is in the folder first, whatever recipe it came from',
      ),
    )
    .addOption(
      grouped(
        SHARING,
        '--shard <i/n>',
        'make every n-th picture, from the i-th on; env takes i and n of a Slurm array, env/n takes i of an indexed job of Kubernetes',
      ),
    )
    .addOption(
      grouped(
        SHARING,
        '--merge',
        'the shards are in the folder: verify all pictures, then write labels and records',
      ),
    )
    .addOption(
      grouped(
        SHARING,
        '--queue <url>',
        'hand the pictures to `foreglass worker` on other machines, over a Redis server: redis://HOST:6379; the folder is shared',
      ),
    );
  for (const option of commonOptions('what was made')) command.addOption(option);
  return command
    .addHelpText('after', '\nExample:\n  foreglass dataset training.recipe.yaml --out training --limit 20')
    .action(async (recipe: string, texts: DatasetTexts) => {
      const values = new OptionValues();
      const json = readDestination(values, '--json', texts.json);
      const { parseShard } = await import('../dataset/shard.js');
      const { shard: shardText } = texts;
      const options = {
        recipe: values.path('RECIPE', recipe) ?? '',
        out: values.path('--out', texts.out) ?? '',
        limit: values.number('--limit', texts.limit, { min: 1, integer: true }),
        fresh: texts.fresh,
        shard:
          shardText === undefined
            ? undefined
            : values.attempt('--shard', () => parseShard(shardText, process.env)),
        threads: readThreads(values, texts),
      };
      refuseTogether(values, texts);
      values.check();
      await run(options, texts, json);
    });
}

type RunOptions = Omit<import('../jobs/dataset.js').DatasetOptions, 'signal' | 'onProgress'>;

async function run(options: RunOptions, texts: DatasetTexts, json: Destination): Promise<void> {
  const [jobs, report] = await Promise.all([
    import('../jobs/dataset.js'),
    import('../report/dataset-summary.js'),
  ]);
  const bar = await openProgressBar(texts.quiet === true);
  const onProgress = (progress: import('../jobs/dataset.js').DatasetProgress) => {
    const { stage, done, total } = progress;
    bar.show({
      stage: stage === 'verify' ? `verify ${done}/${total}` : report.progressWords(progress),
      done,
      total,
    });
  };
  const isClosing = !texts.quiet && json.kind !== 'stdout';
  if (texts.dryRun) {
    const forecast = await interruptible((signal) => jobs.forecastDataset({ ...options, signal }));
    warn(forecast.warnings, texts.quiet);
    await deliver(json, forecast);
    if (isClosing) await print(report.forecastSummary(forecast));
    return;
  }
  const record = await interruptible(async (signal) => {
    try {
      const watched = { ...options, signal, onProgress };
      if (texts.queue !== undefined) {
        const { queueDataset } = await import('../jobs/dataset-queue.js');
        return await queueDataset({ ...watched, queue: texts.queue });
      }
      return await (texts.merge ? jobs.mergeDataset(watched) : jobs.dataset(watched));
    } finally {
      bar.end();
    }
  });
  warn(record.warnings, texts.quiet);
  await deliver(json, record);
  if (isClosing) await print(report.datasetSummary(record));
}

/** Options that say two things at once. */
function refuseTogether(values: OptionValues, texts: DatasetTexts): void {
  const rivals: [keyof DatasetTexts, string][] = [
    ['shard', '--shard'],
    ['merge', '--merge'],
    ['queue', '--queue'],
  ];
  const there = rivals.filter(([key]) => texts[key] !== undefined).map(([, name]) => name);
  if (texts.merge && texts.fresh) there.push('--fresh');
  if (texts.shard !== undefined && texts.fresh) {
    values.add({
      key: '--fresh',
      message: 'would remove what the other shards have made',
      advice: 'Begin in another folder, or remove this one before the shards are started.',
    });
  }
  if (there.length > 1) {
    values.add({ key: there.join(' and '), message: 'do not go together', advice: 'Leave all but one out.' });
  }
}
