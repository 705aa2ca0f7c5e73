import { describe, expect, test } from 'vitest';
import { parseShard } from '../../src/dataset/shard.js';

const SLURM = {
  SLURM_ARRAY_TASK_ID: '14',
  SLURM_ARRAY_TASK_COUNT: '4',
  SLURM_ARRAY_TASK_MIN: '10',
  SLURM_ARRAY_TASK_STEP: '2',
};

describe('a shard', () => {
  test.each([
    ['3/8', {}, { index: 3, of: 8 }],
    ['env/8', { JOB_COMPLETION_INDEX: '2' }, { index: 3, of: 8 }],
    ['env', SLURM, { index: 3, of: 4 }],
    ['env', { SLURM_ARRAY_TASK_ID: '0', SLURM_ARRAY_TASK_COUNT: '5' }, { index: 1, of: 5 }],
    ['3/8', SLURM, { index: 3, of: 8 }],
  ])('%s in %j', (text, environment, shard) => {
    expect(parseShard(text, environment)).toEqual(shard);
  });

  test.each([
    ['3', {}, "is no shard, found '3'."],
    ['three/8', {}, "is no shard, found 'three/8'."],
    ['-1/8', {}, "is no shard, found '-1/8'."],
    ['0/8', {}, 'is out of range, found 0/8.'],
    ['9/8', {}, 'is out of range, found 9/8.'],
    ['env/2', { JOB_COMPLETION_INDEX: '2' }, 'is out of range, found 3/2.'],
    [
      'env',
      { JOB_COMPLETION_INDEX: '2' },
      'the number of the shard is not in the environment, found SLURM_ARRAY_TASK_ID not set, JOB_COMPLETION_INDEX = 2.',
    ],
    ['env/4', { JOB_COMPLETION_INDEX: '' }, 'the number of the shard is not in the environment'],
  ])('%s in %j is refused', (text, environment, words) => {
    expect(() => parseShard(text, environment)).toThrow(words);
  });
});
