import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { demosaicRows } from '../../src/camera/demosaic.js';
import { mosaicSites, sampleMosaicRows } from '../../src/camera/mosaic.js';
import { InputError } from '../../src/errors.js';
import { ORDERS, speckle } from './samples.js';

const RGB = ['red', 'green', 'blue'];

/** Sample a full-colour picture by a mosaic and fill the colours in again. */
function throughMosaic(
  planes: Float32Array[],
  width: number,
  height: number,
  order: (typeof ORDERS)[number],
) {
  const sites = mosaicSites(order, RGB)!;
  const mosaic = new Float32Array(width * height);
  sampleMosaicRows(planes, width, sites, 0, height, mosaic);
  const out = planes.map(() => new Float32Array(width * height));
  demosaicRows(mosaic, width, height, sites, 0, 1, 0, height, out);
  return out;
}

const plane = (width: number, height: number, value: (x: number, y: number) => number) =>
  Float32Array.from({ length: width * height }, (_, i) => value(i % width, Math.floor(i / width)));

describe('demosaicRows', () => {
  // Source: Malvar, He and Cutler, ICASSP 2004, figure 2: the filters in eighths (from memory)
  const FILTERS = {
    greenAtRedOrBlue: [0, 0, -1, 0, 0, 0, 0, 2, 0, 0, -1, 2, 4, 2, -1, 0, 0, 2, 0, 0, 0, 0, -1, 0, 0],
    alongTheRow: [0, 0, 0.5, 0, 0, 0, -1, 0, -1, 0, -1, 4, 5, 4, -1, 0, -1, 0, -1, 0, 0, 0, 0.5, 0, 0],
    alongTheColumn: [0, 0, -1, 0, 0, 0, -1, 4, -1, 0, 0.5, 0, 5, 0, 0.5, 0, -1, 4, -1, 0, 0, 0, -1, 0, 0],
    redAtBlue: [0, 0, -1.5, 0, 0, 0, 2, 0, 2, 0, -1.5, 0, 6, 0, -1.5, 0, 2, 0, 2, 0, 0, 0, -1.5, 0, 0],
  };

  /** The filter of a colour at a pixel, found by lighting one pixel of the mosaic after the other. */
  function filterAt(order: (typeof ORDERS)[number], x: number, y: number, band: number): number[] {
    const size = 12;
    const sites = mosaicSites(order, RGB)!;
    const out = RGB.map(() => new Float32Array(size * size));
    return Array.from({ length: 25 }, (_, i) => {
      const mosaic = new Float32Array(size * size);
      mosaic[(y - 2 + Math.floor(i / 5)) * size + x - 2 + (i % 5)] = 8;
      demosaicRows(mosaic, size, size, sites, 0, 1, 0, size, out);
      return out[band][y * size + x] + 0; // no negative zeros
    });
  }

  it.each(ORDERS)('applies the published filters to %s', (order) => {
    for (let y = 4; y < 6; y++)
      for (let x = 5; x < 7; x++) {
        const colour = (px: number, py: number) => order[2 * (py % 2) + (px % 2)];
        const own = colour(x, y);
        for (const [band, letter] of ['r', 'g', 'b'].entries()) {
          const filter = filterAt(order, x, y, band);
          if (letter === own)
            expect(filter).toEqual(Array.from({ length: 25 }, (_, i) => (i === 12 ? 8 : 0)));
          else if (letter === 'g') expect(filter).toEqual(FILTERS.greenAtRedOrBlue);
          else if (own !== 'g') expect(filter).toEqual(FILTERS.redAtBlue);
          else if (letter === colour(x + 1, y)) expect(filter).toEqual(FILTERS.alongTheRow);
          else expect(filter).toEqual(FILTERS.alongTheColumn);
        }
      }
  });

  it('leaves a grey scene exactly grey, up to the border and at any size', () => {
    const size = fc.integer({ min: 2, max: 9 });
    fc.assert(
      fc.property(
        size,
        size,
        fc.constantFrom(...ORDERS),
        fc.float({ min: 0, max: 1, noNaN: true }),
        (w, h, order, v) => {
          const grey = RGB.map(() => plane(w, h, () => v));
          expect(throughMosaic(grey, w, h, order)).toEqual(grey);
        },
      ),
    );
  });

  it('leaves an even colour as it is, up to the border', () => {
    const colour = [0.75, 0.25, 0.5].map((v) => plane(7, 6, () => v));
    for (const order of ORDERS) expect(throughMosaic(colour, 7, 6, order)).toEqual(colour);
  });

  it('keeps grey ramps in any direction away from the border', () => {
    for (const order of ORDERS)
      for (const [a, b] of [
        [1, 0],
        [0, 1],
        [0.5, -0.25],
      ]) {
        const ramp = plane(12, 10, (x, y) => (8 + a * x + b * y) / 32);
        const out = throughMosaic([ramp, ramp, ramp], 12, 10, order);
        for (let y = 2; y < 8; y++)
          for (let x = 2; x < 10; x++)
            for (const band of out) expect(band[y * 12 + x]).toBe(ramp[y * 12 + x]);
      }
  });

  it('keeps what each pixel saw', () => {
    const size = [8, 7] as const;
    const planes = [1, 2, 3].map((seed) => speckle(size, seed));
    for (const order of ORDERS) {
      const out = throughMosaic(planes, 8, 7, order);
      for (let i = 0; i < 56; i++) {
        const band = 'rgb'.indexOf(order[2 * (Math.floor(i / 8) % 2) + ((i % 8) % 2)]);
        expect(out[band][i]).toBe(planes[band][i]);
      }
    }
  });

  it('mirrors the border without shifting the colours', () => {
    // A picture that is mirrored already goes on past its border just as the rule says: its inner part must
    // come out the same.
    const [w, h] = [6, 4];
    const small = [1, 2, 3].map((seed) => speckle([w, h], seed));
    const fold = (i: number, n: number) => (i < 0 ? -i : i >= n ? 2 * (n - 1) - i : i);
    const large = small.map((p) => plane(w + 4, h + 4, (x, y) => p[fold(y - 2, h) * w + fold(x - 2, w)]));
    for (const order of ORDERS) {
      const inside = throughMosaic(large, w + 4, h + 4, order);
      const out = throughMosaic(small, w, h, order);
      out.forEach((band, k) => {
        for (let y = 0; y < h; y++)
          for (let x = 0; x < w; x++) expect(band[y * w + x]).toBe(inside[k][(y + 2) * (w + 4) + x + 2]);
      });
    }
  });

  it('beats the plain mean of the neighbours on a scene whose colours share their detail', () => {
    // The paper's reason to exist, on a scene of our own: grey stripes and rings under coloured light.
    const [w, h] = [64, 64];
    const detail = (x: number, y: number) =>
      0.5 + 0.2 * Math.sin(0.9 * x) + 0.2 * Math.cos(0.02 * (x * x + y * y));
    const scene = [0.9, 0.7, 0.5].map((tint) => plane(w, h, (x, y) => tint * detail(x, y)));
    const green = throughMosaic(scene, w, h, 'rggb')[1];
    let filtered = 0;
    let averaged = 0;
    for (let y = 2; y < h - 2; y++)
      for (let x = 2 + (y % 2); x < w - 2; x += 2) {
        const i = y * w + x;
        const g = scene[1];
        filtered += (green[i] - g[i]) ** 2;
        averaged += ((g[i - 1] + g[i + 1] + g[i - w] + g[i + w]) / 4 - g[i]) ** 2;
      }
    expect(filtered).toBeLessThan(0.5 * averaged);
  });

  it('subtracts the black level and scales', () => {
    const raw = Uint16Array.from({ length: 16 }, () => 300);
    const out = RGB.map(() => new Float32Array(16));
    demosaicRows(raw, 4, 4, [0, 1, 1, 2], 100, 1 / 400, 0, 4, out);
    for (const band of out) expect([...band]).toEqual(Array.from({ length: 16 }, () => 0.5));
  });

  it.each([
    [1, 5],
    [5, 1],
  ])('refuses %i x %i pixels', (w, h) => {
    const planes = RGB.map(() => new Float32Array(w * h));
    expect(() => throughMosaic(planes, w, h, 'rggb')).toThrow(InputError);
    expect(() => throughMosaic(planes, w, h, 'rggb')).toThrow(`found ${w} x ${h}. Allowed: 2 x 2 and more`);
  });
});
