import { mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { CHILD_TIMEOUT_MS, runInside, runProgram } from './run-program.js';
import { type Folder, folderWithRig, RIG } from './small-rig.js';

let folder: Folder;
beforeAll(async () => {
  folder = await folderWithRig();
});
afterAll(() => folder.remove());

/** Kernels that may lose a little more are small and quick. */
const QUICK = ['--kernel-tolerance', '0.03'];
const render = (...words: string[]) =>
  runProgram(['render', 'scene.png', '--rig', 'a.rig.yaml', ...QUICK, ...words], { cwd: folder.path });

describe('foreglass render', { timeout: CHILD_TIMEOUT_MS }, () => {
  it('writes the picture and the record, and says so', async () => {
    const { status, stdout, stderr } = await render('--out', 'o.png', '--record', 'o.json', '--threads', '1');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout).toMatch(/^Wrote o\.png, o\.json: 96 x 64 pixels, mono\.\nAccuracy: /);
    expect(stdout).toContain('third order');
    expect(await sharp(folder.at('o.png')).metadata()).toMatchObject({
      width: 96,
      height: 64,
      depth: 'uchar',
    });
    expect(JSON.parse(readFileSync(folder.at('o.json'), 'utf8'))).toMatchObject({ threads: 1, seed: 1 });
  });

  it('prints the record alone with --json, in the keys of the interface; threads do not matter', async () => {
    await render('--out', '1.png', '--quiet', '--threads', '1');
    const { status, stdout } = await render('--out', '3.png', '--json', '--threads', '3');
    expect(status).toBe(0);
    expect(JSON.parse(stdout)).toMatchObject({
      foreglass: expect.stringMatching(/^\d+\.\d+\.\d+/),
      rig: {
        lens: { f_number: 2.8 },
        camera: { pixels: [96, 64], sensor: { white_e: 8000 } },
        mount: { f_number: 5.6 },
      },
      seed: 1,
      threads: 3,
      image: { width: 96, height: 64, bands: ['mono'] },
      accuracy: {
        blend_bound: expect.any(Number),
        energy_outside_kernel: expect.any(Number),
        cells: [expect.any(Number), expect.any(Number)],
        kernel_px: expect.any(Number),
      },
      seconds: Object.fromEntries(
        ['decode', 'psf', 'warp', 'blur', 'camera', 'encode', 'total'].map((stage) => [
          stage,
          expect.any(Number),
        ]),
      ),
      warnings: [],
    });
    expect(readFileSync(folder.at('3.png')).equals(readFileSync(folder.at('1.png')))).toBe(true);
  });

  it('hands every option on', async () => {
    const { status, stdout, stderr } = await render(
      ...[
        '--out',
        'l.tif',
        '--linear',
        '--raw',
        'l.png',
        '--record',
        'l.yaml',
        '--quiet',
        '--scene-linear',
        '--seed',
        '7',
      ],
      ...['--oversample', '2', '--tolerance', '0.01', '--f-number', '8', '--sensor-shift', '-4'],
    );
    expect({ status, stdout, stderr }).toEqual({ status: 0, stdout: '', stderr: '' });
    expect(await sharp(folder.at('l.tif')).metadata()).toMatchObject({ width: 96, depth: 'ushort' });
    expect(await sharp(folder.at('l.png')).metadata()).toMatchObject({ width: 96, depth: 'ushort' });
    const record = parse(readFileSync(folder.at('l.yaml'), 'utf8'));
    expect(record).toMatchObject({
      seed: 7,
      oversample: 2,
      rig: { mount: { f_number: 8, sensor_shift_um: -4 } },
    });
    // The scene's ramp of 0..255 has a mean of about half of full scale; read as sRGB it would be about a fifth, by IEC 61966-2-1.
    const { channels } = await sharp(folder.at('l.tif')).stats();
    expect(channels[0].mean / 65535).toBeGreaterThan(0.4);
  });

  it('refuses a scene that is no picture', async () => {
    const { status, stderr } = await runProgram(
      ['render', 'a.rig.yaml', '--rig', 'a.rig.yaml', '--out', 'x.png'],
      {
        cwd: folder.path,
      },
    );
    expect(status).toBe(2);
    expect(stderr).toMatch(/^error: a\.rig\.yaml: /);
    expect(readdirSync(folder.path)).not.toContain('x.png');
  });

  it('ends with status 130 at Ctrl-C and leaves nothing behind', async () => {
    // A picture that takes far longer than the test, so that the interrupt comes when it has long begun.
    writeFileSync(
      folder.at('large.rig.yaml'),
      RIG.replace('[96, 64]', '[2448, 2048]').replace('full_field_mm: 2', 'full_field_mm: 10'),
    );
    const before = readdirSync(folder.path).sort();
    const words = ['render', 'scene.png', '--rig', 'large.rig.yaml', '--out', 'x.png', '--record', 'x.json'];
    const { status, stdout, stderr } = await runProgram(
      [...words, '--oversample', '2', '--tolerance', '0.00001'],
      { cwd: folder.path },
      (child) => setTimeout(() => child.kill('SIGINT'), 2000),
    );
    expect({ status, stdout }).toEqual({ status: 130, stdout: '' });
    expect(stderr).toMatch(/interrupted\n$/);
    expect(readdirSync(folder.path).sort()).toEqual(before);
  });
});

describe('foreglass render before the work', () => {
  it.each([
    ['no output', () => [], /--out: no picture is asked for/],
    [
      'an output on the scene',
      () => ['--out', folder.at('x/../scene.png')],
      /--out: would replace the file of SCENE/,
    ],
    [
      'one file for two outputs',
      () => ['--out', 'a.png', '--raw', './a.png'],
      /--raw: would replace the file of --out/,
    ],
    [
      'an output in no folder',
      () => ['--out', 'no/such/a.png'],
      /--out: the folder 'no\/such' does not exist/,
    ],
    ['a folder as output', () => ['--out', folder.at('sub')], /--out: is a folder/],
    ['an ending that stands for no picture', () => ['--out', folder.at('a.gif')], /--out: .*\.gif/],
    ['16 bits in an 8-bit format', () => ['--out', folder.at('a.jpg'), '--linear'], /--out: /],
    [
      'raw numbers of several bands',
      () => ['--rig', folder.at('colour.rig.yaml'), '--raw', folder.at('a.png')],
      /--raw: /,
    ],
    [
      'a wrong rig',
      () => ['--rig', folder.at('scene.png'), '--out', folder.at('a.png')],
      /scene\.png: is not a text/,
    ],
  ])('refuses %s and writes nothing', async (_, words, message) => {
    mkdirSync(folder.at('sub'), { recursive: true });
    const before = readdirSync(folder.path).sort();
    const { status, stdout, stderr } = await runInside([
      ...['render', folder.at('scene.png'), '--rig', folder.at('a.rig.yaml')],
      ...words(),
    ]);
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toMatch(/^error: /);
    expect(stderr).toMatch(message);
    expect(readdirSync(folder.path).sort()).toEqual(before);
  });
});
