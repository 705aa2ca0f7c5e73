/** Which keys of a file are numbers: those that a recipe may vary and a sweep may scan. */
import { z } from 'zod';

/** Paths of all numeric keys of a schema, in the order of the file: `lens.waves.W040`, `mount.sensor_tilt_deg[0]`.
 * Keys that the user names freely stand as `*`: `lens.colour.axial_um.*`. Lists of any length are left out.
 */
export function numberKeys(schema: z.ZodType, path = ''): string[] {
  if (schema instanceof z.ZodNumber) return [path];
  if (schema instanceof z.ZodOptional || schema instanceof z.ZodDefault || schema instanceof z.ZodPrefault) {
    return numberKeys(schema.unwrap() as z.ZodType, path);
  }
  if (schema instanceof z.ZodObject) {
    return Object.entries(schema.shape).flatMap(([key, inner]) =>
      numberKeys(inner as z.ZodType, path === '' ? key : `${path}.${key}`),
    );
  }
  if (schema instanceof z.ZodRecord) return numberKeys(schema.valueType as z.ZodType, `${path}.*`);
  if (schema instanceof z.ZodTuple) {
    return schema.def.items.flatMap((item, index) => numberKeys(item as z.ZodType, `${path}[${index}]`));
  }
  return [];
}
