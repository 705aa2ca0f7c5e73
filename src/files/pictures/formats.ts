/** The kinds of picture file: what is read, what is written, and by which names. */
import { extname } from 'node:path';
import { InputError } from '../../errors.js';

/** Formats that are read and written. */
export type PictureFormat = 'png' | 'jpeg' | 'tiff' | 'webp';

/** Formats as they are spelt in messages. */
export const READABLE_FORMATS = 'PNG, JPEG, TIFF, WebP';

const EXTENSIONS: Readonly<Record<string, PictureFormat>> = {
  '.png': 'png',
  '.jpg': 'jpeg',
  '.jpeg': 'jpeg',
  '.tif': 'tiff',
  '.tiff': 'tiff',
  '.webp': 'webp',
};

/** The extensions that name a picture file. */
export const PICTURE_EXTENSIONS: readonly string[] = Object.keys(EXTENSIONS);

/** The format that a file's name asks for by its extension, in capitals or not.
 * @param path    as the user named it
 * @param option  the option that named it, such as `--out`, for the message
 * @throws {InputError} for no extension or another one */
export function formatOf(path: string, option?: string): PictureFormat {
  const extension = extname(path);
  const format = EXTENSIONS[extension.toLowerCase()];
  if (format !== undefined) return format;
  throw new InputError({
    file: path,
    key: option,
    message: extension === '' ? 'the name says no format' : 'there is no such format for pictures',
    found: extension === '' ? 'no extension' : extension,
    allowed: PICTURE_EXTENSIONS.join(', '),
  });
}

const latin1 = (bytes: Uint8Array, start: number, end: number) =>
  Buffer.from(bytes.subarray(start, end)).toString('latin1');

/** The first bytes that give a format away. Source: the formats' own specifications, from memory. */
const SIGNATURES: readonly [format: string, test: (head: Uint8Array) => boolean][] = [
  ['png', (head) => latin1(head, 0, 8) === '\x89PNG\r\n\x1a\n'],
  ['jpeg', (head) => latin1(head, 0, 3) === '\xff\xd8\xff'],
  ['tiff', (head) => ['II*\0', 'MM\0*', 'II+\0', 'MM\0+'].includes(latin1(head, 0, 4))],
  ['webp', (head) => latin1(head, 0, 4) === 'RIFF' && latin1(head, 8, 12) === 'WEBP'],
  ['GIF', (head) => latin1(head, 0, 4) === 'GIF8'],
  ['PDF', (head) => latin1(head, 0, 5) === '%PDF-'],
  ['BMP', (head) => latin1(head, 0, 2) === 'BM'],
  ['OpenEXR', (head) => latin1(head, 0, 4) === '\x76\x2f\x31\x01'],
  ['HEIF or AVIF', (head) => latin1(head, 4, 8) === 'ftyp'],
  ['JPEG 2000', (head) => latin1(head, 4, 8) === 'jP  '],
  ['JPEG XL', (head) => latin1(head, 0, 2) === '\xff\x0a' || latin1(head, 4, 8) === 'JXL '],
  [
    'SVG',
    (head) =>
      /^\s*(<\?xml[^>]*>|<!--[\s\S]*?-->|<!doctype[^>]*>|\s)*<svg\b/i.test(latin1(head, 0, head.length)),
  ],
];

/** The format of a file from its first bytes (a few hundred): one of `PictureFormat`, another one's name, or
 * undefined where they say nothing. */
export function sniffFormat(head: Uint8Array): string | undefined {
  return SIGNATURES.find(([, test]) => test(head))?.[0];
}

/** Whether a sniffed format is one that is read. */
export function isPictureFormat(format: string | undefined): format is PictureFormat {
  return format === 'png' || format === 'jpeg' || format === 'tiff' || format === 'webp';
}
