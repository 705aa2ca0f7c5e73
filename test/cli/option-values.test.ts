import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { describeLimits, OptionValues, parseNumber } from '../../src/cli/option-values.js';
import type { InputError } from '../../src/errors.js';

/** The faults that a reading leaves behind. */
function faultsOf(read: (values: OptionValues) => unknown): string[] {
  const values = new OptionValues();
  read(values);
  try {
    values.check();
  } catch (error) {
    return (error as InputError).message.split('\n');
  }
  return [];
}

describe('parseNumber', () => {
  it.each([
    ['4', 4],
    ['-25', -25],
    ['+0.5', 0.5],
    ['.5', 0.5],
    ['2.', 2],
    ['1e-3', 0.001],
    [' 2.8 ', 2.8],
  ])('reads %j', (text, value) => {
    expect(parseNumber(text)).toBe(value);
  });

  it.each(['', ' ', 'f/4', '4mm', '0x10', '1e999', 'NaN', 'Infinity', '1,5', '--2', '.', '1_000', '4 5'])(
    'refuses %j',
    (text) => {
      expect(parseNumber(text)).toBeUndefined();
    },
  );

  it('reads every number as JavaScript prints it', () => {
    fc.assert(
      fc.property(fc.double({ noDefaultInfinity: true, noNaN: true }), (value) => {
        expect(parseNumber(String(value))).toBe(value + 0 === 0 ? 0 : value); // String(-0) is '0'
      }),
    );
  });
});

describe('OptionValues', () => {
  it('gives numbers and lists, and nothing for what is left out', () => {
    const values = new OptionValues();
    expect(values.number('--f-number', '4')).toBe(4);
    expect(values.number('--f-number', undefined)).toBeUndefined();
    expect(values.numbers('--lp-per-mm', '20, 40,80')).toEqual([20, 40, 80]);
    expect(values.items('--fields', 'axis, 0.7@90')).toEqual(['axis', '0.7@90']);
    expect(values.path('--out', 'a b.png')).toBe('a b.png');
    expect(() => values.check()).not.toThrow();
  });

  it('tells what was found and what is allowed', () => {
    expect(faultsOf((values) => values.number('--f-number', 'f/4', { min: 0, aboveMin: true }))).toEqual([
      "--f-number: not a number, found 'f/4'. Allowed: numbers above 0.",
    ]);
    expect(
      faultsOf((values) => values.number('--oversample', '1.5', { min: 1, max: 16, integer: true })),
    ).toEqual(["--oversample: out of range, found '1.5'. Allowed: whole numbers from 1 to 16."]);
  });

  it.each([
    ['0', { min: 0 }, true],
    ['0', { min: 0, aboveMin: true }, false],
    ['16', { max: 16 }, true],
    ['16.1', { max: 16 }, false],
    ['-1', { min: 0 }, false],
    ['9007199254740993', { integer: true }, false],
  ])('holds %s against %j: %s', (text, limits, passes) => {
    expect(faultsOf((values) => values.number('--n', text, limits)).length === 0).toBe(passes);
  });

  it('refuses lists with empty places, repeated entries or a wrong number', () => {
    expect(faultsOf((values) => values.items('--fields', 'axis,,top'))).toEqual([
      "--fields: the list has an empty place, found 'axis,,top'. Write the entries with one comma between two, for example 20,40,80.",
    ]);
    expect(faultsOf((values) => values.items('--fields', 'axis,top,axis'))).toEqual([
      "--fields: the list names an entry twice, found 'axis'.",
    ]);
    expect(faultsOf((values) => values.numbers('--lp-per-mm', '20,x,0', { min: 0, aboveMin: true }))).toEqual(
      [
        "--lp-per-mm: not a number, found 'x'. Allowed: numbers above 0.",
        "--lp-per-mm: out of range, found '0'. Allowed: numbers above 0.",
      ],
    );
  });

  it('refuses an empty file name', () => {
    expect(faultsOf((values) => values.path('--out', ' '))).toEqual([
      "--out: the name of the file is empty, found ' '.",
    ]);
  });

  it('gathers the faults of several options', () => {
    const faults = faultsOf((values) => {
      values.number('--seed', 'x');
      values.path('--out', '');
      values.add({ key: '--rig', message: 'odd' });
    });
    expect(faults).toHaveLength(3);
  });
});

describe('describeLimits', () => {
  it.each([
    [{}, 'numbers'],
    [{ min: 1, integer: true }, 'whole numbers from 1 up'],
    [{ max: 5 }, 'numbers up to 5'],
    [{ min: 0, aboveMin: true }, 'numbers above 0'],
    [{ min: 0, aboveMin: true, max: 1 }, 'numbers above 0, up to 1'],
    [{ min: 1, max: 16 }, 'numbers from 1 to 16'],
  ])('puts %j into words', (limits, words) => {
    expect(describeLimits(limits)).toBe(words);
  });
});
