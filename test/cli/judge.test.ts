import { readFileSync, writeFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { loadRig } from '../../src/files/load-rig.js';
import { loadTask } from '../../src/files/load-task.js';
import { jsonText } from '../../src/files/write-data.js';
import { judge } from '../../src/jobs/judge.js';
import { CAUTION } from '../../src/report/caution.js';
import { judgeTable } from '../../src/report/judge-table.js';
import { CHILD_TIMEOUT_MS, runInside, runProgram } from './run-program.js';
import { type Folder, folderWithRig } from './small-rig.js';

/** Symbols are drawn, blurred and read; the machine may be busy with other tests. */
vi.setConfig({ testTimeout: 60_000 });

const TASK = `name: small task
zones: [axis, top_right]
require:
  - contrast: { feature_px: 4, at_least: 0.3 }
  - edge_blur: { at_most_px: 2 }
  - placement: { at_most_px: 1 }
  - detect: { feature_px: 6, contrast: 0.1 }
`;

let folder: Folder;
beforeAll(async () => {
  folder = await folderWithRig();
  writeFileSync(folder.at('met.task.yaml'), TASK);
  writeFileSync(folder.at('unmet.task.yaml'), TASK.replace('at_most_px: 2', 'at_most_px: 0.5'));
  writeFileSync(folder.at('mm.task.yaml'), TASK.replace('feature_px: 4', 'feature_mm: 1'));
  writeFileSync(
    folder.at('symbols.task.yaml'),
    'require: [{ decode: { symbol: qr, module_px: 2, success_at_least: 0.5, trials: 4 } }]',
  );
});
afterAll(() => folder.remove());

const run = (task: string, ...words: string[]) =>
  runInside(['judge', '--rig', folder.at('a.rig.yaml'), '--task', folder.at(`${task}.task.yaml`), ...words]);
const report = (task: string, overrides = {}) =>
  judge({
    rig: loadRig(folder.at('a.rig.yaml'), overrides),
    task: loadTask(folder.at(`${task}.task.yaml`)),
    threads: 1,
  });

describe('foreglass judge', () => {
  it('prints the verdict and ends with 0 where the task is met', async () => {
    const found = await report('met');
    expect(found.met).toBe(true);
    expect(await run('met')).toEqual({ status: 0, stdout: judgeTable(found), stderr: '' });
  });

  it('ends with 1 where it is not, says what to change and shows the caution', async () => {
    const { status, stdout, stderr } = await run('unmet');
    expect({ status, stderr }).toEqual({ status: 1, stderr: '' });
    expect(stdout).toContain('NOT MET');
    expect(stdout).toContain('What to change first: ');
    expect(stdout.replaceAll('\n', ' ')).toContain(CAUTION);
  });

  it('prints JSON alone with --json, with the same status', async () => {
    const { status, stdout } = await run('unmet', '--json');
    expect({ status, stdout }).toEqual({ status: 1, stdout: jsonText(await report('unmet')) });
    expect(JSON.parse(stdout)).toMatchObject({
      task: 'small task',
      met: false,
      largest_field: 0,
      rules: [{ rule: 'contrast', zones: [{ field: 0, met: true }, {}] }, { rule: 'edge_blur' }, {}, {}],
      limits: expect.any(Array),
    });
    expect(JSON.parse(stdout).advice[0]).toMatchObject({ change: 'task', rule: 'edge_blur', met: false });
  });

  it('writes the verdict to a file', async () => {
    const file = folder.at('verdict.json');
    expect((await run('met', '--json', file)).stdout).toBe(judgeTable(await report('met')));
    expect(readFileSync(file, 'utf8')).toBe(jsonText(await report('met')));
  });

  it('takes stop and focus from the command line', async () => {
    const { stdout } = await run('met', '--f-number', '8', '--sensor-shift', '30', '--json');
    expect(stdout).toBe(jsonText(await report('met', { fNumber: 8, sensorShiftUm: 30 })));
  });

  it('reads symbols, by the seed', async () => {
    const words = ['--seed', '3', '--threads', '1', '--json'];
    const { status, stdout } = await run('symbols', ...words);
    const { seed, rules } = JSON.parse(stdout);
    expect(status).toBe(0);
    expect(seed).toBe(3);
    expect(rules[0].zones[0]).toMatchObject({
      trials: 2,
      read: 2,
      misread: 0,
      interval: [expect.any(Number), 1],
    });
  });

  it('refuses sizes on the object where the rig has no scale, and options that are none', async () => {
    expect(await run('mm')).toMatchObject({
      status: 2,
      stderr: expect.stringMatching(/^error: require\[0\]\.contrast\.feature_mm: .*mount\.object_pixel_mm/),
    });
    expect(await run('met', '--seed', '-1', '--threads', '0')).toMatchObject({
      status: 2,
      stderr: expect.stringMatching(/--seed[\s\S]*--threads/),
    });
    expect(await runInside(['judge', '--rig', folder.at('a.rig.yaml')])).toMatchObject({
      status: 2,
      stderr: expect.stringContaining('--task'),
    });
  });

  it(
    'does so as a program of its own, with worker threads that end',
    async () => {
      const ended = await runProgram([
        'judge',
        '--rig',
        folder.at('a.rig.yaml'),
        '--task',
        folder.at('symbols.task.yaml'),
        '--threads',
        '2',
      ]);
      expect(ended).toMatchObject({ status: 0, stdout: expect.stringContaining('MET in every zone') });
    },
    CHILD_TIMEOUT_MS,
  );
});
