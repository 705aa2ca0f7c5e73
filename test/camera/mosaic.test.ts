import { describe, expect, it } from 'vitest';
import { mosaicSites, sampleMosaicRows } from '../../src/camera/mosaic.js';
import { InputError } from '../../src/errors.js';
import { ORDERS, speckle } from './samples.js';

const RGB = ['red', 'green', 'blue'];

describe('mosaicSites', () => {
  it('reads the four letters row by row', () => {
    expect(ORDERS.map((order) => mosaicSites(order, RGB))).toEqual([
      [0, 1, 1, 2],
      [2, 1, 1, 0],
      [1, 0, 2, 1],
      [1, 2, 0, 1],
    ]);
  });

  it('finds the bands by name, in any order', () => {
    expect(mosaicSites('rggb', ['blue', 'red', 'green'])).toEqual([1, 2, 2, 0]);
  });

  it('is nothing without a mosaic', () => {
    expect(mosaicSites('none', ['mono'])).toBeUndefined();
  });

  it.each([[['mono']], [['red', 'green']], [['red', 'green', 'blue', 'mono']], [['red', 'green', 'green']]])(
    'refuses the bands %o',
    (bands) => {
      expect(() => mosaicSites('grbg', bands)).toThrow(InputError);
      expect(() => mosaicSites('grbg', bands)).toThrow(
        `camera.mosaic: the mosaic grbg needs three bands, found ${bands.join(', ')}. Allowed: red, green and blue.`,
      );
    },
  );
});

describe('sampleMosaicRows', () => {
  it.each(ORDERS)('keeps at each site of %s the colour that it sees, in the rows asked for', (order) => {
    const pixels = [7, 5] as const;
    const planes = RGB.map((_, i) => speckle(pixels, i));
    const sites = mosaicSites(order, RGB)!;
    const out = new Float32Array(35).fill(-1);
    sampleMosaicRows(planes, 7, sites, 1, 4, out);
    for (let row = 0; row < 5; row++)
      for (let column = 0; column < 7; column++) {
        const letter = order[2 * (row % 2) + (column % 2)];
        const plane = planes[{ r: 0, g: 1, b: 2 }[letter]!];
        expect(out[row * 7 + column]).toBe(row < 1 || row > 3 ? -1 : plane[row * 7 + column]);
      }
  });
});
