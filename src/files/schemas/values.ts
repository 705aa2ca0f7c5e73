/** The building blocks of all file kinds. `error` of each schema is the text of what it allows. */
import { z } from 'zod';

export interface Range {
  /** Smallest value allowed. */
  min?: number;
  /** Largest value allowed. */
  max?: number;
  /** Values must lie above this one. */
  above?: number;
  /** Values must lie below this one. */
  below?: number;
  unit?: string;
  /** Whole numbers only. */
  whole?: boolean;
}

/** A finite number in a range.
 * @param description  what it is, for people who write the file
 */
export function number(range: Range, description: string) {
  const { min, max, above, below } = range;
  let schema = (
    range.whole ? z.int({ error: rangeWords(range) }) : z.number({ error: rangeWords(range) })
  ) as z.ZodNumber;
  if (min !== undefined) schema = schema.min(min);
  if (max !== undefined) schema = schema.max(max);
  if (above !== undefined) schema = schema.gt(above);
  if (below !== undefined) schema = schema.lt(below);
  return schema.describe(range.unit === undefined ? description : `${description} Unit: ${range.unit}.`);
}

/** A range in words: `a number above 0 and up to 1000 (mm)`. */
function rangeWords({ min, max, above, below, unit, whole }: Range): string {
  const low = above !== undefined ? `above ${above}` : min !== undefined ? `from ${min}` : undefined;
  const high = below !== undefined ? `below ${below}` : max !== undefined ? `up to ${max}` : undefined;
  const fromTo = min !== undefined && max !== undefined ? `from ${min} to ${max}` : undefined;
  const range = fromTo ?? (low !== undefined && high !== undefined ? `${low} and ${high}` : (low ?? high));
  const parts = [whole ? 'a whole number' : 'a number', range === `from ${min}` ? `${range} up` : range];
  return `${parts.filter((part) => part !== undefined).join(' ')}${unit === undefined ? '' : ` (${unit})`}`;
}

/** A mapping with these keys and no others. */
export function mapping<Shape extends z.ZodRawShape>(shape: Shape) {
  const keys = Object.keys(shape).join(', ');
  return z.strictObject(shape, {
    error: (issue) => (issue.code === 'unrecognized_keys' ? keys : `a mapping with the keys ${keys}`),
  });
}

export function list<Item extends z.ZodType>(item: Item, words: string, max = 1000) {
  return z.array(item, { error: words }).min(1).max(max);
}

export function pair<First extends z.ZodType, Second extends z.ZodType>(
  first: First,
  second: Second,
  words: string,
) {
  return z.tuple([first, second], { error: words });
}

export function text(description: string) {
  return z.string({ error: 'a text of 1 to 200 characters' }).min(1).max(200).describe(description);
}

export function fileName(description: string) {
  return z
    .string({ error: 'the name of a file, relative to this file' })
    .min(1)
    .max(4096)
    .describe(description);
}

export function choice<const Words extends readonly [string, ...string[]]>(
  words: Words,
  description: string,
) {
  return z.enum(words, { error: words.join(', ') }).describe(description);
}

/** A yes that is left out for no. */
export function flag(description: string) {
  return z.literal(true, { error: 'true, or leave the key out' }).describe(description);
}

export const wavelengthNm = number({ min: 100, max: 20000, unit: 'nm' }, 'A wavelength.');

export const fNumber = (description: string) => number({ above: 0, max: 10000 }, description);
