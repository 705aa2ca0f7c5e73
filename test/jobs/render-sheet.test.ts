import { existsSync, readFileSync } from 'node:fs';
import sharp from 'sharp';
import { describe, expect, it, vi } from 'vitest';
import type { Raster } from '../../src/imaging/raster.js';
import { render } from '../../src/jobs/render.js';
import { useFolder } from '../files/packhouse.js';
import { sampleRig } from '../optics/samples.js';
import { BUSY_MS } from '../support/form.js';

vi.setConfig({ testTimeout: BUSY_MS });

const folder = useFolder();
const [WIDTH, HEIGHT] = [96, 64];

/** Upright stripes. */
function stripes(planes: number): Raster {
  return {
    width: WIDTH,
    height: HEIGHT,
    planes: Array.from({ length: planes }, () =>
      Float32Array.from({ length: WIDTH * HEIGHT }, (_, i) => (i % 8 < 4 ? 0.1 : 0.9)),
    ),
  };
}

const COLOURS = ['red', 'green', 'blue'].map((name, i) => ({
  name,
  lines: [{ nm: 620 - 80 * i, weight: 1 }],
}));

describe('the sheet of a picture', () => {
  it.each([
    ['mono', 1, {}],
    ['colour', 3, { bands: COLOURS }],
  ])('shows scene and picture of a %s camera, the same bytes each time', async (_, planes, camera) => {
    const rig = sampleRig({ waves: { W131: 1 }, camera: { pixels: [WIDTH, HEIGHT], ...camera } });
    const [first, second, drawing] = ['one.png', 'two.png', 'one.svg'].map((name) => folder.path(name));
    for (const sheet of [first, second, drawing])
      await render({ rig, scene: stripes(planes), sheet, threads: 1 });
    expect(readFileSync(first).equals(readFileSync(second))).toBe(true);
    const { width, height, format } = await sharp(first).metadata();
    expect(format).toBe('png');
    const svg = readFileSync(drawing, 'utf8');
    expect(svg).toContain(`width="${width}" height="${height}"`);
    expect(svg.match(/<image /g)).toHaveLength(12); // scene, picture and PSF at four places
    expect(svg).not.toContain('<text'); // no font of the machine
    expect(svg).not.toMatch(/href="(?!data:)/);
  });

  it('holds the very pixels of the picture', async () => {
    const rig = sampleRig({ camera: { pixels: [WIDTH, HEIGHT] } });
    const [out, sheet] = [folder.path('picture.png'), folder.path('sheet.svg')];
    await render({ rig, scene: stripes(1), out, sheet, threads: 1 });
    const urls = [...readFileSync(sheet, 'utf8').matchAll(/href="data:image\/png;base64,([^"]+)"/g)];
    const crop = await sharp(Buffer.from(urls[1][1], 'base64')).raw().toBuffer({ resolveWithObject: true });
    const picture = await sharp(out).raw().toBuffer({ resolveWithObject: true });
    const scale = crop.info.width / 48; // a crop is half of so small a frame, from (24, 16) at the axis
    expect(Number.isInteger(scale)).toBe(true);
    for (const [x, y] of [
      [0, 0],
      [5, 9],
      [47, 31],
    ]) {
      const at = crop.info.channels * (y * scale * crop.info.width + x * scale);
      expect(crop.data[at]).toBe(picture.data[picture.info.channels * ((16 + y) * WIDTH + 24 + x)]);
    }
  });

  it('writes names from files as text, whatever they hold', async () => {
    const rig = sampleRig({ lens: { name: '<b>"Größe" & 大' }, camera: { pixels: [WIDTH, HEIGHT] } });
    await render({ rig, scene: stripes(1), sheet: folder.path('name.svg'), threads: 1 });
    const svg = readFileSync(folder.path('name.svg'), 'utf8');
    expect(svg).toContain('<title>&lt;b&gt;&quot;Größe&quot; &amp; 大</title>');
    expect(svg).not.toContain('<b>');
  });

  it('is refused with another ending, and nothing is written', async () => {
    const rig = sampleRig({ camera: { pixels: [WIDTH, HEIGHT] } });
    const [out, sheet] = [folder.path('picture.png'), folder.path('sheet.pdf')];
    await expect(render({ rig, scene: stripes(1), out, sheet, threads: 1 })).rejects.toMatchObject({
      faults: [{ key: '--sheet', found: `'${sheet}'`, allowed: '.png, .svg' }],
    });
    expect(existsSync(out) || existsSync(sheet)).toBe(false);
  });
});
