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

  it('knows the place of each slot and gives each node a number of its own', () => {
    const grid = makeBlurGrid(40, 30, 3, 12, 2);
    const kernels = telling(grid, false);
    const [nodesX, nodesY] = [nodeCount(grid.tilesX, 2), nodeCount(grid.tilesY, 2)];
    const keys = new Set<number>();
    for (let y = 0; y < nodesY; y++) {
      for (let x = 0; x < nodesX; x++) {
        keys.add(kernels.key(x, y));
        expect(kernels.slotPosition(y * nodesX + x)).toEqual([
          nodePosition(x, grid.originX, grid.tilePx, 2, 40),
          nodePosition(y, grid.originY, grid.tilePx, 2, 30),
        ]);
      }
    }
    expect(keys.size).toBe(nodesX * nodesY);
  });
});
