/** Which pictures a machine makes, where several share the work. */
import { InputError } from '../errors.js';

/** Every `of`-th picture, from the `index`-th on; `index` from 1. */
export interface Shard {
  index: number;
  of: number;
}

type Environment = Readonly<Record<string, string | undefined>>;

const ALLOWED = 'i/n with i from 1 to n; env in a Slurm array; env/n in an indexed job of Kubernetes';

/** Read `3/8`, `env` or `env/8`. With `env` the number is that of this task of a Slurm array (SLURM_ARRAY_TASK_ID and its companions), or of
 * this completion of an indexed job of Kubernetes (JOB_COMPLETION_INDEX, which says nothing of their number).
 * @throws {InputError} another text, a number out of range, variables that are not set */
export function parseShard(text: string, environment: Environment): Shard {
  const parts = /^(\d{1,9}|env)(?:\/(\d{1,9}))?$/.exec(text.trim());
  if (parts === null || (parts[1] !== 'env' && parts[2] === undefined)) {
    throw new InputError({ message: 'is no shard', found: `'${text}'`, allowed: ALLOWED });
  }
  const stated = parts[2] === undefined ? undefined : Number(parts[2]);
  const shard =
    parts[1] === 'env' ? shardOfTask(environment, stated) : { index: Number(parts[1]), of: stated! };
  if (shard.index >= 1 && shard.index <= shard.of) return shard;
  throw new InputError({
    message: 'is out of range',
    found: `${shard.index}/${shard.of}`,
    allowed: ALLOWED,
  });
}

function shardOfTask(environment: Environment, stated: number | undefined): Shard {
  const number = (name: string) => {
    const text = environment[name];
    return text !== undefined && /^\d{1,9}$/.test(text) ? Number(text) : undefined;
  };
  const task = number('SLURM_ARRAY_TASK_ID');
  const completion = number('JOB_COMPLETION_INDEX');
  if (task !== undefined) {
    const first = number('SLURM_ARRAY_TASK_MIN') ?? 0;
    const step = number('SLURM_ARRAY_TASK_STEP') ?? 1;
    const of = stated ?? number('SLURM_ARRAY_TASK_COUNT');
    if (of !== undefined) return { index: Math.floor((task - first) / step) + 1, of };
  } else if (completion !== undefined && stated !== undefined) {
    return { index: completion + 1, of: stated };
  }
  throw new InputError({
    message: 'the number of the shard is not in the environment',
    found: [
      ['SLURM_ARRAY_TASK_ID', task],
      ['JOB_COMPLETION_INDEX', completion],
    ]
      .map(([name, value]) => `${name} ${value === undefined ? 'not set' : `= ${value}`}`)
      .join(', '),
    allowed: ALLOWED,
    advice: 'State the number of shards behind env, or write i/n.',
  });
}
