/** The keys of a schema by path: for advice on misplaced keys, and for those who vary or scan numbers. */
import { z } from 'zod';

/** Paths of all keys with a fixed name, outer before inner, in the order of the file: `lens`, `lens.waves`, `lens.waves.W040`,
 * `mount.sensor_tilt_deg[0]`. Names that the user chooses stand as `*`: `lens.colour.axial_um.*`. Lists of any length and values of
 * several forms are not entered.
 */
export function* keysOf(schema: z.ZodType, path = ''): Generator<[path: string, schema: z.ZodType]> {
  const inner = withoutDefault(schema);
  if (path !== '') yield [path, inner];
  if (inner instanceof z.ZodObject) {
    for (const [key, value] of Object.entries(inner.shape)) {
      yield* keysOf(value as z.ZodType, path === '' ? key : `${path}.${key}`);
    }
  }
  if (inner instanceof z.ZodRecord) yield* keysOf(inner.valueType as z.ZodType, `${path}.*`);
  if (inner instanceof z.ZodTuple) {
    for (const [index, item] of inner.def.items.entries())
      yield* keysOf(item as z.ZodType, `${path}[${index}]`);
  }
}

/** Paths of the keys that are numbers: those that a recipe may vary and a sweep may scan. */
export function numberKeys(schema: z.ZodType): string[] {
  return [...keysOf(schema)].filter(([, inner]) => inner instanceof z.ZodNumber).map(([path]) => path);
}

function withoutDefault(schema: z.ZodType): z.ZodType {
  const isWrapped =
    schema instanceof z.ZodOptional || schema instanceof z.ZodDefault || schema instanceof z.ZodPrefault;
  return isWrapped ? withoutDefault(schema.unwrap() as z.ZodType) : schema;
}
