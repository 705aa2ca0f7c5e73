import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { readScene } from '../../../src/files/pictures/read.js';
import { srgbDecode } from '../../../src/numeric/srgb.js';
import { faultOf, pictureFolder } from './folder.js';
import {
  cubeProfile,
  greyProfile,
  profile,
  rgbProfile,
  SRGB_COLUMNS,
  SRGB_CURVE,
  WIDE_COLUMNS,
} from './icc-file.js';
import { type ColourType, profileChunk, writePng } from './png-file.js';

const folder = pictureFolder();
const CHANNELS_OF_TYPE = { 0: 1, 2: 3, 4: 2, 6: 4 } as const;

/** Samples without a pattern that a wrong stride could hide: each differs from its neighbours. */
const mixed = (count: number, fullScale: number) =>
  Array.from({ length: count }, (_, i) => Math.round((fullScale * ((i * 37) % 101)) / 100));

/** A grey patch as a JPEG, in one channel or three. */
const flatJpeg = (code: number, space: 'b-w' | 'srgb') =>
  sharp({ create: { width: 16, height: 16, channels: 3, background: { r: code, g: code, b: code } } })
    .toColourspace(space)
    .jpeg({ quality: 100 })
    .toBuffer();

/** The same JPEG with a profile in an APP2 segment. Source: ICC.1:2022, B.4 (from memory). */
const withJpegProfile = (jpeg: Buffer, icc: Buffer) => {
  const head = Buffer.from([0xff, 0xe2, 0, 0, ...Buffer.from('ICC_PROFILE\0', 'latin1'), 1, 1]);
  head.writeUInt16BE(head.length - 2 + icc.length, 2);
  return Buffer.concat([jpeg.subarray(0, 2), head, icc, jpeg.subarray(2)]);
};

const floats = (values: readonly number[]) => values.map((value) => Math.fround(value));

describe('readScene: samples', () => {
  it.each([
    [8, 0],
    [8, 2],
    [16, 0],
    [16, 2],
  ] as const)('decodes %i bits of PNG colour type %i from sRGB, plane by plane', async (bitDepth, type) => {
    const [width, height] = [5, 3];
    const channels = CHANNELS_OF_TYPE[type];
    const fullScale = 2 ** bitDepth - 1;
    const codes = mixed(width * height * channels, fullScale);
    const samples = bitDepth === 8 ? Uint8Array.from(codes) : Uint16Array.from(codes);
    const path = folder.put('a.png', writePng({ width, height, bitDepth, colourType: type, samples }));

    const scene = await readScene(path);
    expect(scene).toMatchObject({ channels, bitDepth, warnings: [], raster: { width, height } });
    scene.raster.planes.forEach((plane, channel) => {
      const expected = codes
        .filter((_, i) => i % channels === channel)
        .map((code) => srgbDecode(code / fullScale));
      expect([...plane]).toEqual(floats(expected));
    });

    const linear = await readScene(path, { sceneLinear: true });
    linear.raster.planes.forEach((plane, channel) => {
      const expected = codes.filter((_, i) => i % channels === channel).map((code) => code / fullScale);
      expect([...plane]).toEqual(floats(expected));
    });
  });

  it.each(['png', 'tiff'] as const)('keeps all steps of 16 bits in %s, grey and colour', async (format) => {
    const codes = Uint16Array.from({ length: 65536 }, (_, code) => code);
    const grey = sharp(codes, { raw: { width: 256, height: 256, channels: 1 } }).toColourspace('grey16');
    const file = grey.toFormat(format, format === 'tiff' ? { compression: 'lzw' } : {});
    const path = folder.put(`steps.${format}`, await file.toBuffer());
    for (const [sceneLinear, decode] of [
      [true, (x: number) => x],
      [false, srgbDecode],
    ] as const) {
      const { raster, bitDepth } = await readScene(path, { sceneLinear });
      expect(bitDepth).toBe(16);
      const [plane] = raster.planes;
      for (let code = 0; code < 65536; code++) {
        if (plane[code] !== Math.fround(decode(code / 65535)))
          expect.fail(`code ${code} became ${plane[code]}`);
      }
    }
    const triples = Uint16Array.from({ length: 3 * 65536 }, (_, i) =>
      i % 3 === 1 ? 65535 - ((i / 3) | 0) : (i / 3) | 0,
    );
    const colour = sharp(triples, { raw: { width: 256, height: 256, channels: 3 } }).toColourspace('rgb16');
    const colourPath = folder.put(
      `colour.${format}`,
      await colour.toFormat(format, format === 'tiff' ? { compression: 'lzw' } : {}).toBuffer(),
    );
    const { planes } = (await readScene(colourPath, { sceneLinear: true })).raster;
    for (let code = 0; code < 65536; code++) {
      if (planes[0][code] !== Math.fround(code / 65535)) expect.fail(`red ${code}`);
      if (planes[1][code] !== Math.fround(1 - code / 65535)) expect.fail(`green ${code}: ${planes[1][code]}`);
    }
  });

  it('reads JPEG and WebP', async () => {
    const flat = {
      create: { width: 16, height: 9, channels: 3, background: { r: 188, g: 99, b: 46 } },
    } as const;
    const jpeg = folder.put(
      'a.jpg',
      await sharp(flat).jpeg({ quality: 100, chromaSubsampling: '4:4:4' }).toBuffer(),
    );
    const webp = folder.put('a.webp', await sharp(flat).webp({ lossless: true }).toBuffer());
    for (const [path, slack] of [
      [jpeg, 2], // its colour transform rounds, and so does its cosine transform
      [webp, 0],
    ] as const) {
      const { raster, channels, bitDepth } = await readScene(path);
      expect([channels, bitDepth, raster.width, raster.height]).toEqual([3, 8, 16, 9]);
      [188, 99, 46].forEach((code, channel) => {
        const value = raster.planes[channel][70];
        expect(value).toBeGreaterThanOrEqual(Math.fround(srgbDecode((code - slack) / 255)));
        expect(value).toBeLessThanOrEqual(Math.fround(srgbDecode((code + slack) / 255)));
      });
    }
  });

  it('reads grey JPEG and TIFF as mono', async () => {
    const grey = sharp({ create: { width: 8, height: 8, channels: 3, background: '#808080' } }).toColourspace(
      'b-w',
    );
    for (const format of ['jpeg', 'tiff', 'png'] as const) {
      const scene = await readScene(
        folder.put(`g.${format}`, await grey.clone().toFormat(format).toBuffer()),
      );
      expect(scene.channels).toBe(1);
      expect(scene.raster.planes[0][20]).toBeCloseTo(srgbDecode(128 / 255), 6);
    }
  });

  it('expands palettes, with transparent entries', async () => {
    const palette = Buffer.from([255, 0, 0, 0, 128, 0, 10, 20, 30]);
    const chunks: [string, Uint8Array][] = [
      ['PLTE', palette],
      ['tRNS', Uint8Array.of(255, 51)],
    ];
    const samples = Uint8Array.of(0, 1, 2, 2, 1, 0);
    const path = folder.put(
      'p.png',
      writePng({ width: 3, height: 2, bitDepth: 8, colourType: 3, samples, chunks }),
    );
    const { raster, channels } = await readScene(path);
    expect(channels).toBe(3);
    const green = floats([srgbDecode(0), 0.2 * Math.fround(srgbDecode(128 / 255)), srgbDecode(20 / 255)]);
    expect([...raster.planes[1]]).toEqual([green[0], green[1], green[2], green[2], green[1], green[0]]);
  });

  it('expands 1-bit PNG to black and white', async () => {
    const dots = sharp(Buffer.from([0, 255, 255, 0]), { raw: { width: 2, height: 2, channels: 1 } });
    const path = folder.put(
      'bits.png',
      await dots.toColourspace('b-w').png({ palette: true, colours: 2 }).toBuffer(),
    );
    const { raster } = await readScene(path);
    for (const plane of raster.planes) expect([...plane]).toEqual([0, 1, 1, 0]);
  });
});

describe('readScene: alpha', () => {
  it.each([
    [8, 4],
    [8, 6],
    [16, 4],
    [16, 6],
  ] as const)(
    '%i bits of PNG colour type %i lie on black: linear value times alpha',
    async (bitDepth, type) => {
      const [width, height] = [4, 3];
      const stride = CHANNELS_OF_TYPE[type as Exclude<ColourType, 3>];
      const fullScale = 2 ** bitDepth - 1;
      const codes = mixed(width * height * stride, fullScale);
      const samples = bitDepth === 8 ? Uint8Array.from(codes) : Uint16Array.from(codes);
      const path = folder.put('alpha.png', writePng({ width, height, bitDepth, colourType: type, samples }));
      for (const [sceneLinear, decode] of [
        [false, srgbDecode],
        [true, (x: number) => x],
      ] as const) {
        const { raster, channels } = await readScene(path, { sceneLinear });
        expect(channels).toBe(stride - 1);
        raster.planes.forEach((plane, channel) => {
          for (let i = 0; i < width * height; i++) {
            const value = Math.fround(decode(codes[i * stride + channel] / fullScale));
            const alpha = codes[i * stride + stride - 1] / fullScale;
            expect(plane[i]).toBe(Math.fround(value * alpha));
          }
        });
      }
    },
  );
});

describe('readScene: orientation', () => {
  // 2 x 3 blocks, named by their value: what is to be seen is [1 2 / 3 4 / 5 6] for orientation 1
  const upright: Readonly<Record<number, [columns: number, rows: number, values: number[]]>> = {
    1: [2, 3, [1, 2, 3, 4, 5, 6]],
    2: [2, 3, [2, 1, 4, 3, 6, 5]],
    3: [2, 3, [6, 5, 4, 3, 2, 1]],
    4: [2, 3, [5, 6, 3, 4, 1, 2]],
    5: [3, 2, [1, 3, 5, 2, 4, 6]],
    6: [3, 2, [5, 3, 1, 6, 4, 2]],
    7: [3, 2, [6, 4, 2, 5, 3, 1]],
    8: [3, 2, [2, 4, 6, 1, 3, 5]],
  };
  const BLOCK = 16; // whole blocks of the lossy formats
  const [width, height] = [2 * BLOCK, 3 * BLOCK];
  const samples = Uint8Array.from({ length: width * height }, (_, i) => {
    const [column, row] = [Math.floor((i % width) / BLOCK), Math.floor(i / width / BLOCK)];
    return 40 * (1 + 2 * row + column);
  });

  // Source: Exif 2.3 (CIPA DC-008), tag 0x0112, where row 0 and column 0 of the file belong (from memory)
  it.each([1, 2, 3, 4, 5, 6, 7, 8])('turns EXIF orientation %i upright', async (orientation) => {
    const image = sharp(samples, { raw: { width, height, channels: 1 } }).withMetadata({ orientation });
    const [columns, rows, values] = upright[orientation];
    for (const format of ['jpeg', 'png', 'tiff', 'webp'] as const) {
      const path = folder.put(`turned.${format}`, await image.clone().toFormat(format).toBuffer());
      const { raster } = await readScene(path, { sceneLinear: true });
      expect([raster.width, raster.height]).toEqual([columns * BLOCK, rows * BLOCK]);
      const found = values.map((_, at) => {
        const [column, row] = [at % columns, Math.floor(at / columns)];
        const place = (row * BLOCK + BLOCK / 2) * raster.width + column * BLOCK + BLOCK / 2;
        return Math.round((255 * raster.planes[0][place]) / 40);
      });
      expect(found).toEqual(values);
    }
  });
});

describe('readScene: colour profiles', () => {
  const pixels = mixed(3 * 64, 255);
  const pixels16 = pixels.map((value, i) => Math.min(65535, value * 257 + (i % 7)));
  const colour = (icc: Buffer, bitDepth: 8 | 16 = 8) =>
    writePng({
      width: 8,
      height: 8,
      bitDepth,
      colourType: 2,
      samples: bitDepth === 8 ? Uint8Array.from(pixels) : Uint16Array.from(pixels16),
      chunks: [profileChunk(icc)],
    });
  const grey = (icc: Buffer, bitDepth: 8 | 16 = 16) =>
    writePng({
      width: 16,
      height: 12,
      bitDepth,
      colourType: 0,
      samples: bitDepth === 8 ? Uint8Array.from(pixels) : Uint16Array.from(pixels16),
      chunks: [profileChunk(icc)],
    });

  it.each([8, 16] as const)('reads %i bits tagged as sRGB as if untagged', async (bitDepth) => {
    const path = folder.put(
      'srgb.png',
      colour(rgbProfile([SRGB_CURVE, SRGB_CURVE, SRGB_CURVE], SRGB_COLUMNS), bitDepth),
    );
    const { raster, warnings } = await readScene(path);
    expect(warnings).toEqual([]);
    const [codes, fullScale] = bitDepth === 8 ? [pixels, 255] : [pixels16, 65535];
    raster.planes.forEach((plane, channel) => {
      const expected = codes.filter((_, i) => i % 3 === channel).map((code) => srgbDecode(code / fullScale));
      expect([...plane]).toEqual(floats(expected));
    });
  });

  it('knows the sRGB profile that the picture library embeds', async () => {
    const image = sharp(Buffer.from(pixels), { raw: { width: 8, height: 8, channels: 3 } });
    const path = folder.put('tagged.png', await image.withIccProfile('srgb').png().toBuffer());
    const { raster } = await readScene(path);
    const { planes } = (await readScene(folder.put('u.png', await image.clone().png().toBuffer()))).raster;
    raster.planes.forEach((plane, channel) => {
      expect([...plane]).toEqual([...planes[channel]]);
    });
  });

  it('converts 8 bits of wider primaries as the colour engine of the picture library does', async () => {
    const wide = rgbProfile([{ gamma: 2.2 }, { gamma: 2.2 }, { gamma: 2.2 }], WIDE_COLUMNS);
    // in the middle of the gamut, where nothing clips
    const samples = Uint8Array.from({ length: 3 * 256 }, (_, i) => 90 + ((i * 53) % 71));
    const file = writePng({
      width: 16,
      height: 16,
      bitDepth: 8,
      colourType: 2,
      samples,
      chunks: [profileChunk(wide)],
    });
    const { raster } = await readScene(folder.put('wide.png', file));
    const reference = await sharp(file).raw().toBuffer();
    let largest = 0;
    for (let i = 0; i < 256; i++) {
      for (let channel = 0; channel < 3; channel++) {
        const code = reference[3 * i + channel];
        const slack = (srgbDecode((code + 0.5) / 255) - srgbDecode((code - 0.5) / 255)) / 2;
        const error = Math.abs(raster.planes[channel][i] - srgbDecode(code / 255)) / slack;
        largest = Math.max(largest, error);
      }
    }
    // the reference rounds its result to 8 bits, which is 1 here, and its matrix to its own fixed point
    expect(largest).toBeLessThan(1.5);
    // and the conversion is no small thing: without it saturated colours would be several codes off
    expect(Math.abs(raster.planes[0][1] - srgbDecode(samples[3] / 255))).toBeGreaterThan(0.01);
  });

  it.each([8, 16] as const)(
    'applies the curves and the matrix of a linear profile to %i bits',
    async (bitDepth) => {
      const path = folder.put(
        'l.png',
        colour(rgbProfile([{ identity: true }, { gamma: 1 }, { gamma: 1 }], SRGB_COLUMNS), bitDepth),
      );
      const { raster } = await readScene(path);
      const [codes, fullScale] = bitDepth === 8 ? [pixels, 255] : [pixels16, 65535];
      raster.planes.forEach((plane, channel) => {
        plane.forEach((value, i) => {
          // the profile states its matrix to 1/65536, and its inverse enlarges that by up to 3 in each of
          // three terms
          expect(Math.abs(value - codes[3 * i + channel] / fullScale)).toBeLessThan(1.5e-4);
        });
      });
    },
  );

  it('clips what lies outside sRGB', async () => {
    const wide = rgbProfile([{ identity: true }, { identity: true }, { identity: true }], WIDE_COLUMNS);
    const samples = Uint8Array.of(0, 255, 0, 255, 255, 255);
    const file = writePng({
      width: 2,
      height: 1,
      bitDepth: 8,
      colourType: 2,
      samples,
      chunks: [profileChunk(wide)],
    });
    const { planes } = (await readScene(folder.put('green.png', file))).raster;
    expect(planes.map((plane) => plane[0])).toEqual([0, expect.closeTo(1, 4), 0]);
    for (const plane of planes) expect(plane[1]).toBeCloseTo(1, 3); // white stays white
  });

  it.each([
    ['a gamma', { gamma: 1.8 }, (x: number) => x ** (Math.round(1.8 * 256) / 256)],
    ['the identity', { identity: true }, (x: number) => x],
    [
      'a table',
      { table: [0, 0.1, 0.4, 1] },
      (x: number) => (x < 1 / 3 ? 0.3 * x : x < 2 / 3 ? 0.9 * x - 0.2 : 1.8 * x - 0.8),
    ],
    ['function type 0', { type: 0, parameters: [1.5] }, (x: number) => x ** 1.5],
    [
      'function type 1',
      { type: 1, parameters: [2, 1.25, -0.25] },
      (x: number) => Math.max(0, 1.25 * x - 0.25) ** 2,
    ],
    [
      'function type 2',
      { type: 2, parameters: [2, 0.75, -0.25, 0.125] },
      (x: number) => Math.max(0, 0.75 * x - 0.25) ** 2 + 0.125,
    ],
    [
      'function type 3',
      { type: 3, parameters: [2, 0.75, 0.25, 0.5, 0.25] },
      (x: number) => (x >= 0.25 ? (0.75 * x + 0.25) ** 2 : 0.5 * x),
    ],
    [
      'function type 4',
      { type: 4, parameters: [2, 0.5, 0.25, 0.5, 0.25, 0.125, 0.0625] },
      (x: number) => (x >= 0.25 ? (0.5 * x + 0.25) ** 2 + 0.125 : 0.5 * x + 0.0625),
    ],
  ] as const)('applies %s to grey, 8 and 16 bits', async (_, curve, law) => {
    for (const [bitDepth, codes, fullScale] of [
      [8, pixels, 255],
      [16, pixels16, 65535],
    ] as const) {
      const { raster, channels } = await readScene(folder.put('k.png', grey(greyProfile(curve), bitDepth)));
      expect(channels).toBe(1);
      raster.planes[0].forEach((value, i) => {
        // profiles state numbers to 1/65536, and a table's entries to 1/65535
        expect(Math.abs(value - law(codes[i] / fullScale))).toBeLessThan(3e-5);
      });
    }
  });

  it('takes grey under an RGB profile by that profile’s curve', async () => {
    const icc = rgbProfile([{ gamma: 2 }, { gamma: 2 }, { gamma: 2 }], SRGB_COLUMNS);
    const path = folder.put('grgb.jpg', withJpegProfile(await flatJpeg(128, 'b-w'), icc));
    const { raster, channels } = await readScene(path);
    expect(channels).toBe(1);
    expect(raster.planes[0][5]).toBeCloseTo((128 / 255) ** 2, 6);
  });

  it('passes over profiles where the scene is linear', async () => {
    const icc = rgbProfile([{ gamma: 2 }, { gamma: 2 }, { gamma: 2 }], WIDE_COLUMNS);
    const { planes } = (await readScene(folder.put('sl.png', colour(icc)), { sceneLinear: true })).raster;
    planes.forEach((plane, channel) => {
      expect([...plane]).toEqual(
        floats(pixels.filter((_, i) => i % 3 === channel).map((code) => code / 255)),
      );
    });
  });

  it.each([
    ['a damaged profile', Buffer.alloc(300, 'this is no profile at all. ')],
    [
      'a profile with offsets out of its bytes',
      rgbProfile([SRGB_CURVE, SRGB_CURVE, SRGB_CURVE], SRGB_COLUMNS).subarray(0, 200),
    ],
    ['a grey profile', greyProfile({ gamma: 3 })],
    ['a profile for ink', profile('CMYK', 'Lab ', [])],
  ])('says that %s in a colour picture was not used', async (_, icc) => {
    const path = folder.put('broken.jpg', withJpegProfile(await flatJpeg(90, 'srgb'), icc));
    const { raster, warnings } = await readScene(path);
    expect(raster.planes[0][1]).toBe(Math.fround(srgbDecode(90 / 255)));
    expect(warnings).toEqual([expect.stringContaining('broken.jpg: the embedded colour profile')]);
  });

  // straight from black to white in lightness: device value d is L* = 100 d
  const cube = cubeProfile((r, g, b) => [(100 * (r + g + b)) / 3, 0, 0]);

  it('leaves 8-bit colour with a profile beyond curves and a matrix to the picture library', async () => {
    const path = folder.put('cube.jpg', withJpegProfile(await flatJpeg(128, 'srgb'), cube));
    const { raster, warnings } = await readScene(path);
    expect(warnings).toEqual([]);
    // Source: CIE 1976 L*, Y = ((L + 16) / 116)^3. An 8-bit step here is 0.004, and both ends are rounded to one
    const luminance = (((100 * 128) / 255 + 16) / 116) ** 3;
    for (const plane of raster.planes) expect(Math.abs(plane[9] - luminance)).toBeLessThan(0.005);
  });

  it('refuses 16-bit colour with such a profile', async () => {
    const fault = await faultOf(() => readScene(folder.put('cube.png', colour(cube, 16))));
    expect(fault.message).toBe('has a colour profile that is more than curves and a matrix');
    expect((await readScene(folder.put('cube.png', colour(cube, 16)), { sceneLinear: true })).bitDepth).toBe(
      16,
    );
  });

  it.each([8, 16] as const)(
    'refuses %i-bit grey with a profile beyond curves and a matrix',
    async (bitDepth) => {
      const fault = await faultOf(() =>
        readScene(folder.put('lab.png', grey(greyProfile({ gamma: 2 }, 'Lab '), bitDepth))),
      );
      expect(fault.file).toContain('lab.png');
      expect(fault.message).toBe('has a colour profile that is more than curves and a matrix');
      expect(fault.advice).toContain('--scene-linear');
    },
  );
});

describe('readScene: CMYK', () => {
  it('is converted to RGB', async () => {
    const image = sharp({
      create: { width: 8, height: 8, channels: 3, background: '#b04030' },
    }).toColourspace('cmyk');
    const { raster, channels, bitDepth } = await readScene(
      folder.put('ink.jpg', await image.jpeg({ quality: 100 }).toBuffer()),
    );
    expect([channels, bitDepth]).toEqual([3, 8]);
    const [red, green, blue] = raster.planes.map((plane) => plane[9]);
    // to inks and back through two profiles: a red stays that red to a few codes
    expect(Math.abs(red - srgbDecode(0xb0 / 255))).toBeLessThan(0.05);
    expect(Math.abs(green - srgbDecode(0x40 / 255))).toBeLessThan(0.03);
    expect(Math.abs(blue - srgbDecode(0x30 / 255))).toBeLessThan(0.03);
  });
});

describe('readScene: planes', () => {
  it('lie in shared memory of their own, or where the caller says', async () => {
    const file = writePng({
      width: 3,
      height: 2,
      bitDepth: 8,
      colourType: 2,
      samples: Uint8Array.from(mixed(18, 255)),
    });
    const path = folder.put('planes.png', file);
    const { raster } = await readScene(path);
    for (const plane of raster.planes) expect(plane.buffer).toBeInstanceOf(SharedArrayBuffer);

    const memory = new SharedArrayBuffer(1024);
    const asked: number[][] = [];
    const { planes } = (
      await readScene(path, {
        allocate: (width, height, count) => {
          asked.push([width, height, count]);
          return [0, 1, 2].map((k) => new Float32Array(memory, 64 * k, width * height));
        },
      })
    ).raster;
    expect(asked).toEqual([[3, 2, 3]]);
    planes.forEach((plane, k) => {
      expect(plane.buffer).toBe(memory);
      expect([...plane]).toEqual([...raster.planes[k]]);
    });
  });

  it('reads a file anew that was written anew', async () => {
    const flat = (code: number) =>
      writePng({ width: 2, height: 1, bitDepth: 8, colourType: 0, samples: Uint8Array.of(code, code) });
    const path = folder.put('again.png', flat(255));
    expect((await readScene(path)).raster.planes[0][0]).toBe(1);
    folder.put('again.png', flat(0));
    expect((await readScene(path)).raster.planes[0][0]).toBe(0);
  });
});
