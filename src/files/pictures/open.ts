/** What a picture file says of itself, looked at before a single pixel is decoded. */
import { open, readdir, stat } from 'node:fs/promises';
import { extname } from 'node:path';
import type { Metadata } from 'sharp';
import { type Fault, InputError } from '../../errors.js';
import { unreadableFault } from '../input-text.js';
import { isPictureFormat, PICTURE_EXTENSIONS, READABLE_FORMATS, sniffFormat } from './formats.js';
import { sharp } from './library.js';
import { refuseOnePixel } from './picture.js';

/** Largest scene. In colour its planes take 4.8 GB; a larger file is more likely a broken one, or a trap. */
export const MAX_MEGAPIXELS = 400;

/** How every scene is opened: damage is an error, and the numbers of pixels and channels are checked here and
 * not by the library. */
export const OPEN_OPTIONS = { failOn: 'error', limitInputPixels: false, limitInputChannels: false } as const;

/** A picture file that can be decoded as a scene. */
export interface PictureHead {
  metadata: Metadata;
  bitDepth: 8 | 16;
  /** How the samples are coded. */
  model: 'grey' | 'rgb' | 'cmyk';
}

const MODELS: Readonly<Record<string, PictureHead['model']>> = {
  'b-w': 'grey',
  grey16: 'grey',
  srgb: 'rgb',
  rgb: 'rgb',
  rgb16: 'rgb',
  scrgb: 'rgb',
  cmyk: 'cmyk',
};

const COLOURS = { grey: 1, rgb: 3, cmyk: 4 } as const;

const BIT_DEPTHS: Readonly<Record<string, PictureHead['bitDepth']>> = { uchar: 8, ushort: 16 };

/** Bytes read to tell the format; an SVG may open with a long comment, the others need sixteen. */
const HEAD_BYTES = 1024;

/** Read the head of a picture file.
 * @param path  as the user named it
 * @throws {InputError} missing (with near names), a folder, a device, empty, another format, damaged, several
 *   pictures in one file, samples of another kind than 8 or 16 bits, too large, a single pixel */
export async function openPicture(path: string): Promise<PictureHead> {
  const format = sniffFormat(await firstBytes(path));
  if (!isPictureFormat(format)) {
    throw new InputError({
      file: path,
      message: 'is not a picture of a format that is read',
      found: format ?? 'something else',
      allowed: READABLE_FORMATS,
    });
  }
  let metadata: Metadata;
  try {
    metadata = await sharp(path, OPEN_OPTIONS).metadata();
  } catch (error) {
    throw damagedPicture(path, error);
  }
  return checkHead(path, metadata);
}

/** The fault of a file whose decoding broke off. */
export function damagedPicture(path: string, error: unknown): InputError {
  const reason = (error instanceof Error ? error.message : String(error))
    .replace(/^Input (file|buffer) (has corrupt header: |contains )?/, '')
    .split('\n')[0];
  return new InputError({
    file: path,
    message: `is damaged or cut short (${reason})`,
    advice: 'Copy or save it again.',
  });
}

async function firstBytes(path: string): Promise<Uint8Array> {
  try {
    const info = await stat(path); // before it is opened: to open a pipe would wait for its writer
    if (info.isDirectory()) throw new InputError(await folderFault(path));
    if (!info.isFile()) throw new InputError({ file: path, message: 'is no file but a device or a pipe' });
    if (info.size === 0) throw new InputError({ file: path, message: 'is empty' });
    const file = await open(path);
    try {
      const { buffer, bytesRead } = await file.read(Buffer.alloc(HEAD_BYTES), 0, HEAD_BYTES, 0);
      return buffer.subarray(0, bytesRead);
    } finally {
      await file.close();
    }
  } catch (error) {
    throw error instanceof InputError ? error : new InputError(unreadableFault(path, error));
  }
}

async function folderFault(path: string): Promise<Fault> {
  const pictures = (await readdir(path))
    .filter((name) => PICTURE_EXTENSIONS.includes(extname(name).toLowerCase()))
    .sort()
    .slice(0, 5);
  const advice =
    pictures.length === 0 ? 'Name a picture file.' : `Name a picture in it: ${pictures.join(', ')}.`;
  return { file: path, message: 'is a folder, not a picture', advice };
}

function checkHead(path: string, metadata: Metadata): PictureHead {
  const { width, height, pages = 1, channels } = metadata;
  if (pages > 1) {
    throw new InputError({
      file: path,
      message: 'holds several pictures',
      found: String(pages),
      allowed: 'one picture',
      advice: 'Save the one that you want as a file of its own.',
    });
  }
  if (width * height > MAX_MEGAPIXELS * 1e6) {
    throw new InputError({
      file: path,
      message: 'has too many pixels',
      found: `${width} x ${height} (${Math.round((width * height) / 1e6)} megapixels)`,
      allowed: `up to ${MAX_MEGAPIXELS} megapixels`,
      advice: 'Shrink it or cut the part that you want out of it.',
    });
  }
  refuseOnePixel(width, height, path);
  const bitDepth = BIT_DEPTHS[metadata.depth];
  const model = MODELS[metadata.space];
  if (model === undefined || channels > COLOURS[model] + 1) {
    throw new InputError({
      file: path,
      message: 'has channels that cannot be told apart',
      found: `${channels} (${metadata.space})`,
      allowed: 'grey, RGB or CMYK, each with or without alpha',
      advice: 'Save it as grey or RGB.',
    });
  }
  if (bitDepth === undefined) {
    throw new InputError({
      file: path,
      message: 'has samples of a kind that is not read',
      found: `${metadata.bitsPerSample ?? '?'} bits (${metadata.depth})`,
      allowed: 'whole numbers of 8 or 16 bits',
      advice: 'Save it with 16 bits.',
    });
  }
  return { metadata, bitDepth, model };
}
