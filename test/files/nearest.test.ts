import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { editDistance, nearest, nearestFew } from '../../src/files/nearest.js';

describe('editDistance', () => {
  test.each([
    ['', '', 0],
    ['abc', 'abc', 0],
    ['abc', '', 3],
    ['f_numbr', 'f_number', 1],
    ['kitten', 'sitting', 3], // the usual schoolbook pair, common practice
    ['ab', 'ba', 1], // a swap is one slip
    ['ca', 'abc', 3], // and no part is edited twice: the full distance would be 2
  ])('%s to %s is %d', (a, b, slips) => {
    expect(editDistance(a, b)).toBe(slips);
  });

  test('is the same in both directions, 0 only for equal words, at most the longer word', () => {
    const word = fc.string({ maxLength: 8, unit: fc.constantFrom('a', 'b', 'c') });
    fc.assert(
      fc.property(word, word, (a, b) => {
        const slips = editDistance(a, b);
        expect(slips).toBe(editDistance(b, a));
        expect(slips === 0).toBe(a === b);
        expect(slips).toBeLessThanOrEqual(Math.max(a.length, b.length));
        expect(slips).toBeGreaterThanOrEqual(Math.abs(a.length - b.length));
      }),
    );
  });
});

describe('nearest', () => {
  const keys = ['f_number', 'focal_length_mm', 'pixel_pitch_um', 'W040', 'W131', 'W222', 'W220'];
  test.each([
    ['f_numbr', 'f_number'],
    ['fNumber', 'f_number'],
    ['F-NUMBER', 'f_number'],
    ['focal_length', 'focal_length_mm'],
    ['pitch_um', 'pixel_pitch_um'],
    ['w131', 'W131'],
    ['W113', 'W131'],
  ])('%s is meant to be %s', (word, known) => {
    expect(nearest(word, keys)).toBe(known);
  });

  test.each(['x', 'aperture', 'zoom'])('%s is like none', (word) => {
    expect(nearest(word, keys)).toBeUndefined();
  });

  test('the nearest few come best first', () => {
    expect(nearestFew('W220', ['W040', 'W222', 'W220', 'f_number'], 2)).toEqual(['W220', 'W222']);
    expect(nearestFew('anything', [], 3)).toEqual([]);
  });
});
