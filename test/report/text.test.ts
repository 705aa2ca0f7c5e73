import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { COLOURED, fixed, layOutColumns, significant, wrapText } from '../../src/report/text.js';

describe('fixed', () => {
  it.each([
    [0.12345, 3, '0.123'],
    [-1.25, 1, '-1.3'],
    [-0.0004, 3, '0.000'],
    [null, 3, '-'],
    [undefined, 3, '-'],
    [Number.NaN, 3, '-'],
  ])('%s with %s decimals is %s', (value, decimals, text) => {
    expect(fixed(value, decimals)).toBe(text);
  });
});

describe('significant', () => {
  it.each([
    [18.115942, 4, '18.12'],
    [40, 4, '40'],
    [0.00314159, 2, '0.0031'],
    [2.8, 3, '2.8'],
  ])('%s to %s digits is %s', (value, digits, text) => {
    expect(significant(value, digits)).toBe(text);
  });
});

const LEAD = { title: '', columns: [{ head: 'zone', cells: ['axis', 'top'], align: 'left' as const }] };
const group = (title: string, cells: string[]) => ({ title, columns: [{ head: 'v', cells }] });

describe('layOutColumns', () => {
  it('puts titles over their columns, numbers to the right', () => {
    expect(layOutColumns(LEAD, [group('a', ['1', '10']), group('bbb', ['2', '3'])], 80)).toEqual([
      ['      a   bbb', 'zone   v    v', 'axis   1    2', 'top   10    3'],
    ]);
  });

  it('begins a new table where the width ends, with the lead again', () => {
    expect(layOutColumns(LEAD, [group('aaaa', ['1', '2']), group('bbbb', ['3', '4'])], 12)).toEqual([
      ['      aaaa', 'zone     v', 'axis     1', 'top      2'],
      ['      bbbb', 'zone     v', 'axis     3', 'top      4'],
    ]);
  });

  it('colours whole lines of the head, so that the columns keep their places', () => {
    const [[title, head, row]] = layOutColumns(LEAD, [group('a', ['1', '2'])], 80, COLOURED);
    expect(title).toBe('\x1b[1m      a\x1b[22m');
    expect(head).toBe('\x1b[1mzone  v\x1b[22m');
    expect(row).toBe('axis  1');
  });
});

describe('wrapText', () => {
  it('keeps every word, in lines that fit', () => {
    fc.assert(
      fc.property(
        fc.array(fc.stringMatching(/^[a-z]{1,12}$/), { minLength: 1 }),
        fc.integer({ min: 12, max: 40 }),
        (words, width) => {
          const lines = wrapText(words.join(' '), width);
          expect(lines.join(' ')).toBe(words.join(' '));
          for (const line of lines) expect(line.length).toBeLessThanOrEqual(width);
        },
      ),
    );
  });

  it('leaves a word that is too long in one piece', () => {
    expect(wrapText('a abcdefgh b', 4)).toEqual(['a', 'abcdefgh', 'b']);
  });
});
