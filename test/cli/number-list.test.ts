import { describe, expect, it } from 'vitest';
import { numberList, variedKey } from '../../src/cli/number-list.js';
import { OptionValues } from '../../src/cli/option-values.js';

/** The values, or the words of the refusal. */
function read<T>(reader: (values: OptionValues) => T): T | string {
  const values = new OptionValues();
  const result = reader(values);
  try {
    values.check();
    return result;
  } catch (error) {
    return (error as Error).message;
  }
}
const list = (text: string | undefined, isGeometric = false) =>
  read((values) => numberList(values, '--x', text, { min: -100 }, isGeometric));

describe('lists of numbers', () => {
  it('are written out, or a range with a count', () => {
    expect(list('2.8,4,5.6')).toEqual([2.8, 4, 5.6]);
    expect(list('-60..60/5')).toEqual([-60, -30, 0, 30, 60]);
    expect(list('2..8/3', true)).toEqual([2, 4, 8]); // in equal stops
    expect(list('0.1..0.3/3')).toEqual([0.1, 0.2, 0.3]); // and not 0.20000000000000001
    expect(list(undefined)).toBeUndefined();
  });

  it.each([
    ['4,,5', /--x: the list has an empty place/],
    ['4,4', /names an entry twice/],
    ['4 mm', /--x: not a number, found '4 mm'/],
    ['-200', /out of range/],
    ['5..4/3', /--x: the range does not rise, found '5\.\.4\/3'/],
    ['1..2/1', /--x: out of range, found '1'/],
    ['1..x/3', /not a number, found 'x'/],
    ['1..2/1001', /out of range, found '1001'/],
  ])('refuse %s', (text, words) => {
    expect(list(text)).toMatch(words);
  });
});

describe('PATH=LIST', () => {
  const varied = (text: string) => read((values) => variedKey(values, '--vary', text));

  it('is a key with its values', () => {
    expect(varied('lens.waves.W131=0,1')).toEqual({ key: 'lens.waves.W131', values: [0, 1] });
    expect(varied('mount.sensor_tilt_deg[0] = -1..1/3')).toEqual({
      key: 'mount.sensor_tilt_deg[0]',
      values: [-1, 0, 1],
    });
  });

  it.each(['W131', '=1,2'])('is refused without a key or without values: %s', (text) => {
    expect(varied(text)).toMatch(/--vary: no key with values.*PATH=LIST/);
  });
});
