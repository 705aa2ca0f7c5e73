import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { InterruptedError } from '../../src/errors.js';
import { loadTruth } from '../../src/files/load-truth.js';
import { pngEncoding } from '../../src/files/pictures/index.js';
import { readScene } from '../../src/files/pictures/read.js';
import { chart } from '../../src/jobs/chart.js';
import { chartRig } from '../charts/rigs.js';

const folder = mkdtempSync(join(tmpdir(), 'chart-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));
const at = (name: string) => join(folder, name);
const RIG = chartRig([120, 90]);

describe('chart', () => {
  it('writes the scene as 16-bit linear light, and its truth beside it', async () => {
    const { scene, truth, files } = await chart({
      kind: 'edges',
      rig: RIG,
      sizePx: 40,
      out: at('edges.png'),
      oversample: 2,
    });
    expect(files).toEqual({ out: at('edges.png'), truth: at('edges.truth.json') });
    expect(await pngEncoding(at('edges.png'))).toBe('linear');
    const read = await readScene(at('edges.png'), { sceneLinear: true });
    expect([read.bitDepth, read.channels, read.raster.width, read.raster.height]).toEqual([16, 1, 240, 180]);
    for (let i = 0; i < scene.planes[0].length; i += 97)
      expect(Math.abs(read.raster.planes[0][i] - scene.planes[0][i])).toBeLessThan(0.5 / 65535 + 1e-7);
    expect(loadTruth(at('edges.truth.json'))).toEqual(truth);
  });

  it.each(['dots', 'star', 'bars', 'checker'] as const)(
    'gives %s a truth that is read again as it was',
    async (kind) => {
      const choices = kind === 'bars' ? { sizePx: 8, cyclesPerPixel: [0.2, 0.4] } : {};
      const truthFile = at(`${kind}.truth.yaml`);
      const { truth } = await chart({ kind, rig: RIG, oversample: 1, truthFile, ...choices });
      expect(loadTruth(truthFile)).toEqual(truth);
    },
  );

  it('writes the same bytes again', async () => {
    const write = async (name: string) => {
      await chart({ kind: 'star', rig: RIG, out: at(name), oversample: 2 });
      return readFileSync(at(name));
    };
    expect((await write('one.png')).equals(await write('two.png'))).toBe(true);
  });

  it('writes nothing where it only returns, is refused or is stopped', async () => {
    const before = readdirSync(folder);
    await chart({ kind: 'dots', rig: RIG, sizePx: 10 });
    await expect(chart({ kind: 'dots', rig: RIG, out: at('no/dots.png') })).rejects.toThrow(
      /--out: the folder/,
    );
    await expect(chart({ kind: 'dots', rig: RIG, out: at('dots.jpg') })).rejects.toThrow(
      /--out: this format holds 8 bits/,
    );
    await expect(chart({ kind: 'dots', rig: RIG, out: at('dots') })).rejects.toThrow(
      /--out: the name says no format/,
    );
    await expect(chart({ kind: 'dots', rig: RIG, out: at('x.png'), truthFile: at('x.png') })).rejects.toThrow(
      /two outputs have this name/,
    );
    const controller = new AbortController();
    controller.abort();
    await expect(
      chart({ kind: 'dots', rig: RIG, out: at('late.png'), signal: controller.signal }),
    ).rejects.toThrow(InterruptedError);
    expect(readdirSync(folder)).toEqual(before);
    expect(existsSync(at('late.truth.json'))).toBe(false);
  });

  it('refuses a scene too large to be read again, and says what fits', async () => {
    await expect(chart({ kind: 'dots', rig: chartRig([6000, 4000]), oversample: 5 })).rejects.toThrow(
      /--oversample: the scene would be too large to be read again, found 5, for 30000 x 20000 samples. Allowed: up to 4 for this camera \(400 megapixels\)/,
    );
  });
});
