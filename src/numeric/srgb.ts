/** The transfer curve of sRGB, both ways, for single values and by table for whole pictures.
 *
 * Source: IEC 61966-2-1:1999 (constants from memory; they agree with the figures of the published check).
 */

/** Encoded value 0..1 of a linear value 0..1. Values outside 0..1 follow the same branches and are not
 * clipped. */
export function srgbEncode(linear: number): number {
  return linear <= 0.0031308 ? 12.92 * linear : 1.055 * linear ** (1 / 2.4) - 0.055;
}

/** Linear value 0..1 of an encoded value 0..1: the inverse of `srgbEncode` (to 3e-8 where the two branches
 * meet). */
export function srgbDecode(encoded: number): number {
  return encoded <= 0.04045 ? encoded / 12.92 : ((encoded + 0.055) / 1.055) ** 2.4;
}

/** Bits of a sample in a picture file. */
export type BitDepth = 8 | 16;

const decodeTables = new Map<BitDepth, Float32Array>();

/** The linear value of every 8-bit or 16-bit sRGB code: entry k is `srgbDecode(k / (2^bits - 1))`.
 * Made once and shared: not to be written to. */
export function srgbDecodeTable(bitDepth: BitDepth): Float32Array {
  let table = decodeTables.get(bitDepth);
  if (table === undefined) {
    const fullScale = 2 ** bitDepth - 1;
    table = Float32Array.from({ length: fullScale + 1 }, (_, code) => srgbDecode(code / fullScale));
    decodeTables.set(bitDepth, table);
  }
  return table;
}

/** Bins over 0..1 of the encoding table. The curve is steepest at 0, 12.92 * 255 = 3295 codes per unit, so
 * that 4096 bins would be fine enough for at most one change of code within a bin. With more of them few bins
 * hold a change at all, and processors foresee that: measured, twice as fast, and slower again at 65536. */
const ENCODE_BINS = 16384;

interface EncodeTable {
  /** The code at the lower end of each bin. */
  codes: Uint8Array;
  /** Entry k: the smallest linear value that is encoded as k + 1 rather than k; there is none for 255. */
  steps: Float64Array;
}

let encodeTable: EncodeTable | undefined;

function makeEncodeTable(): EncodeTable {
  const steps = Float64Array.from({ length: 256 }, (_, code) =>
    code === 255 ? Number.POSITIVE_INFINITY : srgbDecode((code + 0.5) / 255),
  );
  const codes = new Uint8Array(ENCODE_BINS);
  for (let bin = 0, code = 0; bin < ENCODE_BINS; bin++) {
    while (bin / ENCODE_BINS >= steps[code]) code++;
    codes[bin] = code;
  }
  return { codes, steps };
}

/** Encode linear values as 8-bit sRGB codes, rounded to nearest and clipped to 0..255 (a value that is no
 * number gives 0).
 *
 * The same codes as `Math.round(255 * srgbEncode(value))` without its power: a table gives the code at the
 * lower end of the value's bin, one comparison the rest.
 *
 * @param out    codes, written at `outStart`, `outStart + outStride`, ...
 * @param values linear values, read from `start` on
 * @param count  number of values
 */
export function encodeSrgb8(
  out: Uint8Array,
  outStart: number,
  outStride: number,
  values: Float32Array,
  start: number,
  count: number,
): void {
  encodeTable ??= makeEncodeTable();
  const { codes, steps } = encodeTable;
  for (let i = start, at = outStart; i < start + count; i++, at += outStride) {
    const value = values[i];
    if (value >= 1) {
      out[at] = 255;
    } else if (value > 0) {
      const code = codes[(value * ENCODE_BINS) | 0];
      out[at] = value >= steps[code] ? code + 1 : code;
    } else {
      out[at] = 0;
    }
  }
}
