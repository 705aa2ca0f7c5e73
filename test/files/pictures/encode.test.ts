import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import {
  encodePicture,
  encodeRaw,
  refuseLargeSide,
  refuseLinearFormat,
} from '../../../src/files/pictures/encode.js';
import type { PictureFormat } from '../../../src/files/pictures/formats.js';
import { limitPictureThreads } from '../../../src/files/pictures/library.js';
import type { Picture } from '../../../src/files/pictures/picture.js';
import { readScene } from '../../../src/files/pictures/read.js';
import { srgbDecode, srgbEncode } from '../../../src/numeric/srgb.js';
import { faultOf, pictureFolder } from './folder.js';
import { readPng } from './png-file.js';

const folder = pictureFolder();

/** Unequal sides, and planes that differ. */
const [WIDTH, HEIGHT] = [23, 14];
const PIXELS = WIDTH * HEIGHT;
const mono: Picture = {
  width: WIDTH,
  height: HEIGHT,
  planes: [Float32Array.from({ length: PIXELS }, (_, i) => ((i * 29) % 211) / 210)],
};
const colour: Picture = {
  width: WIDTH,
  height: HEIGHT,
  planes: [29, 31, 37].map((step) =>
    Float32Array.from({ length: PIXELS }, (_, i) => ((i * step) % 211) / 210),
  ),
};
const interleaved = (picture: Picture, code: (value: number) => number) =>
  Array.from({ length: PIXELS * picture.planes.length }, (_, i) =>
    code(picture.planes[i % picture.planes.length][Math.floor(i / picture.planes.length)]),
  );
const code8 = (value: number) => Math.round(255 * srgbEncode(value));
const code16 = (value: number) => Math.round(65535 * value);

/** What the picture library finds in a file, its colour management left out. */
const stored = async (file: Buffer) => {
  const image = sharp(file, { ignoreIcc: true });
  const { space, depth, channels } = await image.metadata();
  const { data } = await image
    .toColourspace(space)
    .raw({ depth: depth as 'uchar' | 'ushort' })
    .toBuffer({ resolveWithObject: true });
  const samples =
    depth === 'ushort' ? [...new Uint16Array(data.buffer, data.byteOffset, data.length / 2)] : [...data];
  return { space, depth, channels, samples };
};

describe('encodePicture: 8-bit sRGB', () => {
  it.each(['png', 'tiff'] as const)(
    'writes every code to nearest in %s, grey as one channel',
    async (format) => {
      expect(await stored(await encodePicture(mono, format))).toEqual({
        space: 'b-w',
        depth: 'uchar',
        channels: 1,
        samples: interleaved(mono, code8),
      });
      expect(await stored(await encodePicture(colour, format))).toEqual({
        space: 'srgb',
        depth: 'uchar',
        channels: 3,
        samples: interleaved(colour, code8),
      });
    },
  );

  it('writes PNG that another reader reads, and says that it is sRGB', async () => {
    for (const [picture, colourType] of [
      [mono, 0],
      [colour, 2],
    ] as const) {
      const png = readPng(await encodePicture(picture, 'png'));
      expect(png).toMatchObject({ width: WIDTH, height: HEIGHT, bitDepth: 8, colourType });
      expect([...png.samples]).toEqual(interleaved(picture, code8));
      expect(png.chunks.map(([type]) => type).slice(0, 2)).toEqual(['IHDR', 'sRGB']);
    }
  });

  it.each([
    ['jpeg', 'b-w', 1],
    ['webp', 'srgb', 3], // the format has no grey
  ] as const)('writes %s near the picture, grey and colour', async (format, greySpace, greyChannels) => {
    const smooth = (phase: number) =>
      Float32Array.from(
        { length: 64 * 48 },
        (_, i) => 0.5 + 0.4 * Math.sin((i % 64) / 9 + phase) * Math.cos(i / 700),
      );
    const pictures = [[0], [0, 1, 2]].map((phases) => ({
      width: 64,
      height: 48,
      planes: phases.map(smooth),
    }));
    for (const picture of pictures) {
      const file = await encodePicture(picture, format);
      const found = await stored(file);
      const isGrey = picture.planes.length === 1;
      expect(found).toMatchObject({
        space: isGrey ? greySpace : 'srgb',
        channels: isGrey ? greyChannels : 3,
      });
      const { raster } = await readScene(folder.put(`near.${format}`, file));
      picture.planes.forEach((plane, k) => {
        let square = 0;
        plane.forEach((value, i) => {
          square += (srgbEncode(raster.planes[k][i]) - srgbEncode(value)) ** 2;
        });
        // quality 95: under 1 % of full scale for JPEG; WebP halves the resolution of colour
        expect(Math.sqrt(square / plane.length)).toBeLessThan(0.012);
      });
    }
    if (format === 'jpeg') {
      expect((await sharp(await encodePicture(colour, 'jpeg')).metadata()).chromaSubsampling).toBe('4:4:4');
    }
  });

  it('keeps the quality that is asked for', async () => {
    const sizes = await Promise.all(
      [40, 95].map(async (quality) => (await encodePicture(colour, 'jpeg', { quality })).length),
    );
    expect(sizes[0]).toBeLessThan(0.7 * sizes[1]);
    expect((await encodePicture(colour, 'jpeg')).length).toBe(sizes[1]); // 95 is the default
  });

  it('clips below 0 and above 1', async () => {
    const planes = [Float32Array.of(-1, -1e-9, 0, 1, 1.0001, 50)];
    const picture = { width: 3, height: 2, planes };
    expect((await stored(await encodePicture(picture, 'png'))).samples).toEqual([0, 0, 0, 255, 255, 255]);
    const linear = await encodePicture(picture, 'png', { linear: true });
    expect((await stored(linear)).samples).toEqual([0, 0, 0, 65535, 65535, 65535]);
  });
});

describe('encodePicture: 16-bit linear', () => {
  it.each(['png', 'tiff'] as const)('writes every code to nearest in %s', async (format) => {
    for (const [picture, space, channels] of [
      [mono, 'grey16', 1],
      [colour, 'rgb16', 3],
    ] as const) {
      const found = await stored(await encodePicture(picture, format, { linear: true }));
      expect(found).toEqual({ space, depth: 'ushort', channels, samples: interleaved(picture, code16) });
    }
  });

  it('writes PNG that another reader reads, and says that it is linear', async () => {
    for (const [picture, colourType] of [
      [mono, 0],
      [colour, 2],
    ] as const) {
      const png = readPng(await encodePicture(picture, 'png', { linear: true }));
      expect(png).toMatchObject({ width: WIDTH, height: HEIGHT, bitDepth: 16, colourType });
      expect([...png.samples]).toEqual(interleaved(picture, code16));
      const types = png.chunks.map(([type]) => type);
      expect(types).not.toContain('sRGB');
      expect(png.chunks[1]).toEqual(['gAMA', Buffer.from([0, 1, 0x86, 0xa0])]); // 100000
    }
  });

  it.each(['png', 'tiff'] as const)('comes back as it went, all 65536 steps, in %s', async (format) => {
    const steps = (turn: (code: number) => number) =>
      Float32Array.from({ length: 65536 }, (_, code) => Math.fround(turn(code) / 65535));
    const planes = [
      steps((code) => code),
      steps((code) => 65535 - code),
      steps((code) => (code * 7919) % 65536),
    ];
    for (const picture of [
      { width: 256, height: 256, planes: [planes[0]] },
      { width: 256, height: 256, planes },
    ]) {
      const file = await encodePicture(picture, format, { linear: true });
      const { raster } = await readScene(folder.put(`steps.${format}`, file), { sceneLinear: true });
      picture.planes.forEach((plane, k) => {
        expect(Buffer.compare(Buffer.from(raster.planes[k].slice().buffer), Buffer.from(plane.buffer))).toBe(
          0,
        );
      });
    }
  });

  it.each(['jpeg', 'webp'] as const)('is refused as %s, with the way out', async (format) => {
    const fault = await faultOf(() => encodePicture(mono, format, { linear: true }));
    expect(fault).toMatchObject({ allowed: 'PNG, TIFF', advice: 'Name the file .png or .tif.' });
    expect(fault.found).toMatch(/^(JPEG|WebP) for 16 bits$/);
  });
});

describe('encodePicture: limits and determinism', () => {
  it.each([
    ['jpeg', 65536, 'JPEG', 65535],
    ['webp', 16384, 'WebP', 16383],
  ] as const)('refuses more pixels a side than %s holds', async (format, width, name, allowed) => {
    const wide = { width, height: 1, planes: [new Float32Array(width)] };
    const fault = await faultOf(() => encodePicture(wide, format));
    expect(fault).toMatchObject({ found: `${width} x 1`, allowed: `up to ${allowed} pixels a side` });
    expect(fault.message).toContain(name);
  });

  it.each(['png', 'jpeg', 'tiff', 'webp'] as const)(
    'gives the same %s for the same picture',
    async (format: PictureFormat) => {
      const [first, second] = [await encodePicture(colour, format), await encodePicture(colour, format)];
      expect(first.equals(second)).toBe(true);
    },
  );

  it('does not depend on the number of threads, reading or writing', async () => {
    const side = 700; // several of the library's strips
    const planes = [5, 7, 11].map((step) =>
      Float32Array.from({ length: side * side }, (_, i) => ((i * step) % 1009) / 1008),
    );
    const picture = { width: side, height: side, planes };
    const runs: Buffer[][] = [];
    for (const threads of [1, 4]) {
      limitPictureThreads(threads);
      const files = await Promise.all(
        (['png', 'jpeg', 'tiff', 'webp'] as const).map((format) => encodePicture(picture, format)),
      );
      const { raster } = await readScene(folder.put('threads.jpg', files[1]));
      runs.push([...files, ...raster.planes.map((plane) => Buffer.from(plane.slice().buffer))]);
    }
    limitPictureThreads(0);
    runs[0].forEach((bytes, k) => {
      expect(bytes.equals(runs[1][k])).toBe(true);
    });
  });

  it('gives an 8-bit picture back as it was read', async () => {
    const codes = Float32Array.from({ length: 256 }, (_, code) => srgbDecode(code / 255));
    const file = await encodePicture({ width: 16, height: 16, planes: [codes] }, 'png');
    const again = await encodePicture((await readScene(folder.put('again.png', file))).raster, 'png');
    expect(again.equals(file)).toBe(true);
  });
});

describe('refusals before any work', () => {
  it('name the option that names the file', async () => {
    expect((await faultOf(() => refuseLinearFormat('jpeg', '--raw'))).key).toBe('--raw');
    expect((await faultOf(() => refuseLargeSide('webp', 20000, 10, '--out'))).key).toBe('--out');
  });

  it('let pass what a format can hold', () => {
    refuseLinearFormat('png');
    refuseLinearFormat('tiff');
    refuseLargeSide('jpeg', 65535, 65535);
    refuseLargeSide('png', 200000, 10);
  });
});

describe('encodeRaw', () => {
  const numbers = Uint16Array.from({ length: 12 * 7 }, (_, i) => (i * 7919) % 65536);

  it.each(['png', 'tiff'] as const)('keeps every number in %s', async (format) => {
    const found = await stored(await encodeRaw(numbers, 12, 7, format));
    expect(found).toEqual({ space: 'grey16', depth: 'ushort', channels: 1, samples: [...numbers] });
  });

  it('is a plain 16-bit grey PNG for another reader', async () => {
    const png = readPng(await encodeRaw(numbers, 12, 7, 'png'));
    expect(png).toMatchObject({ width: 12, height: 7, bitDepth: 16, colourType: 0 });
    expect([...png.samples]).toEqual([...numbers]);
  });

  it('takes numbers that lie within larger memory', async () => {
    const memory = new Uint16Array(200).fill(9);
    memory.set(numbers, 3);
    const file = await encodeRaw(memory.subarray(3, 3 + numbers.length), 12, 7, 'tiff');
    expect((await stored(file)).samples).toEqual([...numbers]);
  });

  it.each(['jpeg', 'webp'] as const)('refuses %s', async (format) => {
    expect((await faultOf(() => encodeRaw(numbers, 12, 7, format))).allowed).toBe('PNG, TIFF');
  });
});
