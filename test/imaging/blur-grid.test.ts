import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  blendWeights,
  kernelReach,
  lagrange,
  makeBlurGrid,
  nodeCount,
  nodePosition,
  tileEdge,
} from '../../src/imaging/blur-grid.js';

const anyGrid = fc
  .record({
    width: fc.integer({ min: 1, max: 150 }),
    height: fc.integer({ min: 1, max: 150 }),
    kernelPx: fc.integer({ min: 1, max: 60 }),
    tilePx: fc.double({ min: 0.2, max: 400, noNaN: true }),
    order: fc.integer({ min: 1, max: 3 }),
  })
  .map(({ width, height, kernelPx, tilePx, order }) => makeBlurGrid(width, height, kernelPx, tilePx, order));

const runs = { numRuns: 100, seed: 1 };

describe('makeBlurGrid', () => {
  it('covers the picture and the reach of a kernel around it, with as few tiles as parity allows', () => {
    fc.assert(
      fc.property(anyGrid, (grid) => {
        const reach = kernelReach(grid.kernelPx);
        const axes = [
          [grid.originX, grid.tilesX, grid.width],
          [grid.originY, grid.tilesY, grid.height],
        ];
        for (const [origin, tiles, size] of axes) {
          expect(Number.isInteger(origin)).toBe(true);
          expect(origin).toBeLessThanOrEqual(-reach);
          expect(origin + tiles * grid.tilePx).toBeGreaterThanOrEqual(size + reach);
          expect((tiles - 2) * grid.tilePx).toBeLessThan(size + 2 * reach);
        }
      }),
      runs,
    );
  });

  it('is symmetric about the middle of the picture', () => {
    fc.assert(
      fc.property(anyGrid, ({ originX, tilesX, originY, tilesY, width, height, tilePx }) => {
        expect(2 * originX + tilesX * tilePx).toBe(width);
        expect(2 * originY + tilesY * tilePx).toBe(height);
      }),
      runs,
    );
  });

  it('never makes tiles larger than asked for, nor smaller than a sample', () => {
    for (const tilePx of [0.2, 1, 7.9, 64, 1000]) {
      const grid = makeBlurGrid(100, 77, 15, tilePx, 1);
      expect(grid.tilePx).toBeLessThanOrEqual(Math.max(1, tilePx));
      expect(grid.tilePx).toBeGreaterThanOrEqual(1);
    }
  });

  it('shrinks tiles to leave little overhang', () => {
    // 100 + 2 * 7 samples make two tiles of 57, not of 64
    expect(makeBlurGrid(100, 100, 15, 64, 1)).toMatchObject({ tilePx: 57, tilesX: 2, tilesY: 2 });
  });
});

describe('nodes', () => {
  it('are shared by neighbouring tiles, rise, never leave the frame, and mirror each other', () => {
    fc.assert(
      fc.property(anyGrid, ({ originX, tilesX, width, tilePx, order }) => {
        const count = nodeCount(tilesX, order);
        expect(count).toBe(tilesX * order + 1);
        const places = Array.from({ length: count }, (_, i) =>
          nodePosition(i, originX, tilePx, order, width),
        );
        expect(places[0]).toBe(-0.5);
        expect(places[count - 1]).toBe(width - 0.5);
        for (let i = 0; i < count; i++) {
          if (i > 0) expect(places[i]).toBeGreaterThanOrEqual(places[i - 1]);
          expect(places[i] + places[count - 1 - i]).toBeCloseTo(width - 1, 9);
        }
        for (let tile = 0; tile <= tilesX; tile++) {
          expect(places[tile * order]).toBe(tileEdge(tile, originX, tilePx, width));
        }
      }),
      runs,
    );
  });
});

describe('blendWeights', () => {
  it('sum to 1 at every sample and interpolate places between the nodes', () => {
    fc.assert(
      fc.property(anyGrid, ({ originX, tilesX, width, tilePx, order }) => {
        const weights = new Float64Array((order + 1) * tilePx);
        for (let tile = 0; tile < tilesX; tile++) {
          blendWeights(tile, originX, tilePx, order, width, weights);
          for (let i = 0; i < tilePx; i++) {
            let sum = 0;
            let place = 0;
            for (let node = 0; node <= order; node++) {
              const weight = weights[node * tilePx + i];
              sum += weight;
              place += weight * nodePosition(tile * order + node, originX, tilePx, order, width);
            }
            expect(sum).toBeCloseTo(1, 12);
            // a sample past the frame takes the PSF of the nearest point of the frame
            const sample = Math.min(width - 0.5, Math.max(-0.5, originX + tile * tilePx + i));
            expect(place).toBeCloseTo(sample, 9);
          }
        }
      }),
      { numRuns: 50, seed: 1 },
    );
  });
});

describe('lagrange', () => {
  it.each([1, 2, 3])(
    'of order %i is 1 at its node, 0 at the others, and repeats polynomials of its order',
    (order) => {
      for (let node = 0; node <= order; node++) {
        for (let other = 0; other <= order; other++) {
          expect(lagrange(node, order, other / order)).toBeCloseTo(node === other ? 1 : 0, 14);
        }
      }
      for (const u of [0.1, 0.45, 0.9]) {
        for (let power = 0; power <= order; power++) {
          let value = 0;
          for (let node = 0; node <= order; node++)
            value += (node / order) ** power * lagrange(node, order, u);
          expect(value).toBeCloseTo(u ** power, 13);
        }
      }
    },
  );
});
