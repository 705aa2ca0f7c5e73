import { mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import fc from 'fast-check';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { parse } from 'yaml';
import { type Fault, InputError, InterruptedError } from '../../src/errors.js';
import type { Raster } from '../../src/imaging/raster.js';
import { type RenderOptions, render } from '../../src/jobs/render.js';
import { settle } from '../../src/jobs/render-options.js';
import { warningsFor } from '../../src/jobs/render-record.js';
import { Renderer } from '../../src/jobs/renderer.js';
import { CounterRandom } from '../../src/numeric/random.js';
import { srgbDecode, srgbEncode } from '../../src/numeric/srgb.js';
import type { Rig, Sensor } from '../../src/optics/rig.js';
import { useFolder } from '../files/packhouse.js';
import { type RigParts, sampleRig } from '../optics/samples.js';
import { BUSY_MS } from '../support/form.js';

vi.setConfig({ testTimeout: BUSY_MS });

const folder = useFolder();

const WIDTH = 40;
const HEIGHT = 31;
const WAVES = { W040: 0.3, W131: 0.5, W222: 0.3, W311: 1 };
const BANDS = {
  colour: [
    { name: 'red', lines: [{ nm: 620, weight: 1 }] },
    { name: 'green', lines: [{ nm: 540, weight: 1 }] },
    { name: 'blue', lines: [{ nm: 460, weight: 1 }] },
  ],
};
const SENSOR: Sensor = {
  whiteE: 8000,
  fullWellE: 10_000,
  darkNoiseE: 5,
  darkE: 0,
  prnuPercent: 0.7,
  dsnuE: 1.5,
  bitDepth: 12,
};

function rigOf({ lens, camera, ...rest }: RigParts = {}): Rig {
  return sampleRig({
    waves: WAVES,
    lens: { fNumber: 2.8, relativeIllumination: 'none', ...lens },
    camera: { pixels: [WIDTH, HEIGHT], ...camera },
    ...rest,
  });
}

function noise(seed: number, planes = 1, width = WIDTH, height = HEIGHT): Raster {
  const draw = new CounterRandom(seed, 0);
  draw.start(0);
  return {
    width,
    height,
    planes: Array.from({ length: planes }, () =>
      Float32Array.from({ length: width * height }, () => draw.uniform()),
    ),
  };
}

/** Kernels that may lose a little more light are small and quick. */
const QUICK = { kernelTolerance: 0.03, threads: 1 };

type Options = Omit<RenderOptions, 'rig'> & { rig?: Rig };

/** A render from the start. */
const fresh = (options: Options) => render({ ...QUICK, rig: rigOf(), ...options });

/** The same with a worker thread that is kept: what each call does is held against a fresh one at the end of this file. */
let kept: Renderer;
beforeAll(() => {
  kept = new Renderer(QUICK);
});
afterAll(() => kept.close());
const quick = (options: Options) => kept.render({ ...QUICK, rig: rigOf(), ...options });

/** A smooth ramp in colour that no coding of pictures changes by more than its steps, as 8-bit sRGB. */
function rampFile(name: string, width = WIDTH, height = HEIGHT): Promise<string> {
  const data = Uint8Array.from({ length: width * height * 3 }, (_, i) => {
    const pixel = Math.floor(i / 3);
    return [6 * (pixel % width), 8 * Math.floor(pixel / width), 128][i % 3];
  });
  const path = folder.path(name);
  return sharp(data, { raw: { width, height, channels: 3 } })
    .png()
    .toFile(path)
    .then(() => path);
}

function largestDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  expect(a.length).toBe(b.length);
  let most = 0;
  for (let i = 0; i < a.length; i++) most = Math.max(most, Math.abs(a[i] - b[i]));
  return most;
}

const samplesOf = (path: string, depth: 'uchar' | 'ushort') =>
  sharp(path).toColourspace(depth === 'ushort' ? 'rgb16' : 'srgb');

describe('render of pictures in memory', () => {
  it('gives a picture of the sensor, and the record of how it was made', async () => {
    const { picture, record } = await fresh({ scene: noise(1) });
    expect([picture.width, picture.height, picture.planes.length]).toEqual([WIDTH, HEIGHT, 1]);
    expect(record).toMatchObject({
      foreglass: expect.stringMatching(/^\d+\.\d+\.\d+/),
      rig: rigOf(),
      seed: 1,
      cameraSeed: 1,
      threads: 1,
      oversample: 1,
      image: { width: WIDTH, height: HEIGHT, bands: ['mono'] },
      warnings: [],
    });
    const { accuracy, seconds } = record;
    expect(accuracy.blendBound).toBeGreaterThan(0);
    expect(accuracy.blendBound).toBeLessThanOrEqual(0.004);
    expect(accuracy.energyOutsideKernel).toBeGreaterThan(0);
    expect(accuracy.energyOutsideKernel).toBeLessThanOrEqual(0.03);
    for (const cells of accuracy.cells) expect(cells).toBeGreaterThanOrEqual(1);
    expect(accuracy.kernelPx).toBeGreaterThanOrEqual(15);
    const { psf, warp, blur, camera, total } = seconds;
    expect(total).toBeCloseTo(psf + warp + blur + camera, 6);
    expect('rawLevels' in record && record.rawLevels !== undefined).toBe(false);
  });

  it('does not change the scene', async () => {
    const scene = noise(1);
    const before = Float32Array.from(scene.planes[0]);
    await quick({ scene, rig: rigOf({ camera: { sensor: SENSOR } }) });
    expect(scene.planes[0]).toEqual(before);
  });

  it('keeps values above full scale, as no sensor clips them', async () => {
    const scene = { width: WIDTH, height: HEIGHT, planes: [new Float32Array(WIDTH * HEIGHT).fill(2.5)] };
    expect((await quick({ scene })).picture.planes[0][600]).toBeCloseTo(2.5, 5);
  });

  it('is linear in the scene', async () => {
    const pictureOf = async (scene: Raster) => (await quick({ scene })).picture.planes[0];
    await fc.assert(
      fc.asyncProperty(
        fc.integer({ min: 1, max: 1e6 }),
        fc.float({ min: 0, max: 1, noNaN: true }),
        async (seed, share) => {
          const [a, b] = [noise(seed), noise(seed + 1)];
          const mixed = a.planes[0].map((value, i) => share * value + (1 - share) * b.planes[0][i]);
          const expected = await pictureOf(a);
          const other = await pictureOf(b);
          expect(
            largestDifference(
              await pictureOf({ ...a, planes: [mixed] }),
              expected.map((value, i) => share * value + (1 - share) * other[i]),
            ),
          ).toBeLessThan(6e-6); // float32 transforms
        },
      ),
      { numRuns: 5, seed: 1 },
    );
  });

  it('fits a scene of another size, and takes one of the oversampled size as it is', async () => {
    const rig = rigOf();
    const constant = (width: number, height: number) => ({
      width,
      height,
      planes: [new Float32Array(width * height).fill(0.4)],
    });
    for (const [width, height] of [
      [7, 3],
      [200, 20],
      [WIDTH * 2, HEIGHT * 2],
    ]) {
      const { picture } = await quick({ rig, scene: constant(width, height), oversample: 2 });
      expect(largestDifference(picture.planes[0], new Float32Array(WIDTH * HEIGHT).fill(0.4))).toBeLessThan(
        1e-5,
      );
    }
  });

  it.each([
    [
      'planes of another size',
      { width: 3, height: 2, planes: [new Float32Array(5)] },
      /planes\[0\].*found 5.*6, for 3 x 2/,
    ],
    [
      'two planes',
      { width: 3, height: 2, planes: [new Float32Array(6), new Float32Array(6)] },
      /planes, found 2/,
    ],
    [
      'no number',
      { width: 3, height: 2, planes: [Float32Array.of(0, 0, 0, 0, Number.NaN, 0)] },
      /column 1, row 1, found NaN/,
    ],
    [
      'no light',
      { width: 3, height: 2, planes: [Float32Array.of(0, -1, 0, 0, 0, 0)] },
      /column 1, row 0, found -1/,
    ],
    ['one pixel', { width: 1, height: 1, planes: [new Float32Array(1)] }, /single pixel/],
  ])('refuses a scene of %s', async (_, scene, message) => {
    await expect(quick({ scene })).rejects.toThrow(message);
    await expect(quick({ scene })).rejects.toThrow(InputError);
  });
});

describe('scenes and bands', () => {
  const colour = rigOf({ camera: { bands: BANDS.colour } });

  it('gives a colour camera its three colours, each through its own PSFs', async () => {
    const scene = noise(2, 3);
    const { picture, record } = await quick({ rig: colour, scene });
    expect(record.image.bands).toEqual(['red', 'green', 'blue']);
    for (const [band, plane] of picture.planes.entries()) {
      const alone = rigOf({ camera: { bands: [{ name: 'mono', lines: BANDS.colour[band].lines }] } });
      const mono = { ...scene, planes: [scene.planes[band]] };
      const expected = (await quick({ rig: alone, scene: mono })).picture.planes[0];
      // kernels and cells are shared by the bands, so each may differ by what it certifies and by the light outside
      expect(largestDifference(plane, expected)).toBeLessThan(0.04);
    }
    expect(largestDifference(picture.planes[0], picture.planes[2])).toBeGreaterThan(0.1);
  });

  it('shows a mono scene to every band of a colour camera', async () => {
    const [plane] = noise(2).planes;
    const fromMono = await quick({ rig: colour, scene: noise(2) });
    const fromGrey = await quick({ rig: colour, scene: { ...noise(2), planes: [plane, plane, plane] } });
    expect(fromMono.picture.planes).toEqual(fromGrey.picture.planes);
    // red light is blurred the most
    expect(largestDifference(fromMono.picture.planes[0], fromMono.picture.planes[2])).toBeGreaterThan(1e-3);
  });

  it('shows a mono camera the luminance of a colour scene', async () => {
    const scene = noise(2, 3);
    const [red, green, blue] = scene.planes;
    // Source: luminance weights of ITU-R BT.709 (from memory)
    const luminance = red.map((value, i) => 0.2126 * value + 0.7152 * green[i] + 0.0722 * blue[i]);
    const found = await quick({ scene });
    const expected = await quick({ scene: { ...scene, planes: [luminance] } });
    expect(largestDifference(found.picture.planes[0], expected.picture.planes[0])).toBeLessThan(1e-6);
  });

  it('records a mosaic and develops it', async () => {
    const rig = rigOf({ camera: { bands: BANDS.colour, mosaic: 'rggb', sensor: SENSOR } });
    const flat = {
      width: WIDTH,
      height: HEIGHT,
      planes: [0.2, 0.5, 0.7].map((v) => new Float32Array(WIDTH * HEIGHT).fill(v)),
    };
    const { picture, record } = await quick({ rig, scene: flat, raw: folder.path('raw.tif') });
    const mean = (plane: Float32Array) => plane.reduce((sum, value) => sum + value, 0) / plane.length;
    // shot noise of 1600 e and more, over 1240 pixels: 0.08 % of the value
    for (const [band, value] of [0.2, 0.5, 0.7].entries()) {
      expect(Math.abs(mean(picture.planes[band]) / value - 1)).toBeLessThan(0.005);
    }
    const { data } = await samplesOf(folder.path('raw.tif'), 'ushort')
      .raw({ depth: 'ushort' })
      .toBuffer({ resolveWithObject: true });
    const raw = new Uint16Array(data.buffer, data.byteOffset, data.byteLength / 2);
    const channels = raw.length / (WIDTH * HEIGHT);
    const levels = record.rawLevels;
    if (levels === undefined) throw new Error('no levels were recorded');
    const light = (x: number, y: number) =>
      (raw[channels * (y * WIDTH + x)] - levels.blackLevel) / (levels.sceneWhite - levels.blackLevel);
    // red first, blue on the diagonal: within 6 sigma of shot noise
    expect(Math.abs(light(10, 10) - 0.2)).toBeLessThan(0.04);
    expect(Math.abs(light(11, 10) - 0.5)).toBeLessThan(0.06);
    expect(Math.abs(light(11, 11) - 0.7)).toBeLessThan(0.07);
  });
});

describe('noise', () => {
  const rig = rigOf({ camera: { sensor: SENSOR } });

  it('is drawn by the seed, and its pattern by the seed of the camera', async () => {
    const of = async (seed: number, cameraSeed: number) =>
      (await quick({ rig, scene: noise(1), seed, cameraSeed })).picture.planes[0];
    const first = await of(7, 1);
    expect(await of(7, 1)).toEqual(first);
    expect(largestDifference(await of(8, 1), first)).toBeGreaterThan(0.005);
    expect(largestDifference(await of(7, 2), first)).toBeGreaterThan(0.005);
  });

  it.each([2, 3])('%i threads write the bytes that 1 writes', async (threads) => {
    const bytes = async (count: number) => {
      const [out, raw] = [folder.path(`${count}.png`), folder.path(`${count}.tif`)];
      await render({ ...QUICK, rig, scene: noise(1), out, raw, oversample: 2, threads: count });
      return [readFileSync(out), readFileSync(raw)];
    };
    expect(await bytes(threads)).toEqual(await bytes(1));
  });
});

describe('render of files', () => {
  it('reads a scene, writes the picture as 8-bit sRGB, and a record in the keys of files', async () => {
    const scene = await rampFile('scene.png');
    const rig = rigOf({ camera: { bands: BANDS.colour } });
    const [out, recordFile] = [folder.path('out.png'), folder.path('record.yaml')];
    const { picture, record } = await quick({ rig, scene, out, recordFile });
    const { data, info } = await sharp(out).raw().toBuffer({ resolveWithObject: true });
    expect([info.width, info.height, info.channels]).toEqual([WIDTH, HEIGHT, 3]);
    for (const [band, plane] of picture.planes.entries()) {
      const encoded = plane.map((value) => 255 * srgbEncode(value));
      expect(
        largestDifference(
          data.filter((_, i) => i % 3 === band),
          encoded,
        ),
      ).toBeLessThanOrEqual(0.5001); // rounded to the nearest step
    }
    const written = parse(readFileSync(recordFile, 'utf8'));
    expect(written).toMatchObject({
      foreglass: record.foreglass,
      rig: { lens: { f_number: 2.8, waves: { W131: 0.5 } }, camera: { pixels: [WIDTH, HEIGHT] } },
      accuracy: { blend_bound: record.accuracy.blendBound, kernel_px: record.accuracy.kernelPx },
      image: { bands: ['red', 'green', 'blue'] },
    });
    expect(readdirSync(folder.path('.')).sort()).toEqual(['out.png', 'record.yaml', 'scene.png']);
  });

  it('takes the same scene from a file and from memory', async () => {
    const scene = await rampFile('scene.png');
    const { data } = await sharp(scene).raw().toBuffer({ resolveWithObject: true });
    const planes = [0, 1, 2].map((channel) =>
      Float32Array.from({ length: WIDTH * HEIGHT }, (_, i) => srgbDecode(data[3 * i + channel] / 255)),
    );
    const rig = rigOf({ camera: { bands: BANDS.colour } });
    const fromFile = await quick({ rig, scene });
    const fromMemory = await quick({ rig, scene: { width: WIDTH, height: HEIGHT, planes } });
    for (const band of [0, 1, 2]) {
      expect(largestDifference(fromFile.picture.planes[band], fromMemory.picture.planes[band])).toBeLessThan(
        1e-6,
      );
    }
  });

  it('takes a scene as linear light where told so', async () => {
    const scene = folder.path('grey.png');
    await sharp(new Uint8Array(WIDTH * HEIGHT).fill(51), {
      raw: { width: WIDTH, height: HEIGHT, channels: 1 },
    })
      .png()
      .toFile(scene);
    const middle = async (sceneLinear: boolean) =>
      (await quick({ scene, sceneLinear })).picture.planes[0][620];
    expect(await middle(true)).toBeCloseTo(0.2, 5);
    expect(await middle(false)).toBeCloseTo(srgbDecode(0.2), 5);
  });

  it('honours the orientation of a photograph', async () => {
    // stored lying on its side: what is left in the file stands at the top
    const data = Uint8Array.from({ length: WIDTH * HEIGHT }, (_, i) => (i % HEIGHT < HEIGHT / 2 ? 255 : 0));
    const scene = folder.path('turned.jpg');
    await sharp(data, { raw: { width: HEIGHT, height: WIDTH, channels: 1 } })
      .withMetadata({ orientation: 6 })
      .jpeg({ quality: 100 })
      .toFile(scene);
    const { picture } = await quick({ scene });
    const plane = picture.planes[0];
    expect(plane[2 * WIDTH + 20]).toBeGreaterThan(0.9);
    expect(plane[(HEIGHT - 3) * WIDTH + 20]).toBeLessThan(0.1);
  });

  it('writes 16-bit linear light', async () => {
    const out = folder.path('out.tif');
    const { picture } = await quick({ scene: noise(4), out, linear: true });
    const { data } = await samplesOf(out, 'ushort')
      .raw({ depth: 'ushort' })
      .toBuffer({ resolveWithObject: true });
    const samples = new Uint16Array(data.buffer, data.byteOffset, data.byteLength / 2);
    const channels = samples.length / (WIDTH * HEIGHT);
    const first = samples.filter((_, i) => i % channels === 0);
    expect(
      largestDifference(
        first,
        picture.planes[0].map((value) => 65535 * value),
      ),
    ).toBeLessThanOrEqual(0.51);
  });
});

describe('warnings', () => {
  it.each([
    [
      'the lens is used past its field',
      rigOf({ waves: {}, lens: { fullFieldMm: 0.05 } }),
      /h = 1\.\d+, past full_field_mm = 0\.05/,
    ],
    [
      'a colour table ends early',
      rigOf({
        lens: { axialUm: [[600, 1]] },
        camera: { bands: [{ name: 'mono', lines: [{ nm: 500, weight: 1 }] }] },
      }),
      /500 nm: the colour tables end before/,
    ],
  ])('that %s', async (_, rig, message) => {
    const { record } = await quick({ rig, scene: noise(1) });
    expect(record.warnings).toEqual([expect.stringMatching(message)]);
  });

  it('that no kernel and no grid of cells is enough, with what is lost', () => {
    const settings = settle({ rig: rigOf(), scene: noise(1) });
    const accuracy = {
      blendBound: 0.0051,
      energyOutsideKernel: 0.0123,
      cells: [1, 1] as [number, number],
      kernelPx: 1023,
    };
    expect(warningsFor(settings, accuracy)).toEqual([
      expect.stringMatching(/^1\.23 % of a PSF's light falls outside the largest kernel \(1023 pixels\)/),
      expect.stringMatching(/^blending PSFs may be wrong by 0\.0051 of full scale/),
    ]);
    expect(warningsFor(settings, { ...accuracy, blendBound: 0.004, energyOutsideKernel: 0.005 })).toEqual([]);
  });
});

describe('refusals', () => {
  const faultsOf = async (options: Partial<RenderOptions>): Promise<readonly Fault[]> => {
    try {
      await fresh({ scene: noise(1), ...options });
    } catch (error) {
      expect(error).toBeInstanceOf(InputError);
      return (error as InputError).faults;
    }
    throw new Error('nothing was refused');
  };

  it.each([
    ['oversample', [0, -1, 1.5, 17, Number.NaN]],
    ['tolerance', [0, -0.1, 1.1, Number.NaN, Number.POSITIVE_INFINITY]],
    ['kernelTolerance', [0, -0.1, 1.1, Number.NaN]],
    ['threads', [0, -2, 1.5, 1000, Number.NaN]],
    ['seed', [-1, 0.5, 2 ** 53, Number.NaN]],
    ['cameraSeed', [-1, Number.NaN]],
  ])('%s of %j', async (key, values) => {
    for (const value of values) {
      const [fault] = await faultsOf({ [key]: value });
      expect(fault).toMatchObject({ key, found: String(value), allowed: expect.stringMatching(/number/) });
    }
  });

  it('of all options in one go', async () => {
    const faults = await faultsOf({ oversample: 0, tolerance: 0, seed: -1 });
    expect(faults.map(({ key }) => key)).toEqual(['oversample', 'tolerance', 'seed']);
  });

  it('of what cannot be written, before the scene is looked at', async () => {
    mkdirSync(folder.path('sub'));
    folder.write('file', 'x');
    const scene = folder.path('missing.png');
    const keyOf = async (options: Partial<RenderOptions>) => (await faultsOf({ scene, ...options }))[0].key;
    expect(await keyOf({ out: folder.path('sub') })).toBe('--out');
    expect(await keyOf({ out: folder.path('none/a.png') })).toBe('--out');
    expect(await keyOf({ out: folder.path('file/a.png') })).toBe('--out');
    expect(await keyOf({ out: folder.path('a.gif') })).toBe('--out');
    expect(await keyOf({ out: folder.path('a.jpg'), linear: true })).toBe('--out');
    expect(await keyOf({ raw: folder.path('a.webp') })).toBe('--raw');
    expect(await keyOf({ recordFile: folder.path('none/a.json') })).toBe('--record');
    expect(await keyOf({ rig: rigOf({ camera: { bands: BANDS.colour } }), raw: folder.path('a.png') })).toBe(
      '--raw',
    );
  });

  it('of lenses that cannot be computed, before the scene is looked at', async () => {
    const scene = folder.path('missing.png');
    const keyOf = async (rig: Rig) => (await faultsOf({ scene, rig }))[0].key;
    expect(await keyOf(rigOf({ waves: { W131: 30_000 } }))).toBe('lens.waves.W131');
    expect(await keyOf(rigOf({ waves: { W311: 1e9 } }))).toBe('lens.waves.W311');
  });

  it.each([
    ['no file', () => folder.path('missing.png')],
    ['a folder', () => folder.path('.')],
    ['a text', () => folder.write('scene.png', 'lens:\n  name: x\n')],
    ['an empty file', () => folder.write('scene.png', '')],
    [
      'a cut picture',
      async () => folder.write('cut.png', readFileSync(await rampFile('whole.png')).subarray(0, 200)),
    ],
    [
      '60 000 x 60 000 pixels declared in a tiny file',
      async () => folder.write('huge.png', declared(await rampFile('whole.png'), 60_000)),
    ],
  ])('of a scene that is %s, and nothing is written', async (_, make) => {
    const scene = await make();
    const before = readdirSync(folder.path('.')).sort();
    const [out, recordFile] = [folder.path('out.png'), folder.path('out.json')];
    const start = performance.now();
    const [fault] = await faultsOf({ scene, out, recordFile });
    expect(performance.now() - start).toBeLessThan(5000); // no decoder is let loose on it; 0.2 s measured
    expect(fault.file).toBe(scene);
    expect(readdirSync(folder.path('.')).sort()).toEqual(before);
  });

  /** A PNG whose head declares another size, with the right check sum. */
  function declared(path: string, side: number): Buffer {
    const png = Buffer.from(readFileSync(path));
    png.writeUInt32BE(side, 16);
    png.writeUInt32BE(side, 20);
    // CRC-32 of the PNG specification, annex D (from memory), over type and data of the head
    let crc = 0xffffffff;
    for (const byte of png.subarray(12, 29)) {
      crc ^= byte;
      for (let k = 0; k < 8; k++) crc = crc & 1 ? (crc >>> 1) ^ 0xedb88320 : crc >>> 1;
    }
    png.writeUInt32BE(~crc >>> 0, 29);
    return png;
  }
});

describe('interrupts', () => {
  it.each(['psf', 'warp', 'blur', 'camera', 'encode'])(
    'in the stage %s leave nothing behind',
    async (stage) => {
      const stop = new AbortController();
      const out = folder.path('out.png');
      writeFileSync(out, 'what stood here before');
      const running = render({
        ...QUICK,
        rig: rigOf({ camera: { sensor: SENSOR } }),
        scene: noise(1),
        out,
        recordFile: folder.path('out.json'),
        signal: stop.signal,
        onProgress: (progress) => {
          if (progress.stage === stage) stop.abort();
        },
      });
      await expect(running).rejects.toThrow(InterruptedError);
      expect(readdirSync(folder.path('.'))).toEqual(['out.png']);
      expect(readFileSync(out, 'utf8')).toBe('what stood here before');
    },
  );

  it('before the start end it at once', async () => {
    await expect(fresh({ scene: noise(1), signal: AbortSignal.abort() })).rejects.toThrow(InterruptedError);
  });
});

describe('Renderer', () => {
  it('gives the pictures that render gives, whatever it rendered before, also after a failure', async () => {
    const rigs = [
      rigOf(),
      rigOf({ camera: { bands: BANDS.colour, sensor: SENSOR } }),
      rigOf({ mount: { sensorTiltDeg: [0.5, 0], fNumber: 4 } }),
      rigOf({ camera: { pixels: [21, 44] } }),
    ];
    const renderer = new Renderer({ threads: 2 });
    try {
      const pictures: Raster[] = [];
      for (const rig of [...rigs, rigs[0]]) {
        pictures.push((await renderer.render({ ...QUICK, rig, scene: noise(1) })).picture);
        await expect(renderer.render({ ...QUICK, rig, scene: folder.path('missing.png') })).rejects.toThrow(
          InputError,
        );
        pictures.push((await renderer.render({ ...QUICK, rig, scene: noise(2) })).picture); // the PSFs are at hand
      }
      for (const [i, rig] of [...rigs, rigs[0]].entries()) {
        expect(pictures[2 * i]).toEqual((await fresh({ rig, scene: noise(1) })).picture);
        expect(pictures[2 * i + 1]).toEqual((await fresh({ rig, scene: noise(2) })).picture);
      }
    } finally {
      await renderer.close();
    }
  });
});
