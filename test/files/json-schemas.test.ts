import { describe, expect, test } from 'vitest';
import { parse } from 'yaml';
import { z } from 'zod';
import { jsonSchemas } from '../../src/files/json-schemas.js';
import { numberKeys } from '../../src/files/schemas/keys.js';
import { wholeRig } from '../../src/files/schemas/rig.js';
import { CAMERA, LENS, PRESCRIPTION, RECIPE, RIG, TASK } from './packhouse.js';

type Json = { [key: string]: Json } & { properties: { [key: string]: Json } };
const schemas = jsonSchemas() as unknown as Record<string, Json>;

const EXAMPLES = {
  rig: RIG,
  lens: LENS,
  camera: CAMERA,
  task: TASK,
  recipe: RECIPE,
  prescription: PRESCRIPTION,
} as const;
const KINDS = Object.keys(EXAMPLES) as (keyof typeof EXAMPLES)[];

test('there is one for each file kind', () => {
  expect(Object.keys(schemas)).toEqual(KINDS);
});

describe.each(KINDS)('%s', (kind) => {
  const schema = schemas[kind];

  test('is draft 7, titled and described, closed to unknown keys', () => {
    expect(schema).toMatchObject({
      $schema: 'http://json-schema.org/draft-07/schema#',
      type: 'object',
      title: expect.any(String),
      description: expect.any(String),
      additionalProperties: false,
    });
  });

  test('describes every key, with the unit where its name has one', () => {
    const UNIT = /_(mm|um|nm|deg|px|e|percent|um2|per_mm)$/;
    const walk = (one: Json, path: string) => {
      for (const [key, inner] of Object.entries(one.properties ?? {})) {
        expect(inner.description ?? '', `${path}.${key}`).toMatch(/\w{3}/);
        if (UNIT.test(key))
          expect(inner.description, `${path}.${key}`).toMatch(/unit|waves of|pixels|in mm/i);
        walk(inner, `${path}.${key}`);
      }
      for (const inner of [one.items, ...((one.anyOf as unknown as Json[]) ?? [])])
        if (inner) walk(inner, path);
    };
    walk(schema, kind);
  });

  test('accepts the example and refuses an unknown key', () => {
    // read back by the library's own reader of JSON Schema, a path apart from the schema that it was written from;
    // the reader knows no conditions between keys
    const reader = z.fromJSONSchema(JSON.parse(JSON.stringify(schema, withoutConditions)));
    const example = JSON.parse(JSON.stringify(parse(EXAMPLES[kind])));
    expect(reader.safeParse(example).error?.issues).toBeUndefined();
    expect(reader.safeParse({ ...example, extra: 1 }).success).toBe(false);
  });
});

function withoutConditions(key: string, value: unknown): unknown {
  return ['if', 'then', 'else', 'not', 'oneOf', 'allOf'].includes(key) ? undefined : value;
}

test('numbers have their ranges', () => {
  const { camera, mount } = schemas.rig.properties;
  const part = (camera.anyOf as unknown as Json[])[1].properties;
  expect(part.fill_factor).toMatchObject({ type: 'number', exclusiveMinimum: 0, maximum: 1, default: 1 });
  expect(part.sensor.properties.bit_depth).toMatchObject({ type: 'integer', minimum: 1, maximum: 16 });
  expect(part.mosaic).toMatchObject({ enum: ['none', 'rggb', 'bggr', 'grbg', 'gbrg'], default: 'none' });
  expect(mount.properties.sensor_tilt_deg.items).toMatchObject([
    { exclusiveMinimum: -45, exclusiveMaximum: 45 },
    { exclusiveMinimum: -45, exclusiveMaximum: 45 },
  ]);
});

test('only keys without a default are required', () => {
  expect(schemas.rig.required).toEqual(['lens', 'camera']);
  expect(schemas.camera.required).toEqual(['pixels', 'pixel_pitch_um', 'bands_nm']);
});

test('the numbers of a rig that may be varied', () => {
  const keys = numberKeys(wholeRig);
  expect(keys).toEqual(
    expect.arrayContaining([
      'lens.f_number',
      'lens.waves.W131',
      'lens.waves.W311',
      'lens.distortion_percent',
      'lens.colour.lateral_um.*',
      'camera.pixels[0]',
      'camera.sensor.white_e',
      'mount.sensor_shift_um',
      'mount.sensor_tilt_deg[1]',
      'mount.axis_px[0]',
    ]),
  );
  expect(keys).not.toContain('lens.name');
  expect(new Set(keys).size).toBe(keys.length);
});
