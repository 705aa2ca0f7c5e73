import { readFileSync, writeFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { loadRigFile } from '../../src/files/load-rig.js';
import { loadTask } from '../../src/files/load-task.js';
import { jsonText } from '../../src/files/write-data.js';
import { type SweepOptions, sweep } from '../../src/jobs/sweep.js';
import { sweepCsv } from '../../src/report/sweep-csv.js';
import { sweepTable } from '../../src/report/sweep-table.js';
import { runInside } from './run-program.js';
import { type Folder, folderWithRig } from './small-rig.js';

let folder: Folder;
beforeAll(async () => {
  folder = await folderWithRig();
  writeFileSync(
    folder.at('a.task.yaml'),
    'name: small task\nzones: [axis, top_right]\nrequire:\n  - contrast: { feature_px: 4, at_least: 0.5 }\n  - detect: { feature_px: 6, contrast: 0.05 }\n',
  );
  writeFileSync(folder.at('hard.task.yaml'), 'require: [{ contrast: { feature_px: 4, at_least: 0.99 } }]');
});
afterAll(() => folder.remove());

const run = (...words: string[]) => runInside(['sweep', '--rig', folder.at('a.rig.yaml'), ...words]);
const report = (options: Partial<SweepOptions>) =>
  sweep({ rig: loadRigFile(folder.at('a.rig.yaml')), threads: 1, ...options });
const task = () => loadTask(folder.at('a.task.yaml'));

describe('foreglass sweep', () => {
  it('prints a grid of two axes and the best place between', async () => {
    const { status, stdout, stderr } = await run(
      ...[
        '--task',
        folder.at('a.task.yaml'),
        '--f-number',
        '2.8..5.6/3',
        '--sensor-shift=-20..20/3',
        '--budget',
      ],
    );
    const expected = await report({
      task: task(),
      fNumbers: [2.8, 3.95979797464, 5.6],
      sensorShiftsUm: [-20, 0, 20],
      budget: true,
    });
    expect({ status, stdout, stderr }).toEqual({ status: 0, stdout: sweepTable(expected), stderr: '' });
    expect(stdout).toMatch(/f-number\s+sensor shift um/);
    expect(stdout).toContain('Best between the samples');
  });

  it('prints JSON or CSV alone', async () => {
    const words = [
      '--lp-per-mm',
      '40',
      '--fields',
      'axis,0.7',
      '--vary',
      'lens.waves.W131=0,1,2',
      '--vary',
      'lens.waves.W040=0,0.5',
    ];
    const expected = await report({
      lpPerMm: 40,
      fields: ['axis', 0.7],
      vary: [
        { key: 'lens.waves.W131', values: [0, 1, 2] },
        { key: 'lens.waves.W040', values: [0, 0.5] },
      ],
    });
    expect((await run(...words, '--json')).stdout).toBe(jsonText(expected));
    const csv = (await run(...words, '--csv')).stdout;
    expect(csv).toBe(sweepCsv(expected));
    const [head, ...lines] = csv.trimEnd().split('\n');
    expect(head).toBe(
      'lens.waves.W131,lens.waves.W040,mtf,rule,zone,mtf at axis,mtf at 0.7,decode_rate,white_e',
    );
    expect(lines).toHaveLength(6);
    const [coma, spherical, lowest, , zone, ...byZone] = lines[3].split(',');
    expect([coma, spherical, zone]).toEqual(['1', '0.5', '0.7']);
    expect(Number(lowest)).toBe(Math.min(...byZone.slice(0, 2).map(Number)));
  });

  it('writes files beside the table', async () => {
    const [json, csv] = [folder.at('sweep.json'), folder.at('sweep.csv')];
    const words = ['--wavefront-rms', '--fields', '1', '--sensor-shift', '-10,0,10'];
    expect((await run(...words, '--json', json, '--csv', csv)).stdout).toContain('largest RMS');
    const expected = await report({ wavefrontRms: true, fields: [1], sensorShiftsUm: [-10, 0, 10] });
    expect(readFileSync(json, 'utf8')).toBe(jsonText(expected));
    expect(readFileSync(csv, 'utf8')).toBe(sweepCsv(expected));
  });

  it('ends with 1 where the best place does not meet the task', async () => {
    const { status, stdout } = await run(
      '--task',
      folder.at('hard.task.yaml'),
      '--sensor-shift',
      '-10,0,10',
      '--budget',
    );
    expect(status).toBe(1);
    expect(stdout).toContain('Best place: NOT MET');
    expect(stdout).toContain('there is nothing left to give');
  });

  it.each([
    [['--f-number', '4'], /a task, at an MTF or at the RMS/],
    [['--lp-per-mm', '40'], /nothing is swept/],
    [['--lp-per-mm', '40', '--f-number', '2,4'], /--f-number.*found 2/],
    [['--lp-per-mm', '40', '--vary', 'lens.wave=1'], /--vary: names no number of a rig, found 'lens\.wave'/],
    [['--lp-per-mm', '40', '--vary', 'W131'], /PATH=LIST/],
    [
      ['--lp-per-mm', '0', '--fields', 'edge', '--f-number', '5..4/2'],
      /--lp-per-mm[\s\S]*--fields[\s\S]*does not rise/,
    ],
  ])('refuses %j', async (words, message) => {
    expect(await run(...words)).toMatchObject({
      status: 2,
      stdout: '',
      stderr: expect.stringMatching(message),
    });
  });
});
