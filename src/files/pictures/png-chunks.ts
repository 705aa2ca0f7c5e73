/** Chunks of a PNG file that the picture library does not write: how the samples are to be shown.
 *
 * Each is whole, with length, type, data and CRC of type and data.
 * Source: Portable Network Graphics (PNG) Specification, W3C, chunk layout, gAMA and sRGB (from memory).
 */

/** The samples are sRGB; rendering intent 0, perceptual. */
export const SRGB_PNG_CHUNK = chunk('00000001', 'sRGB', '00', 'aece1ce9');

/** The samples are linear light: gamma 1, written as 100000. */
export const LINEAR_PNG_CHUNK = chunk('00000004', 'gAMA', '000186a0', '31e8965f');

function chunk(length: string, type: string, data: string, crc: string): Buffer {
  return Buffer.concat([
    Buffer.from(length, 'hex'),
    Buffer.from(type, 'latin1'),
    Buffer.from(data + crc, 'hex'),
  ]);
}

/** Length of the signature and the IHDR chunk, which come first. */
const HEAD_BYTES = 8 + 25;

/** The same PNG file with one more chunk, right behind its head. */
export function withPngChunk(png: Buffer, added: Buffer): Buffer {
  return Buffer.concat([png.subarray(0, HEAD_BYTES), added, png.subarray(HEAD_BYTES)]);
}
