import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { HALL_LENS } from '../prescription/hall-lens.js';
import { BUSY_MS } from '../support/form.js';
import { runInside } from './run-program.js';
import { type Folder, folderWithRig } from './small-rig.js';

vi.setConfig({ testTimeout: BUSY_MS });

const TASK = `name: sort the crates
zones: [axis, top_right]
require:
  - edge_blur: { at_most_px: 3 }
`;

let folder: Folder;
beforeAll(async () => {
  folder = await folderWithRig();
  writeFileSync(folder.at('a.task.yaml'), TASK);
});
afterAll(() => folder.remove());

const RUNS: readonly (readonly [name: string, words: () => string[]])[] = [
  ['zones', () => ['zones', '--rig', folder.at('a.rig.yaml')]],
  ['zones in colour', () => ['zones', '--rig', folder.at('colour.rig.yaml')]],
  ['judge', () => ['judge', '--rig', folder.at('a.rig.yaml'), '--task', folder.at('a.task.yaml')]],
  [
    'sweep',
    () => [
      ...['sweep', '--rig', folder.at('a.rig.yaml'), '--task', folder.at('a.task.yaml')],
      ...['--f-number', '4,8', '--sensor-shift=-20,0,20'],
    ],
  ],
  ['derive', () => ['derive', HALL_LENS]],
  [
    'measure',
    () => ['measure', folder.at('scene.png'), '--flat', '4,4,40,40', '--rig', folder.at('scene.rig.yaml')],
  ],
];

describe('--html', () => {
  beforeAll(() => {
    const rig = readFileSync(folder.at('a.rig.yaml'), 'utf8').replace('[96, 64]', '[80, 60]');
    writeFileSync(
      folder.at('scene.rig.yaml'),
      rig.replace('mono: [550]', 'red: [620], green: [540], blue: [460]'),
    );
  });

  it.each(RUNS)('of %s writes a page and still prints the table', async (name, words) => {
    const page = folder.at(`${name}.html`);
    const { status, stdout, stderr } = await runInside([...words(), '--html', page, '--quiet']);
    expect({ stderr, isDone: status === 0 || (status === 1 && name !== 'zones') }).toEqual({
      stderr: '',
      isDone: true,
    });
    expect(stdout).toContain('no substitute');
    expect(readFileSync(page, 'utf8')).toMatch(/^<!doctype html>[\s\S]+<\/html>\n$/);
  });

  it.each(RUNS)('of %s is refused with another ending, and nothing is written', async (name, words) => {
    const page = folder.at(`${name}.txt`);
    const { status, stderr } = await runInside([...words(), '--html', page]);
    expect(status).toBe(2);
    expect(stderr).toBe(
      `error: --html: the file has no ending of a page, found '${page}'. Allowed: .html, .htm.\n`,
    );
    expect(existsSync(page)).toBe(false);
  });
});

describe('--sheet', () => {
  const words = (sheet: string) => [
    ...['render', folder.at('scene.png'), '--rig', folder.at('a.rig.yaml'), '--threads', '1'],
    ...['--sheet', sheet],
  ];

  it('is a picture that may be asked for alone', async () => {
    const sheet = folder.at('sheet.svg');
    const { status, stdout } = await runInside([...words(sheet), '--quiet']);
    expect({ status, stdout }).toEqual({ status: 0, stdout: '' });
    expect(readFileSync(sheet, 'utf8')).toMatch(/^<svg /);
  });

  it('is refused with another ending, and nothing is written', async () => {
    const out = folder.at('picture.png');
    const { status, stderr } = await runInside([...words(folder.at('sheet.pdf')), '--out', out]);
    expect(status).toBe(2);
    expect(stderr).toContain('--sheet: the file has no ending of a sheet');
    expect(existsSync(out) || existsSync(folder.at('sheet.pdf'))).toBe(false);
  });
});
