/** Checks that look at several keys at once. They run although single keys are wrong, so that all faults come in one go. */
import type { z } from 'zod';

/** What a cross-check has to say about one key; see `Fault` in src/errors.ts. */
export interface CrossFault {
  message: string;
  found?: string;
  allowed?: string;
  advice?: string;
  /** The fault lies in the key being there, not in its value. */
  inKey?: boolean;
  /** The key is not there. */
  missing?: boolean;
  /** The mapping at the path has none of these keys. */
  lacks?: readonly string[];
}

export type Report = (path: readonly PropertyKey[], fault: CrossFault) => void;

/** Data that may be wrong in any way: a cross-check asks before it trusts. */
export type Unchecked = { readonly [key: string]: unknown };

/** A mapping's schema with a check over its keys.
 * @param check  sees the value before anything about it is certain but that it is a mapping
 */
export function crossChecked<Schema extends z.ZodType>(
  schema: Schema,
  check: (value: Unchecked, report: Report) => void,
): Schema {
  return schema.superRefine(
    (value: unknown, context) => {
      if (!isMapping(value)) return;
      check(value, (path, fault) => {
        context.addIssue({ code: 'custom', path: [...path], message: fault.message, params: { ...fault } });
      });
    },
    { when: () => true },
  );
}

export function isMapping(value: unknown): value is Unchecked {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

/** The value where it is a finite number. */
export function numberIn(value: unknown): number | undefined {
  return typeof value === 'number' && Number.isFinite(value) ? value : undefined;
}

/** Reports a choice of keys of which more than one stands there, or none where one is needed. */
export function checkOneOf(
  value: Unchecked,
  keys: readonly string[],
  report: Report,
  options: { needed?: boolean } = {},
): void {
  const there = keys.filter((key) => value[key] !== undefined);
  const allowed = `one of ${keys.join(', ')}`;
  for (const key of there.slice(1)) {
    report([key], { message: `stands beside ${there[0]}, which says the same thing`, allowed, inKey: true });
  }
  if (there.length === 0 && options.needed) {
    const message = `lacks ${keys.length === 2 ? keys.join(' or ') : allowed}`;
    report([], { message, inKey: true, lacks: keys });
  }
}
