/** What a PNG file says of its transfer curve. */
import { open } from 'node:fs/promises';

export type PngEncoding = 'linear' | 'srgb';

const SIGNATURE = '\x89PNG\r\n\x1a\n';

/** gAMA of linear light: 1, in units of 1e-5. */
const LINEAR_GAMMA = 100_000;

/** Chunks that say how samples are shown stand before the first of the image; more than this many stand there
 * in no sane file. */
const MOST_CHUNKS = 64;

/** The transfer curve that the tags of a PNG file name: an sRGB chunk or a profile before gAMA, as the
 * standard has it. Undefined for another format, without tags, for a gamma of another kind, or where there
 * is no file to be read: that is told by who reads the picture.
 * Source: Portable Network Graphics (PNG) Specification, W3C, gAMA, sRGB and iCCP (from memory). */
export async function pngEncoding(path: string): Promise<PngEncoding | undefined> {
  const file = await open(path).catch(() => undefined);
  if (file === undefined) return undefined;
  try {
    const read = async (length: number, at: number) => {
      const { buffer, bytesRead } = await file.read(Buffer.alloc(length), 0, length, at);
      return bytesRead === length ? buffer : undefined;
    };
    if ((await read(8, 0))?.toString('latin1') !== SIGNATURE) return undefined;
    let gamma: number | undefined;
    let at = 8;
    for (let chunk = 0; chunk < MOST_CHUNKS; chunk++) {
      const head = await read(8, at);
      if (head === undefined) return undefined;
      const type = head.toString('latin1', 4, 8);
      if (type === 'IDAT' || type === 'IEND') break;
      if (type === 'sRGB') return 'srgb';
      if (type === 'iCCP') return undefined;
      if (type === 'gAMA') gamma = (await read(4, at + 8))?.readUInt32BE(0);
      at += 12 + head.readUInt32BE(0);
    }
    return gamma === LINEAR_GAMMA ? 'linear' : undefined;
  } finally {
    await file.close();
  }
}
