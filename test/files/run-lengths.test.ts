import fc from 'fast-check';
import { expect, it } from 'vitest';
import { decodeRunLengths, encodeRunLengths } from '../../src/files/run-lengths.js';

/** Source: written by the mask interface of the COCO format's own library, pycocotools 2.0.11. */
const KNOWN: [counts: number[], text: string][] = [
  [[5, 2, 2, 2, 2, 2, 5], '5220003'], // a rectangle of 3 x 2 in 5 x 4
  [[0, 21], '0e0'], // 3 x 7 full
  [[21], 'e0'], // and empty
];

it.each(KNOWN)('%j is %s', (counts, text) => {
  expect(encodeRunLengths(counts)).toBe(text);
  expect(decodeRunLengths(text)).toEqual(counts);
});

it('an ellipse, as that library writes it', () => {
  const text =
    'je3;Z36K4L4L4M2N2N2N2N2N2N2O1N1O2O0O2O1N100O2O001N10001N1000001N100000000000001O0000000000O1000000000001O0O10001O0O101O0O101N101N101N2O0O2N2N2O0O2N2N2N3M2M4M3L4K7HXf5';
  const counts = decodeRunLengths(text)!;
  // the library's own figures for the mask that it was written from: ((x - 70.3) / 40)^2 + ((y - 55.1) / 30)^2 < 1
  expect(counts).toHaveLength(161);
  expect(counts.reduce((sum, run, index) => sum + (index % 2 === 1 ? run : 0), 0)).toBe(3771);
  expect(counts.reduce((sum, run) => sum + run, 0)).toBe(120 * 160);
  expect(encodeRunLengths(counts)).toBe(text);
});

it('there and back', () => {
  fc.assert(
    fc.property(fc.array(fc.nat({ max: 400_000_000 })), (counts) => {
      expect(decodeRunLengths(encodeRunLengths(counts))).toEqual(counts);
    }),
  );
});

it.each(['P', 'x y', '2é', '0D'])('%j is no such text', (text) => {
  // a number that is not ended, characters outside of the alphabet, a count below 0
  expect(decodeRunLengths(text)).toBeUndefined();
});
