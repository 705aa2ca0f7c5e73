import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { formatOf } from '../../../src/files/pictures/formats.js';
import { checkPicture } from '../../../src/files/pictures/picture.js';
import { readScene } from '../../../src/files/pictures/read.js';
import { faultOf, pictureFolder } from './folder.js';
import { emptyPng, writePng } from './png-file.js';

const folder = pictureFolder();
const SIDE = 64;
const noise = Uint8Array.from({ length: 3 * SIDE * SIDE }, (_, i) => (i * i * 7919) % 251);
const noise16 = Uint16Array.from(noise, (value) => value * 257);
const image = () => sharp(noise, { raw: { width: SIDE, height: SIDE, channels: 3 } });
const image16 = () =>
  sharp(noise16, { raw: { width: SIDE, height: SIDE, channels: 3 } }).toColourspace('rgb16');

const FILES: readonly [name: string, make: () => Promise<Buffer>][] = [
  ['plain.png', () => image().png().toBuffer()],
  ['deep.png', () => image16().png().toBuffer()],
  ['interlaced.png', () => image().png({ progressive: true }).toBuffer()],
  ['baseline.jpg', () => image().jpeg().toBuffer()],
  ['progressive.jpg', () => image().jpeg({ progressive: true }).toBuffer()],
  ['lossy.webp', () => image().webp().toBuffer()],
  ['lossless.webp', () => image().webp({ lossless: true }).toBuffer()],
  ['plain.tif', () => image().tiff({ compression: 'none' }).toBuffer()],
  ['lzw.tif', () => image16().tiff({ compression: 'lzw', predictor: 'horizontal' }).toBuffer()],
  ['deflate.tif', () => image16().tiff({ compression: 'deflate' }).toBuffer()],
  ['inner-jpeg.tif', () => image().tiff({ compression: 'jpeg' }).toBuffer()],
];

describe('readScene: damage', () => {
  it.each(FILES)('reads %s whole and refuses it cut anywhere', async (name, make) => {
    const bytes = await make();
    expect((await readScene(folder.put(name, bytes))).channels).toBe(3);
    // the last 12 bytes of a PNG are its end mark, without which the picture is still whole
    const tail = name.endsWith('.png') ? 13 : 1;
    const lengths = [0.05, 0.25, 0.5, 0.75, 0.95].map((share) => Math.floor(share * bytes.length));
    for (const length of [...lengths, bytes.length - tail]) {
      const fault = await faultOf(() => readScene(folder.put(name, bytes.subarray(0, length))));
      expect(fault.file).toBe(join(folder.path, name));
      expect(fault.message).toMatch(/^is damaged or cut short \(.+\)$/);
      expect(fault.advice).toBe('Copy or save it again.');
    }
  });

  it('refuses a PNG with a changed byte', async () => {
    const bytes = await image().png().toBuffer();
    bytes[bytes.length >> 1] ^= 0x55;
    expect((await faultOf(() => readScene(folder.put('changed.png', bytes)))).message).toContain('damaged');
  });
});

describe('readScene: what is no picture to be read', () => {
  it('offers near names for a missing file', async () => {
    folder.put('belt-apples.png', await image().png().toBuffer());
    const fault = await faultOf(() => readScene(join(folder.path, 'belt-aples.png')));
    expect(fault.message).toContain('no such file');
    expect(fault.advice).toContain('belt-apples.png');
  });

  it('lists the pictures in a folder', async () => {
    const inner = join(folder.path, 'crates');
    mkdirSync(inner);
    const empty = await faultOf(() => readScene(inner));
    expect([empty.message, empty.advice]).toEqual(['is a folder, not a picture', 'Name a picture file.']);
    folder.put('crates/tag.TIF', Buffer.from('II'));
    folder.put('crates/notes.txt', Buffer.from('apples'));
    expect((await faultOf(() => readScene(inner))).advice).toBe('Name a picture in it: tag.TIF.');
  });

  it('refuses a device', async () => {
    expect((await faultOf(() => readScene('/dev/null'))).message).toBe('is no file but a device or a pipe');
  });

  it('refuses an empty file', async () => {
    expect((await faultOf(() => readScene(folder.put('empty.png', Buffer.alloc(0))))).message).toBe(
      'is empty',
    );
  });

  it.each([
    ['GIF', () => image().gif().toBuffer()],
    [
      'SVG',
      async () =>
        Buffer.from('<?xml version="1.0"?>\n<svg xmlns="http://www.w3.org/2000/svg" width="9" height="9"/>'),
    ],
    ['SVG', async () => Buffer.from('  <!-- crate tag -->\n<svg width="9" height="9"></svg>')],
    ['PDF', async () => Buffer.from('%PDF-1.7\n')],
    ['HEIF or AVIF', () => image().avif({ effort: 0 }).toBuffer()],
    ['BMP', async () => Buffer.from('BM0000000000')],
    ['something else', async () => Buffer.from('width,height\n9,9\n')],
  ])('names %s and the formats that are read', async (found, make) => {
    // whatever the name says: the first bytes decide
    const fault = await faultOf(async () => readScene(folder.put('other.png', await make())));
    expect(fault.message).toBe('is not a picture of a format that is read');
    expect([fault.found, fault.allowed]).toEqual([found, 'PNG, JPEG, TIFF, WebP']);
  });

  it.each(['webp', 'tiff'] as const)('refuses several pictures in one %s', async (format) => {
    const two = sharp([await image().png().toBuffer(), await image().negate().png().toBuffer()], {
      join: { animated: true },
    });
    const path = folder.put(`two.${format}`, await two.toFormat(format).toBuffer());
    expect(await faultOf(() => readScene(path))).toMatchObject({
      message: 'holds several pictures',
      found: '2',
      allowed: 'one picture',
    });
  });

  it.each([
    [60000, 60000, '60000 x 60000 (3600 megapixels)'],
    [100000, 4001, '100000 x 4001 (400 megapixels)'],
  ])('refuses %i x %i pixels declared in a tiny file, at once', async (width, height, found) => {
    const path = folder.put('huge.png', emptyPng(width, height));
    const started = performance.now();
    expect(await faultOf(() => readScene(path))).toMatchObject({
      message: 'has too many pixels',
      found,
      allowed: 'up to 400 megapixels',
    });
    // decoding 3600 megapixels would take minutes; a loaded machine may well need tens of ms for the head
    expect(performance.now() - started).toBeLessThan(1000);
  });

  it('refuses a scene of one pixel, not one of two', async () => {
    const dots = (width: number) =>
      writePng({ width, height: 1, bitDepth: 8, colourType: 0, samples: new Uint8Array(width) });
    const fault = await faultOf(() => readScene(folder.put('one.png', dots(1))));
    expect(fault).toMatchObject({ found: '1 x 1', allowed: 'two pixels or more' });
    expect((await readScene(folder.put('two.png', dots(2)))).raster.width).toBe(2);
  });

  it('refuses samples in floating point', async () => {
    const path = folder.put(
      'float.tif',
      await image().tiff({ predictor: 'float', compression: 'deflate' }).toBuffer(),
    );
    expect(await faultOf(() => readScene(path))).toMatchObject({
      message: 'has samples of a kind that is not read',
      found: '32 bits (float)',
      allowed: 'whole numbers of 8 or 16 bits',
    });
  });

  it('refuses colours in another space than light or ink', async () => {
    const lab = await image().toColourspace('lab').tiff({ compression: 'lzw' }).toBuffer();
    const fault = await faultOf(() => readScene(folder.put('lab.tif', lab)));
    expect(fault).toMatchObject({
      message: 'has channels that cannot be told apart',
      found: '3 (lab)',
      allowed: 'grey, RGB or CMYK, each with or without alpha',
    });
  });

  it('refuses more channels than colours and alpha', async () => {
    const more = { raw: { width: SIDE, height: SIDE, channels: 3 } } as const;
    const six = await image().joinChannel(Buffer.from(noise), more).tiff({ compression: 'none' }).toBuffer();
    const fault = await faultOf(() => readScene(folder.put('six.tif', six)));
    expect(fault).toMatchObject({ message: 'has channels that cannot be told apart', found: '6 (srgb)' });
  });

  it('refuses ink as linear light', async () => {
    const path = folder.put('ink.jpg', await image().toColourspace('cmyk').jpeg().toBuffer());
    const fault = await faultOf(() => readScene(path, { sceneLinear: true }));
    expect(fault).toMatchObject({ message: 'is CMYK, which is ink and not light', allowed: 'grey or RGB' });
  });
});

describe('checkPicture', () => {
  const planes = (count: number, samples: number) =>
    Array.from({ length: count }, () => new Float32Array(samples));

  it('passes mono and colour', () => {
    checkPicture({ width: 2, height: 1, planes: planes(1, 2) });
    checkPicture({ width: 3, height: 5, planes: planes(3, 15) });
  });

  it.each([
    [0, 5, 1, 0, '0 x 5'],
    [2.5, 2, 1, 5, '2.5 x 2'],
    [Number.NaN, 2, 1, 5, 'NaN x 2'],
    [1, 1, 1, 1, '1 x 1'],
    [2, 2, 2, 4, '2'],
    [2, 2, 0, 4, '0'],
    [2, 2, 3, 5, '5'],
  ])('refuses %d x %d in %i planes of %i samples', async (width, height, count, samples, found) => {
    const fault = await faultOf(() => checkPicture({ width, height, planes: planes(count, samples) }));
    expect(fault.found).toBe(found);
  });

  it.each([Number.NaN, Number.POSITIVE_INFINITY, -0.25])('refuses %d and says where it is', async (value) => {
    const picture = { width: 4, height: 3, planes: planes(3, 12) };
    picture.planes[2][6] = value;
    const fault = await faultOf(() => checkPicture(picture, 'my scene'));
    expect(fault).toMatchObject({ file: 'my scene', key: 'planes[2]', found: String(value) });
    expect(fault.message).toContain('column 2, row 1');
  });
});

describe('formatOf', () => {
  it.each([
    ['a.png', 'png'],
    ['b.JPG', 'jpeg'],
    ['c.jpeg', 'jpeg'],
    ['folder.d/d.Tif', 'tiff'],
    ['e.tiff', 'tiff'],
    ['f.webp', 'webp'],
  ])('%s is %s', (path, format) => {
    expect(formatOf(path)).toBe(format);
  });

  it.each([
    ['out.gif', '.gif'],
    ['out', 'no extension'],
    ['.png', 'no extension'],
  ])('refuses %s', async (path, found) => {
    const fault = await faultOf(() => formatOf(path, '--out'));
    expect(fault).toMatchObject({
      file: path,
      key: '--out',
      found,
      allowed: '.png, .jpg, .jpeg, .tif, .tiff, .webp',
    });
  });
});
