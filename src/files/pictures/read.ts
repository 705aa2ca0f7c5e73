/** Scenes from picture files, in linear light. */
import { InputError, RunError } from '../../errors.js';
import { srgbDecodeTable } from '../../numeric/srgb.js';
import { type ColourProfile, parseProfile, type ToneCurve } from './icc.js';
import { sharp } from './library.js';
import { damagedPicture, OPEN_OPTIONS, openPicture, type PictureHead } from './open.js';
import { type AllocatePlanes, type Picture, sharedPlanes } from './picture.js';

export interface ReadOptions {
  /** Take the samples as linear light, value / full scale, as they are: no transfer curve and no colour
   * profile. Default: false. */
  sceneLinear?: boolean;
  /** Where the planes are to lie, asked when the file is decoded; default: shared memory of their own. */
  allocate?: (...size: Parameters<AllocatePlanes>) => Float32Array[] | Promise<Float32Array[]>;
}

export interface Scene {
  raster: Picture;
  /** 1 for a mono picture, 3 for a colour one. */
  channels: 1 | 3;
  /** Bits of a sample in the file. */
  bitDepth: 8 | 16;
  /** What the user should know about the reading of this file, in sentences. */
  warnings: string[];
}

/** Read a PNG, JPEG, TIFF or WebP file as a scene in linear light.
 *
 * 8 or 16 bits, grey or colour, palettes; turned upright by its EXIF orientation. Samples are sRGB, or what
 * the embedded profile says, and are taken to linear sRGB (values outside 0..1, which another profile can
 * give, are clipped). CMYK is converted to 8-bit sRGB by the picture library. Alpha is composited on black in
 * linear light: value times alpha.
 *
 * @param path as the user named it
 * @throws {InputError} as `openPicture` does; a picture that breaks off; CMYK as linear light; a profile that
 *   cannot be applied
 * @throws {RunError}   out of memory
 */
export async function readScene(path: string, options: ReadOptions = {}): Promise<Scene> {
  const head = await openPicture(path);
  const { decoding, warnings } = planDecoding(path, head, options.sceneLinear ?? false);
  const { samples, width, height, stride } = await decode(path, head, decoding);
  const channels = decoding.tables.length as 1 | 3;
  const allocate = options.allocate ?? sharedPlanes;
  const planes = await allocate(width, height, channels);
  for (let channel = 0; channel < channels; channel++) {
    takeChannel(planes[channel], samples, channel, stride, decoding.tables[channel]);
  }
  if (decoding.matrix !== undefined) applyMatrix(planes, decoding.matrix);
  if (stride % 2 === 0) multiplyByAlpha(planes, samples, stride);
  return { raster: { width, height, planes }, channels, bitDepth: head.bitDepth, warnings };
}

/** How the samples of one picture become linear light. */
interface Decoding {
  /** Whether the picture library is to convert the samples to sRGB by the embedded profile. */
  byLibrary: boolean;
  /** Linear light of every sample value: one table for grey, three for colour. */
  tables: Float32Array[];
  /** To linear sRGB, after the tables. */
  matrix?: readonly number[];
}

function planDecoding(
  path: string,
  { metadata, bitDepth, model }: PictureHead,
  sceneLinear: boolean,
): { decoding: Decoding; warnings: string[] } {
  const isGrey = model === 'grey';
  const alike = (table: Float32Array, byLibrary = false): Decoding => ({
    byLibrary,
    tables: isGrey ? [table] : [table, table, table],
  });
  const srgb = srgbDecodeTable(bitDepth);
  if (sceneLinear) {
    if (model === 'cmyk') throw new InputError(cmykAsLinearFault(path));
    return { decoding: alike(curveTable((x) => x, bitDepth)), warnings: [] };
  }
  if (model === 'cmyk') return { decoding: alike(srgbDecodeTable(8), true), warnings: [] };
  const profile: ColourProfile = metadata.icc === undefined ? { kind: 'srgb' } : parseProfile(metadata.icc);
  switch (profile.kind) {
    case 'srgb':
      return { decoding: alike(srgb), warnings: [] };
    case 'grey':
      if (!isGrey) return { decoding: alike(srgb), warnings: [unusedProfileWarning(path)] };
      return { decoding: alike(curveTable(profile.curve, bitDepth)), warnings: [] };
    case 'matrix': {
      // grey under an RGB profile stands for equal parts of the three, which is as bright as their curve says
      if (isGrey) return { decoding: alike(curveTable(profile.curves[1], bitDepth)), warnings: [] };
      const tables = profile.curves.map((curve) => curveTable(curve, bitDepth));
      return { decoding: { byLibrary: false, tables, matrix: profile.toSrgb }, warnings: [] };
    }
    case 'broken':
      return { decoding: alike(srgb), warnings: [unusedProfileWarning(path)] };
    case 'other':
      if (bitDepth === 16 || isGrey) throw new InputError(profileFault(path));
      return { decoding: alike(srgb, true), warnings: [] };
  }
}

function cmykAsLinearFault(path: string) {
  return {
    file: path,
    message: 'is CMYK, which is ink and not light',
    found: 'CMYK as a linear scene',
    allowed: 'grey or RGB',
    advice: 'Leave --scene-linear out, or save it as RGB.',
  };
}

function profileFault(path: string) {
  return {
    file: path,
    message: 'has a colour profile that is more than curves and a matrix',
    allowed: 'sRGB, other matrix profiles, or none',
    advice: 'Convert it to sRGB, or say --scene-linear if its values are linear light.',
  };
}

function unusedProfileWarning(path: string): string {
  return `${path}: the embedded colour profile is damaged or for another kind of picture; taken as sRGB`;
}

function curveTable(curve: ToneCurve, bitDepth: 8 | 16): Float32Array {
  const fullScale = 2 ** bitDepth - 1;
  return Float32Array.from({ length: fullScale + 1 }, (_, code) =>
    Math.min(Math.max(curve(code / fullScale), 0), 1),
  );
}

interface Samples {
  /** Interleaved samples. */
  samples: Uint8Array | Uint16Array;
  width: number;
  height: number;
  /** Samples a pixel: 1 grey, 2 grey and alpha, 3 colour, 4 colour (or grey three times) and alpha. */
  stride: number;
}

async function decode(path: string, head: PictureHead, { byLibrary }: Decoding): Promise<Samples> {
  const { metadata, bitDepth, model } = head;
  const is16Bit = bitDepth === 16 && model !== 'cmyk';
  // Without its colour space named, the library hands 16-bit pictures over with 8. Its 8-bit grey has no
  // alpha, its 8-bit RGB has.
  const space = is16Bit
    ? model === 'grey'
      ? 'grey16'
      : 'rgb16'
    : model === 'grey' && !metadata.hasAlpha
      ? 'b-w'
      : 'srgb';
  try {
    const { data, info } = await sharp(path, { ...OPEN_OPTIONS, ignoreIcc: !byLibrary })
      .autoOrient()
      .toColourspace(space)
      .raw({ depth: is16Bit ? 'ushort' : 'uchar' })
      .toBuffer({ resolveWithObject: true });
    const samples = is16Bit ? new Uint16Array(data.buffer, data.byteOffset, data.byteLength / 2) : data;
    return { samples, width: info.width, height: info.height, stride: info.channels };
  } catch (error) {
    if (/memory/i.test(String(error))) throw new RunError(`out of memory while ${path} was decoded`);
    throw damagedPicture(path, error);
  }
}

function takeChannel(
  plane: Float32Array,
  samples: Uint8Array | Uint16Array,
  channel: number,
  stride: number,
  table: Float32Array,
): void {
  for (let i = 0, at = channel; i < plane.length; i++, at += stride) plane[i] = table[samples[at]];
}

/** planes = matrix * planes, clipped to 0..1. */
function applyMatrix(planes: Float32Array[], matrix: readonly number[]): void {
  const [red, green, blue] = planes;
  const [m00, m01, m02, m10, m11, m12, m20, m21, m22] = matrix;
  for (let i = 0; i < red.length; i++) {
    const r = red[i];
    const g = green[i];
    const b = blue[i];
    red[i] = Math.min(Math.max(m00 * r + m01 * g + m02 * b, 0), 1);
    green[i] = Math.min(Math.max(m10 * r + m11 * g + m12 * b, 0), 1);
    blue[i] = Math.min(Math.max(m20 * r + m21 * g + m22 * b, 0), 1);
  }
}

function multiplyByAlpha(planes: Float32Array[], samples: Uint8Array | Uint16Array, stride: number): void {
  const fullScale = samples instanceof Uint16Array ? 65535 : 255;
  for (const plane of planes) {
    for (let i = 0, at = stride - 1; i < plane.length; i++, at += stride) {
      const alpha = samples[at];
      if (alpha !== fullScale) plane[i] *= alpha / fullScale;
    }
  }
}
