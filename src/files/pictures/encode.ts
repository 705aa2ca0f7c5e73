/** Picture files from pictures in memory. */
import type { Sharp } from 'sharp';
import { InputError } from '../../errors.js';
import { encodeSrgb8 } from '../../numeric/srgb.js';
import type { PictureFormat } from './formats.js';
import { sharp } from './library.js';
import type { Picture } from './picture.js';
import { LINEAR_PNG_CHUNK, SRGB_PNG_CHUNK, withPngChunk } from './png-chunks.js';

export interface EncodeOptions {
  /** 16-bit linear light instead of 8-bit sRGB. PNG and TIFF only. Default: false. */
  linear?: boolean;
  /** 1..100, for JPEG and WebP. Default: 95. */
  quality?: number;
}

/** Largest side of a picture in each format, in pixels. PNG and TIFF: larger than any that is made here. */
const LARGEST_SIDE: Readonly<Partial<Record<PictureFormat, number>>> = { jpeg: 65535, webp: 16383 };

/** A picture file as 8-bit sRGB, or as 16-bit linear light.
 *
 * One plane gives a grey file with one channel (WebP has no grey: three equal ones), three planes an RGB
 * file. Values are rounded to the nearest code and clipped to 0..1. sRGB PNG files say so in an sRGB chunk,
 * linear ones in a gAMA chunk; the other formats carry no profile, which by convention means sRGB for 8 bits.
 * The same picture gives the same bytes.
 *
 * @returns the bytes of the file
 * @throws {InputError} linear light as JPEG or WebP; more pixels a side than the format can hold
 */
export async function encodePicture(
  picture: Picture,
  format: PictureFormat,
  options: EncodeOptions = {},
): Promise<Buffer> {
  const { width, height, planes } = picture;
  const linear = options.linear ?? false;
  if (linear) refuseLinearFormat(format);
  refuseLargeSide(format, width, height);
  const samples = linear ? linearSamples(planes) : srgbSamples(planes);
  const encoded = await encodeSamples(samples, width, height, format, options.quality ?? DEFAULT_QUALITY);
  return format === 'png' ? withPngChunk(encoded, linear ? LINEAR_PNG_CHUNK : SRGB_PNG_CHUNK) : encoded;
}

/** A sensor's own numbers as a 16-bit grey PNG or TIFF file, exactly.
 * @param numbers width x height numbers, row-major
 * @throws {InputError} another format */
export async function encodeRaw(
  numbers: Uint16Array,
  width: number,
  height: number,
  format: PictureFormat,
): Promise<Buffer> {
  refuseLinearFormat(format);
  return encodeSamples(numbers, width, height, format, DEFAULT_QUALITY);
}

const DEFAULT_QUALITY = 95;

/** Refuse a format that holds 8 bits only for 16-bit numbers.
 * @param key the option that names the file, for the message
 * @throws {InputError} */
export function refuseLinearFormat(format: PictureFormat, key?: string): void {
  if (format === 'png' || format === 'tiff') return;
  throw new InputError({
    key,
    message: 'this format holds 8 bits a sample only',
    found: `${FORMAT_NAMES[format]} for 16 bits`,
    allowed: 'PNG, TIFF',
    advice: 'Name the file .png or .tif.',
  });
}

/** Refuse a format that cannot hold so many pixels a side.
 * @param key the option that names the file, for the message
 * @throws {InputError} */
export function refuseLargeSide(format: PictureFormat, width: number, height: number, key?: string): void {
  const largest = LARGEST_SIDE[format];
  if (largest === undefined || Math.max(width, height) <= largest) return;
  throw new InputError({
    key,
    message: `the picture is too large for ${FORMAT_NAMES[format]}`,
    found: `${width} x ${height}`,
    allowed: `up to ${largest} pixels a side`,
    advice: 'Write it as PNG or TIFF.',
  });
}

const FORMAT_NAMES: Readonly<Record<PictureFormat, string>> = {
  png: 'PNG',
  jpeg: 'JPEG',
  tiff: 'TIFF',
  webp: 'WebP',
};

function srgbSamples(planes: readonly Float32Array[]): Uint8Array {
  const stride = planes.length;
  const samples = new Uint8Array(stride * planes[0].length);
  for (const [channel, plane] of planes.entries())
    encodeSrgb8(samples, channel, stride, plane, 0, plane.length);
  return samples;
}

function linearSamples(planes: readonly Float32Array[]): Uint16Array {
  const stride = planes.length;
  const samples = new Uint16Array(stride * planes[0].length);
  for (const [channel, plane] of planes.entries()) {
    for (let i = 0, at = channel; i < plane.length; i++, at += stride) {
      const value = plane[i];
      // a value that is no number fails both comparisons and gives 0
      samples[at] = value >= 1 ? 65535 : value > 0 ? value * 65535 + 0.5 : 0;
    }
  }
  return samples;
}

async function encodeSamples(
  samples: Uint8Array | Uint16Array,
  width: number,
  height: number,
  format: PictureFormat,
  quality: number,
): Promise<Buffer> {
  const channels = (samples.length / (width * height)) as 1 | 3;
  const is16Bit = samples instanceof Uint16Array;
  // The space of the samples is also the space of the file: then nothing is converted. Left unnamed, 16 bits
  // would become 8.
  const space = channels === 1 ? (is16Bit ? 'grey16' : 'b-w') : is16Bit ? 'rgb16' : 'srgb';
  const image = sharp(samples, { raw: { width, height, channels } }).toColourspace(space);
  return inFormat(image, format, is16Bit, quality).toBuffer();
}

/** Settings by measurement: 12 megapixels, a colour photograph with sensor noise, two cores,
 * seconds and megabytes.
 *
 *     8-bit PNG    level 1: 0.4, 36    1 with filters: 0.7, 28    2 with: 0.8, 18    6 with: 1.1, 18
 *     16-bit PNG   level 0: 0.1, 72    1: 0.8, 72    2: 1.3, 66    2 with filters: 2.3, 56
 *     8-bit TIFF   plain: 0.04, 36     LZW: 0.5, 21    deflate: 0.6, 19
 *     16-bit TIFF  plain: 0.07, 72     LZW: 1.3, 69    deflate: 1.4, 56
 *     JPEG         plain: 0.07, 3.3    optimised coding: 0.26, 3.2
 *     WebP         lossy: 0.6, 1.8     lossless, least effort: 2.4, 18
 */
function inFormat(image: Sharp, format: PictureFormat, is16Bit: boolean, quality: number): Sharp {
  switch (format) {
    case 'png':
      // 8 bits: row filters halve the file for a third more time; higher levels take longer for nothing. 16
      // bits: the low byte of a picture is noise that no level can shrink, so only the least is tried; a
      // chart still shrinks eightyfold.
      return image.png(
        is16Bit
          ? { compressionLevel: 1, adaptiveFiltering: false }
          : { compressionLevel: 2, adaptiveFiltering: true },
      );
    case 'tiff':
      // stated in full: the library's default would be lossy. 16 bits as they are: the quickest file to write
      // and to read.
      return image.tiff(is16Bit ? { compression: 'none' } : { compression: 'lzw', predictor: 'horizontal' });
    case 'jpeg':
      // whole colour, so that an edge is as sharp in red as in green; optimised coding saves 3 % and takes
      // three times as long
      return image.jpeg({ quality, chromaSubsampling: '4:4:4', optimiseCoding: false });
    case 'webp':
      // lossy: the lossless kind takes 2 to 4 s and gains nothing over PNG
      return image.webp({ quality, effort: 1 });
  }
}
