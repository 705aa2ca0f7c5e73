/** Records of rendered pictures, as far as a measurement needs them. */
import { z } from 'zod';
import { InputError } from '../errors.js';
import type { Rig } from '../optics/rig.js';
import { checkSchema } from './check-schema.js';
import { parseRig } from './load-rig.js';
import { isMapping } from './schemas/cross-check.js';
import { choice, number } from './schemas/values.js';
import { readSource } from './yaml-source.js';

export interface PictureRecord {
  rig: Rig;
  bands: string[];
  mosaic: string;
  /** The pictures that were written, without their folders. */
  files: { out?: { name: string; encoding: 'srgb' | 'linear' }; raw?: string };
  /** What the raw numbers mean. */
  levels?: { blackLevel: number; whiteLevel: number; sceneWhite: number };
}

const level = (description: string) => number({ min: 0, max: 65535 }, description);

/** The keys that are looked at; a record has more. */
const recordFile = z.looseObject({
  image: z.looseObject({ bands: z.array(z.string()).min(1).max(3) }),
  files: z
    .looseObject({
      out: z
        .looseObject({ name: z.string(), encoding: choice(['srgb', 'linear'], 'How light became numbers.') })
        .optional(),
      raw: z.looseObject({ name: z.string() }).optional(),
    })
    .default({}),
  raw_levels: z
    .looseObject({
      black_level: level('The number of no light.'),
      white_level: level('The largest number.'),
      scene_white: z.number(),
    })
    .optional(),
});

/** Reads the record that `render` wrote. @throws {InputError} all faults */
export function loadRecord(path: string): PictureRecord {
  const source = readSource(path);
  const { value } = source;
  if (!isMapping(value) || !isMapping(value.rig) || !isMapping(value.image))
    throw new InputError({
      file: path,
      message: 'is not the record of a picture',
      advice: 'foreglass render writes it with --record FILE.',
    });
  const { image, files, raw_levels: levels } = checkSchema(recordFile, source);
  const rig = parseRig(value.rig);
  return {
    rig,
    bands: image.bands,
    mosaic: rig.camera.mosaic,
    files: { out: files.out, raw: files.raw?.name },
    levels: levels && {
      blackLevel: levels.black_level,
      whiteLevel: levels.white_level,
      sceneWhite: levels.scene_white,
    },
  };
}
