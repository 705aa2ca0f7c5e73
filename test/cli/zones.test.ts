import { readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { loadRig } from '../../src/files/load-rig.js';
import { jsonText } from '../../src/files/write-data.js';
import { zones } from '../../src/jobs/zones.js';
import { zoneCsv } from '../../src/report/zone-csv.js';
import { zoneTable } from '../../src/report/zone-table.js';
import { CHILD_TIMEOUT_MS, runInside, runProgram } from './run-program.js';
import { type Folder, folderWithRig } from './small-rig.js';

let folder: Folder;
beforeAll(async () => {
  folder = await folderWithRig();
});
afterAll(() => folder.remove());

const FIELDS = ['axis', '0.7@90', 'top_right'];
const LP_PER_MM = [80, 20, 40];
const run = (...words: string[]) => runInside(['zones', '--rig', folder.at('colour.rig.yaml'), ...words]);
const runAtFields = (...words: string[]) =>
  run('--fields', FIELDS.join(','), '--lp-per-mm', LP_PER_MM.join(','), ...words);
const report = (overrides = {}) =>
  zones(loadRig(folder.at('colour.rig.yaml'), overrides), { fields: FIELDS, lpPerMm: LP_PER_MM });

describe('foreglass zones', () => {
  it('prints the table of the report', async () => {
    expect(await runAtFields()).toEqual({ status: 0, stdout: zoneTable(report()), stderr: '' });
  });

  it('prints JSON alone with --json, in the keys of the interface', async () => {
    const { status, stdout } = await runAtFields('--json');
    expect({ status, stdout }).toEqual({ status: 0, stdout: jsonText(report()) });
    const data = JSON.parse(stdout);
    expect(data).toMatchObject({
      rig: '12 mm, packing hall',
      f_number: 5.6,
      model: 'third-order',
      warnings: [],
    });
    expect(data.zones).toHaveLength(3 * 3);
    const both = { tangential: expect.any(Number), sagittal: expect.any(Number) };
    expect(data.zones[3]).toMatchObject({
      field: 0.7,
      azimuth_deg: 90,
      place: null,
      image_height_mm: expect.closeTo(1.4, 12),
      band: 'red',
      strehl: expect.any(Number),
      wavefront_rms_waves: expect.any(Number),
      distortion_percent: expect.any(Number),
      mtf: LP_PER_MM.map((lp) => ({
        lp_per_mm: lp,
        diffraction_limit: expect.any(Number),
        lens: both,
        camera: both,
      })),
      mtf50_lp_per_mm: both,
      best_focus_um: both,
    });
  });

  it('prints CSV in place of the table with --csv', async () => {
    expect(await runAtFields('--csv')).toEqual({ status: 0, stdout: zoneCsv(report()), stderr: '' });
  });

  it('writes files and still prints the table', async () => {
    const { status, stdout } = await runAtFields('--json', folder.at('z.json'), '--csv', folder.at('z.csv'));
    expect({ status, stdout }).toEqual({ status: 0, stdout: zoneTable(report()) });
    expect(readFileSync(folder.at('z.json'), 'utf8')).toBe(jsonText(report()));
    expect(readFileSync(folder.at('z.csv'), 'utf8')).toBe(zoneCsv(report()));
    await runAtFields('--json', folder.at('z.yaml'));
    expect(parse(readFileSync(folder.at('z.yaml'), 'utf8'))).toEqual(JSON.parse(jsonText(report())));
  });

  it('lets options stand in for the mount', async () => {
    const { stdout } = await runAtFields('--json', '--f-number', '8', '--sensor-shift', '-12.5');
    expect(stdout).toBe(jsonText(report({ fNumber: 8, sensorShiftUm: -12.5 })));
  });

  it('says each warning once on stderr, and none with --quiet', async () => {
    const { stdout, stderr } = await run('--fields', '1.5', '--json');
    const { warnings } = JSON.parse(stdout);
    expect(warnings.length).toBeGreaterThan(0);
    expect(stderr).toBe(warnings.map((warning: string) => `warning: ${warning}\n`).join(''));
    expect(await run('--fields', '1.5', '--json', '--quiet')).toEqual({ status: 0, stdout, stderr: '' });
  });

  it.each([
    [
      'wrong field points, all of them',
      ['--fields', 'topp,axis,0.7@x'],
      /^error: --fields: .*'topp'.*\nerror: --fields: .*'0.7@x'.*\n$/,
    ],
    [
      'a wrong frequency',
      ['--lp-per-mm', '20,-4'],
      /^error: --lp-per-mm: out of range, found '-4'\. Allowed: numbers above 0\.\n$/,
    ],
    ['a stop that is wider than the lens', ['--f-number', '1.4'], /^error: .*--f-number.*\n$/],
    ['two results on stdout', ['--json', '--csv'], /^error: --json and --csv: both would go to stdout/],
    [
      'an output in no folder',
      ['--json', 'no/such/z.json'],
      /^error: .*--json: the folder 'no\/such' does not exist/,
    ],
    ['a rig that is not there', ['--rig', 'no.rig.yaml'], /^error: no\.rig\.yaml: there is no such file/],
  ])('refuses %s', async (_, words, message) => {
    const { status, stdout, stderr } = await run(...words);
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toMatch(message);
  });

  it('refuses to write over the rig', async () => {
    const rig = folder.at('colour.rig.yaml');
    const before = readFileSync(rig, 'utf8');
    const { status, stderr } = await run('--csv', rig);
    expect(status).toBe(2);
    expect(stderr).toMatch(/^error: --csv: would replace the file of --rig/);
    expect(readFileSync(rig, 'utf8')).toBe(before);
  });

  it('points at the line and column of a fault in the rig', async () => {
    const wrong = readFileSync(folder.at('a.rig.yaml'), 'utf8').replace('f_number: 2.8', 'f_number: -1');
    writeFileSync(folder.at('wrong.rig.yaml'), wrong);
    const { status, stderr } = await run('--rig', folder.at('wrong.rig.yaml'));
    expect(status).toBe(2);
    expect(stderr).toMatch(/^error: .*wrong\.rig\.yaml:4:13: lens\.f_number: .*-1/);
  });

  it('finishes its files when the reader of its output has seen enough', {
    timeout: CHILD_TIMEOUT_MS,
  }, async () => {
    const words = ['zones', '--rig', 'a.rig.yaml', '--json', '--csv', 'late.csv'];
    const { status, stderr } = await runProgram(words, { cwd: folder.path }, (child) =>
      child.stdout.destroy(),
    );
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(readdirSync(folder.path)).toContain('late.csv');
  });
});
