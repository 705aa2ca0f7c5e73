import { describe, expect, it } from 'vitest';
import { makeBlurGrid, nodeCount, nodePosition } from '../../src/imaging/blur-grid.js';
import { NodeKernels, slotCount } from '../../src/imaging/node-kernels.js';

/** Kernels of 3 x 3 samples that tell where they belong: [x, 1, 0, y, 0, 0, 0, 0, 0] with (x, y) the place from the middle of the picture. */
function telling(grid: ReturnType<typeof makeBlurGrid>, isMirrored: boolean): NodeKernels {
  const count = slotCount(grid, isMirrored);
  const kernels = new NodeKernels(grid, isMirrored, new Float32Array(9 * count));
  for (let slot = 0; slot < count; slot++) {
    const [x, y] = kernels.slotPosition(slot);
    // left-to-right and up-down asymmetric about the middle by how far out the node lies, as a PSF would be
    const dx = x - (grid.width - 1) / 2;
    const dy = y - (grid.height - 1) / 2;
    kernels.slot(slot).set([dx + dy, dy, dy - dx, dx, 0, -dx, dx - dy, -dy, -dx - dy]);
  }
  return kernels;
}

describe('NodeKernels', () => {
  it.each([
    [40, 30, 1],
    [41, 30, 2],
    [41, 31, 3],
    [1, 25, 1],
  ])('of a picture of %i x %i, order %i: a quadrant serves all four', (width, height, order) => {
    const grid = makeBlurGrid(width, height, 3, 12, order);
    const whole = telling(grid, false);
    const quarter = telling(grid, true);
    expect(slotCount(grid, true)).toBeLessThan(slotCount(grid, false));
    for (let y = 0; y < nodeCount(grid.tilesY, order); y++) {
      for (let x = 0; x < nodeCount(grid.tilesX, order); x++) {
        const found = quarter.kernel(x, y);
        const expected = whole.kernel(x, y);
        for (let i = 0; i < 9; i++) expect(found[i]).toBeCloseTo(expected[i], 4); // float32 of some 30
      }
    }
  });

  it('knows the place of each slot, and each place has one slot', () => {
    // a reach of 15 samples on tiles of 8: two nodes and more stand on every border
    const grid = makeBlurGrid(40, 30, 31, 8, 2);
    const kernels = new NodeKernels(grid, false, new Float32Array(31 ** 2 * slotCount(grid, false)));
    const slots = new Map<string, number>();
    const keys = new Map<string, number>();
    for (let y = 0; y < nodeCount(grid.tilesY, 2); y++) {
      for (let x = 0; x < nodeCount(grid.tilesX, 2); x++) {
        const place = [
          nodePosition(x, grid.originX, grid.tilePx, 2, 40),
          nodePosition(y, grid.originY, grid.tilePx, 2, 30),
        ];
        const { slot } = kernels.place(x, y);
        expect(kernels.slotPosition(slot)).toEqual(place);
        expect(slots.get(place.join()) ?? slot).toBe(slot);
        expect(keys.get(place.join()) ?? kernels.key(x, y)).toBe(kernels.key(x, y));
        slots.set(place.join(), slot);
        keys.set(place.join(), kernels.key(x, y));
      }
    }
    expect(slots.size).toBe(slotCount(grid, false));
    expect(new Set(keys.values()).size).toBe(slots.size);
  });

  it('keeps no more kernels for a reach that is far larger than the picture', () => {
    expect(slotCount(makeBlurGrid(20, 20, 501, 20, 1), false)).toBeLessThanOrEqual(9);
  });
});
