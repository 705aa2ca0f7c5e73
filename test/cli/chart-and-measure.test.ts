import { readdirSync, readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { loadRig } from '../../src/files/load-rig.js';
import { jsonText } from '../../src/files/write-data.js';
import { chart } from '../../src/jobs/chart.js';
import { measure } from '../../src/jobs/measure.js';
import { measureCsv } from '../../src/report/measure-csv.js';
import { measureTable } from '../../src/report/measure-table.js';
import { runInside } from './run-program.js';
import { type Folder, folderWithRig } from './small-rig.js';

let folder: Folder;
beforeAll(async () => {
  folder = await folderWithRig();
});
afterAll(() => folder.remove());

const rig = () => loadRig(folder.at('a.rig.yaml'));
const run = (command: string, ...words: string[]) => runInside([command, ...words]);
const chartWords = (...words: string[]) => [...words, '--rig', folder.at('a.rig.yaml')];

describe('foreglass chart', () => {
  it('writes scene and truth and says how to go on', async () => {
    const out = folder.at('edges.png');
    const { status, stdout, stderr } = await run(
      'chart',
      ...chartWords('edges', '--out', out, '--size', '30', '--grid', '1x1', '--oversample', '2'),
    );
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    const words = stdout.split(/\s+/).join(' '); // lines break after 80 characters
    expect(words).toContain('4 edges of 1 square, 192 x 128 samples of linear light for 96 x 64 pixels.');
    expect(stdout).toContain(`foreglass render ${out} --scene-linear --oversample 2`);
    const { truth } = await chart({ kind: 'edges', rig: rig(), sizePx: 30, grid: [1, 1], oversample: 2 });
    expect(readFileSync(folder.at('edges.truth.json'), 'utf8')).toBe(jsonText(truth));
  });

  it('hands every choice on', async () => {
    const { status, stdout } = await run(
      'chart',
      ...chartWords('edges', '--out', folder.at('b.tif'), '--truth', folder.at('b.yaml'), '--json'),
      ...[
        '--angle',
        '12',
        '--contrast',
        '8',
        '--white',
        '0.5',
        '--size',
        '24',
        '--fields',
        'axis',
        '--oversample',
        '1',
      ],
    );
    expect(status).toBe(0);
    const choices = { angleDeg: 12, contrast: 8, white: 0.5, sizePx: 24, fields: ['axis'], oversample: 1 };
    const { truth } = await chart({ kind: 'edges', rig: rig(), ...choices });
    expect(stdout).toBe(jsonText(truth));
    expect(readdirSync(folder.path)).toEqual(expect.arrayContaining(['b.tif', 'b.yaml']));
    const star = await run(
      'chart',
      ...chartWords('star', '--sectors', '10', '--out', folder.at('s.png'), '--json'),
    );
    expect(JSON.parse(star.stdout).sectors).toHaveLength(10);
    const bars = await run(
      'chart',
      ...chartWords(
        'bars',
        '--cycles-per-pixel',
        '0.25',
        '--size',
        '8',
        '--out',
        folder.at('r.png'),
        '--json',
      ),
    );
    expect(JSON.parse(bars.stdout).bars).toHaveLength(10);
  });

  it.each([
    ['an unknown kind', ['rings', '--out', 'x.png'], /^error: KIND: there is no such chart, found 'rings'/],
    [
      'a grid that is none',
      ['edges', '--out', 'x.png', '--grid', '7'],
      /^error: --grid: not a number of patches across and down, found '7'. Allowed: two whole numbers with an x/,
    ],
    [
      'numbers that are none',
      ['edges', '--out', 'x.png', '--size', 'big', '--white', '2'],
      /^error: --white: out of range.*\nerror: --size: not a number/,
    ],
    [
      'field points',
      ['edges', '--out', 'x.png', '--fields', 'topp,0.7@x'],
      /^error: --fields: .*'topp'.*\nerror: --fields: .*'0.7@x'/,
    ],
    [
      'a patch over the frame',
      ['edges', '--out', 'x.png', '--size', '30', '--fields', '0.9@30'],
      /^error: --fields: a patch there stands over the frame, found '0.9@30'/,
    ],
    [
      'a choice of another kind',
      ['dots', '--out', 'x.png', '--angle', '5'],
      /^error: --angle: means nothing to the chart 'dots'/,
    ],
    ['a scene in 8 bits', ['dots', '--out', 'x.jpg'], /^error: --out: this format holds 8 bits/],
    ['no scene', ['dots'], /^error: required option '--out <scene>' not specified/],
  ])('refuses %s', async (_, words, message) => {
    const { status, stdout, stderr } = await run('chart', ...chartWords(...words));
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toMatch(message);
  });

  it('refuses to write its truth over the rig', async () => {
    const { status, stderr } = await run(
      'chart',
      ...chartWords('dots', '--out', 'x.png', '--truth', folder.at('a.rig.yaml')),
    );
    expect(status).toBe(2);
    expect(stderr).toMatch(/^error: --truth: would replace the file of --rig/);
  });
});

describe('foreglass measure', () => {
  let picture: string;
  const truth = () => folder.at('m.truth.json');
  beforeAll(async () => {
    picture = folder.at('m-picture.png');
    await run(
      'chart',
      ...chartWords('edges', '--out', folder.at('m.png'), '--size', '44', '--grid', '1x1', '--quiet'),
    );
    await run(
      'render',
      ...chartWords(folder.at('m.png'), '--scene-linear', '--oversample', '4', '--out', picture, '--linear'),
      ...['--record', folder.at('m.json'), '--threads', '1', '--quiet'],
    );
  });
  const report = (more = {}) => measure({ image: picture, truth: truth(), rig: rig(), ...more });

  it('prints the table of the report', async () => {
    const { status, stdout, stderr } = await run('measure', ...chartWords(picture, '--truth', truth()));
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout).toBe(measureTable(await report()));
  });

  it('prints JSON with the keys of the interface', async () => {
    const { stdout } = await run(
      'measure',
      ...chartWords(picture, '--truth', truth(), '--cycles-per-pixel', '0.1,0.25', '--json'),
    );
    expect(stdout).toBe(jsonText(await report({ cyclesPerPixel: [0.1, 0.25] })));
    const [edge] = JSON.parse(stdout).edges;
    expect(edge).toMatchObject({
      x: expect.any(Number),
      y: expect.any(Number),
      field: expect.any(Number),
      direction: expect.stringMatching(/^(tangential|sagittal)$/),
      angle_deg: expect.any(Number),
      sfr: [
        { cycles_per_pixel: 0.1, lp_per_mm: expect.closeTo(0.1 / 0.006, 6), value: expect.any(Number) },
        { cycles_per_pixel: 0.25, lp_per_mm: expect.closeTo(0.25 / 0.006, 6), value: expect.any(Number) },
      ],
      sfr50_cycles_per_pixel: expect.any(Number),
      edge_width_px: expect.any(Number),
    });
  });

  it('takes the rig of the record, and prints CSV in place of the table', async () => {
    const words = [picture, '--truth', truth(), '--record', folder.at('m.json')];
    expect((await run('measure', ...words, '--csv')).stdout).toBe(measureCsv(await report()));
  });

  it('measures regions and flat fields, each option as often as it is given', async () => {
    const regions = [
      { x: 55, y: 12, width: 30, height: 40 },
      { x: 10, y: 12, width: 30, height: 40 },
    ];
    const words = [
      picture,
      '--region',
      '55,12,30,40',
      '--region',
      '10,12,30,40',
      '--flat',
      '0,0,20,10',
      '--flat',
      '76,0,20,10',
    ];
    const { status, stdout } = await run('measure', ...words, '--json');
    expect(status).toBe(0);
    const flats = [
      { x: 0, y: 0, width: 20, height: 10 },
      { x: 76, y: 0, width: 20, height: 10 },
    ];
    expect(stdout).toBe(jsonText(await measure({ image: picture, regions, flats })));
  });

  it.each([
    ['nothing to measure', [], /^error: --truth: nothing says what to measure/],
    [
      'regions that are none',
      ['--region', '1,2,3', '--flat', '0,0,0,5'],
      /^error: --region: not a region, found '1,2,3'.*\nerror: --flat: not a region, found '0,0,0,5'/,
    ],
    [
      'a region outside',
      ['--region', '90,0,40,40'],
      /^error: --region 90,0,40,40: the region is not a part of the picture/,
    ],
    [
      'a region without an edge',
      ['--region', '0,0,20,20'],
      /^error: --region 0,0,20,20: shows no edge, or several that cross/,
    ],
    [
      'line pairs without a pitch',
      ['--region', '50,10,40,40', '--lp-per-mm', '20'],
      /^error: --lp-per-mm: the pitch of the pixels is not known/,
    ],
    [
      'a frequency',
      ['--region', '50,10,40,40', '--cycles-per-pixel', '2'],
      /^error: --cycles-per-pixel: out of range, found '2'/,
    ],
    [
      'two results on stdout',
      ['--region', '50,10,40,40', '--json', '--csv'],
      /^error: --json and --csv: both would go to stdout/,
    ],
    ['a truth that is not there', ['--truth', 'no.json'], /^error: no\.json: there is no such file/],
  ])('refuses %s', async (_, words, message) => {
    const { status, stdout, stderr } = await run('measure', picture, ...words);
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toMatch(message);
  });

  it('refuses to write over the picture', async () => {
    const { status, stderr } = await run('measure', picture, '--truth', truth(), '--csv', truth());
    expect(status).toBe(2);
    expect(stderr).toMatch(/^error: --csv: would replace the file of --truth/);
  });
});

it.each(['chart', 'measure'])(
  'the help of %s fits 80 columns, with an example and the defaults',
  async (command) => {
    const { status, stdout } = await runInside([command, '--help']);
    expect(status).toBe(0);
    expect(stdout).toMatch(new RegExp(`Example:\n  foreglass ${command} `));
    expect(stdout).toContain('(default: ');
    for (const line of stdout.split('\n')) expect(line.length).toBeLessThanOrEqual(80);
  },
);
