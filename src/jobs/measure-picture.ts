/** The picture that `measure` looks at, in linear light, band by band. */
import { basename, extname } from 'node:path';
import { InputError } from '../errors.js';
import { loadRecord, type PictureRecord } from '../files/load-record.js';
import { checkPicture, type Picture, pngEncoding, readScene } from '../files/pictures/index.js';
import type { Encoding } from '../measure/figures.js';
import type { Rig } from '../optics/rig.js';

export interface MeasuredPicture {
  picture: Picture;
  bandNames: string[];
  encoding: Encoding;
  /** The rig of the record, where one was given. */
  rig?: Rig;
  warnings: string[];
}

/** Read a picture and take it to linear light.
 *
 * `linear` says so; else the record of the rendering does, by the name of the picture; else the tags of a
 * PNG file; else it is sRGB or what its profile says.
 * @throws {InputError} what cannot be read; a picture that does not fit its record
 */
export async function readMeasured(
  image: string | Picture,
  options: { linear?: boolean; recordFile?: string },
): Promise<MeasuredPicture> {
  const record = options.recordFile === undefined ? undefined : loadRecord(options.recordFile);
  if (typeof image !== 'string') {
    const finite = {
      ...image,
      planes: image.planes.map((plane) => plane.map((value) => Math.max(0, value))),
    };
    checkPicture(finite, 'image');
    return { ...named(image, record), encoding: 'linear', rig: record?.rig, warnings: [] };
  }
  const encoding = await encodingOf(image, options, record);
  const { raster, warnings, bitDepth } = await readScene(image, { sceneLinear: encoding !== 'srgb' });
  if (encoding === 'raw') fromRaw(raster, record!, image, options.recordFile!);
  if (encoding === 'srgb' && bitDepth === 16 && options.recordFile === undefined)
    warnings.push(
      `${image}: 16 bits without a word on their encoding, taken as sRGB; say --linear if they are linear in light.`,
    );
  return { ...named(raster, record), encoding, rig: record?.rig, warnings };
}

function named(picture: Picture, record: PictureRecord | undefined) {
  const own = picture.planes.length === 1 ? ['mono'] : ['red', 'green', 'blue'];
  const bandNames = record !== undefined && record.bands.length === own.length ? record.bands : own;
  return { picture, bandNames };
}

async function encodingOf(
  image: string,
  { linear, recordFile }: { linear?: boolean; recordFile?: string },
  record: PictureRecord | undefined,
): Promise<Encoding> {
  if (record !== undefined) {
    const { out, raw } = record.files;
    const name = basename(image);
    if (raw !== undefined && name === raw) return 'raw';
    if (linear) return 'linear';
    if (out !== undefined && name === out.name) return out.encoding;
    const tagged = await pngEncoding(image);
    if (tagged !== undefined) return tagged;
    if (raw === undefined && out !== undefined && extname(name) === extname(out.name)) return out.encoding; // renamed
    const known = [out?.name, raw].filter((file) => file !== undefined);
    throw new InputError({
      key: '--record',
      file: recordFile,
      message: `the record is not that of ${image}`,
      found: known.length === 0 ? 'a record of no picture' : `a record of ${known.join(' and ')}`,
      advice: 'Name the record that was written with the picture, or leave it out and say --linear or not.',
    });
  }
  if (linear) return 'linear';
  return (await pngEncoding(image)) ?? 'srgb';
}

const FULL_SCALE = 65535;

/** Sensor numbers to light: the scene's white is 1. What is at an end of the sensor's scale becomes 0 or 1 to
 * the last bit, to be seen as clipped. */
function fromRaw(
  { planes }: Picture,
  { levels, mosaic }: PictureRecord,
  image: string,
  recordFile: string,
): void {
  if (mosaic !== 'none')
    throw new InputError({
      file: image,
      message: 'holds the raw numbers of a mosaic, in which neighbouring pixels see different colours',
      found: `mosaic: ${mosaic}`,
      allowed: 'raw numbers of a camera without mosaic, or the developed picture',
    });
  if (levels === undefined)
    throw new InputError({
      file: recordFile,
      key: 'raw_levels',
      message: 'says nothing about the raw numbers',
    });
  const { blackLevel, whiteLevel, sceneWhite } = levels;
  for (const plane of planes) {
    for (let i = 0; i < plane.length; i++) {
      const number = Math.round(plane[i] * FULL_SCALE);
      if (number === 0 || number >= whiteLevel) plane[i] = number === 0 ? 0 : 1;
      else plane[i] = (number - blackLevel) / (sceneWhite - blackLevel);
    }
  }
}
