/** A small PNG writer and reader, independent of the picture library: no interlacing, samples of whole bytes.
 *
 * Source: Portable Network Graphics (PNG) Specification, W3C (from memory). */
import { deflateSync, inflateSync } from 'node:zlib';

const SIGNATURE = Buffer.from('89504e470d0a1a0a', 'hex');
const CHANNELS: Readonly<Record<number, number>> = { 0: 1, 2: 3, 3: 1, 4: 2, 6: 4 };

/** Grey 0, RGB 2, palette 3, grey and alpha 4, RGB and alpha 6. */
export type ColourType = 0 | 2 | 3 | 4 | 6;

export interface PngFile {
  width: number;
  height: number;
  bitDepth: 8 | 16;
  colourType: ColourType;
  samples: Uint8Array | Uint16Array;
  /** Chunks between head and data: type and contents. */
  chunks?: [type: string, data: Uint8Array][];
}

export function writePng({ width, height, bitDepth, colourType, samples, chunks = [] }: PngFile): Buffer {
  const head = Buffer.alloc(13);
  head.writeUInt32BE(width, 0);
  head.writeUInt32BE(height, 4);
  head[8] = bitDepth;
  head[9] = colourType;
  const rowSamples = width * CHANNELS[colourType];
  const rowBytes = (rowSamples * bitDepth) / 8;
  const raw = Buffer.alloc(height * (1 + rowBytes)); // filter type 0 before each row
  for (let row = 0; row < height; row++) {
    for (let i = 0; i < rowSamples; i++) {
      const value = samples[row * rowSamples + i];
      const at = row * (1 + rowBytes) + 1 + (i * bitDepth) / 8;
      if (bitDepth === 16) raw.writeUInt16BE(value, at);
      else raw[at] = value;
    }
  }
  return Buffer.concat([
    SIGNATURE,
    chunk('IHDR', head),
    ...chunks.map(([type, data]) => chunk(type, data)),
    chunk('IDAT', deflateSync(raw)),
    chunk('IEND', Buffer.alloc(0)),
  ]);
}

/** A file that declares a size and holds next to nothing. */
export function emptyPng(width: number, height: number): Buffer {
  const head = Buffer.alloc(13);
  head.writeUInt32BE(width, 0);
  head.writeUInt32BE(height, 4);
  head[8] = 8;
  return Buffer.concat([
    SIGNATURE,
    chunk('IHDR', head),
    chunk('IDAT', deflateSync(Buffer.alloc(64))),
    chunk('IEND', Buffer.alloc(0)),
  ]);
}

/** The contents of an iCCP chunk. */
export function profileChunk(profile: Uint8Array): [string, Uint8Array] {
  return ['iCCP', Buffer.concat([Buffer.from('p\0\0', 'latin1'), deflateSync(profile)])];
}

export function readPng(bytes: Buffer): Required<PngFile> {
  if (!bytes.subarray(0, 8).equals(SIGNATURE)) throw new Error('no PNG signature');
  const chunks: [string, Buffer][] = [];
  for (let at = 8; at < bytes.length; ) {
    const length = bytes.readUInt32BE(at);
    const type = bytes.toString('latin1', at + 4, at + 8);
    if (bytes.readUInt32BE(at + 8 + length) !== crc32(bytes.subarray(at + 4, at + 8 + length))) {
      throw new Error(`CRC of ${type}`);
    }
    chunks.push([type, bytes.subarray(at + 8, at + 8 + length)]);
    at += 12 + length;
  }
  const head = chunks[0][1];
  const width = head.readUInt32BE(0);
  const height = head.readUInt32BE(4);
  const bitDepth = head[8] as 8 | 16;
  const colourType = head[9] as ColourType;
  const data = inflateSync(Buffer.concat(chunks.filter(([type]) => type === 'IDAT').map(([, d]) => d)));
  const pixelBytes = (CHANNELS[colourType] * bitDepth) / 8;
  const unfiltered = unfilter(data, height, width * pixelBytes, pixelBytes);
  const count = width * height * CHANNELS[colourType];
  const samples =
    bitDepth === 16
      ? Uint16Array.from({ length: count }, (_, i) => unfiltered.readUInt16BE(2 * i))
      : Uint8Array.from(unfiltered);
  return { width, height, bitDepth, colourType, samples, chunks };
}

function unfilter(data: Buffer, height: number, rowBytes: number, pixelBytes: number): Buffer {
  const out = Buffer.alloc(height * rowBytes);
  for (let row = 0; row < height; row++) {
    const filter = data[row * (rowBytes + 1)];
    for (let i = 0; i < rowBytes; i++) {
      const left = i >= pixelBytes ? out[row * rowBytes + i - pixelBytes] : 0;
      const up = row > 0 ? out[(row - 1) * rowBytes + i] : 0;
      const corner = row > 0 && i >= pixelBytes ? out[(row - 1) * rowBytes + i - pixelBytes] : 0;
      const predicted = [0, left, up, (left + up) >> 1, paeth(left, up, corner)][filter];
      out[row * rowBytes + i] = data[row * (rowBytes + 1) + 1 + i] + predicted;
    }
  }
  return out;
}

function paeth(left: number, up: number, corner: number): number {
  const estimate = left + up - corner;
  const [a, b, c] = [left, up, corner].map((value) => Math.abs(estimate - value));
  return a <= b && a <= c ? left : b <= c ? up : corner;
}

function chunk(type: string, data: Uint8Array): Buffer {
  const out = Buffer.alloc(12 + data.length);
  out.writeUInt32BE(data.length, 0);
  out.write(type, 4, 'latin1');
  out.set(data, 8);
  out.writeUInt32BE(crc32(out.subarray(4, 8 + data.length)), 8 + data.length);
  return out;
}

/** Bit by bit, polynomial 0xedb88320. */
function crc32(bytes: Uint8Array): number {
  let crc = 0xffffffff;
  for (const byte of bytes) {
    crc ^= byte;
    for (let bit = 0; bit < 8; bit++) crc = crc & 1 ? (crc >>> 1) ^ 0xedb88320 : crc >>> 1;
  }
  return (crc ^ 0xffffffff) >>> 0;
}
