/** Lists of numbers on the command line: written out, or as a range. */
import type { NumberLimits, OptionValues } from './option-values.js';

const MOST_VALUES = 1000;

/** Numbers with commas between them, or `FROM..TO/COUNT`: that many from the one to the other.
 * @param isGeometric the numbers of a range stand in equal ratios, as f-numbers do in equal stops
 * @returns undefined where the option was not given or is refused */
export function numberList(
  values: OptionValues,
  name: string,
  text: string | undefined,
  limits: NumberLimits = {},
  isGeometric = false,
): number[] | undefined {
  const range = text === undefined ? null : /^(.+)\.\.(.+)\/(\d+)$/.exec(text.trim());
  if (range === null) return values.numbers(name, text, limits);
  const [from, to] = [1, 2].map((at) => values.number(name, range[at], limits));
  const count = values.number(name, range[3], { min: 2, max: MOST_VALUES, integer: true });
  if (from === undefined || to === undefined || count === undefined) return undefined;
  if (from >= to) {
    values.add({
      key: name,
      message: 'the range does not rise',
      found: `'${text}'`,
      allowed: 'FROM..TO/COUNT with FROM below TO',
    });
    return undefined;
  }
  return Array.from({ length: count }, (_, at) => {
    const share = at / (count - 1);
    if (at === count - 1) return to;
    return rounded(isGeometric ? from * (to / from) ** share : from + (to - from) * share);
  });
}

/** Without the digits that only rounding has put there. */
function rounded(value: number): number {
  return Number(value.toPrecision(12));
}

/** `PATH=LIST`: the key of a number in the rig file, and its values. */
export function variedKey(
  values: OptionValues,
  name: string,
  text: string,
): { key: string; values: number[] } | undefined {
  const at = text.indexOf('=');
  if (at <= 0) {
    values.add({
      key: name,
      message: 'no key with values',
      found: `'${text}'`,
      allowed: 'PATH=LIST, such as lens.waves.W131=0,1,2',
    });
    return undefined;
  }
  const key = text.slice(0, at).trim();
  const list = numberList(values, `${name} ${key}`, text.slice(at + 1));
  return list === undefined ? undefined : { key, values: list };
}
