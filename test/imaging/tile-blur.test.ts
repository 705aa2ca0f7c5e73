/** The varying blur in float64 and in the compiled kernels against sums written out. */
import { describe, expect, it } from 'vitest';
import { type BlurGrid, blendWeights, makeBlurGrid, nodeCount } from '../../src/imaging/blur-grid.js';
import { NodeKernels, slotCount } from '../../src/imaging/node-kernels.js';
import { blurFftSize, TileBlur } from '../../src/imaging/tile-blur.js';
import { CounterRandom } from '../../src/numeric/random.js';

function random(seed: number, count: number): Float32Array {
  const draw = new CounterRandom(seed, 0);
  draw.start(0);
  return Float32Array.from({ length: count }, () => draw.uniform());
}

function randomKernels(grid: BlurGrid): NodeKernels {
  const count = slotCount(grid, false);
  return new NodeKernels(grid, false, random(5, count * grid.kernelPx ** 2));
}

function blurred(grid: BlurGrid, kernels: NodeKernels, source: Float32Array | 'ones'): Float32Array {
  const out = new Float32Array(grid.width * grid.height);
  const blur = new TileBlur(grid);
  for (let y = 0; y < grid.tilesY; y++) {
    for (let x = 0; x < grid.tilesX; x++) {
      if (source === 'ones') blur.blurOnes(x, y, out, kernels);
      else blur.blurTile(x, y, source, out, kernels);
    }
  }
  return out;
}

/** Every sample, those past the frame as well, spreads with the blend of the kernels of its tile. */
function writtenOut(grid: BlurGrid, kernels: NodeKernels, source: Float32Array): Float64Array {
  const { width, height, kernelPx, tilePx, order, tilesX, tilesY, originX, originY } = grid;
  const out = new Float64Array(width * height);
  const reach = Math.floor(kernelPx / 2);
  const wx = new Float64Array((order + 1) * tilePx);
  const wy = new Float64Array((order + 1) * tilePx);
  const clamp = (i: number, size: number) => Math.min(size - 1, Math.max(0, i));
  for (let ty = 0; ty < tilesY; ty++) {
    blendWeights(ty, originY, tilePx, order, height, wy);
    for (let tx = 0; tx < tilesX; tx++) {
      blendWeights(tx, originX, tilePx, order, width, wx);
      for (let j = 0; j < tilePx; j++) {
        for (let i = 0; i < tilePx; i++) {
          const x = originX + tx * tilePx + i;
          const y = originY + ty * tilePx + j;
          const value = source[clamp(y, height) * width + clamp(x, width)];
          for (let nj = 0; nj <= order; nj++) {
            for (let ni = 0; ni <= order; ni++) {
              const weight = value * wy[nj * tilePx + j] * wx[ni * tilePx + i];
              const kernel = kernels.kernel(tx * order + ni, ty * order + nj);
              for (let b = 0; b < kernelPx; b++) {
                for (let a = 0; a < kernelPx; a++) {
                  const column = x - reach + a;
                  const row = y - reach + b;
                  if (column < 0 || row < 0 || column >= width || row >= height) continue;
                  out[row * width + column] += weight * kernel[b * kernelPx + a];
                }
              }
            }
          }
        }
      }
    }
  }
  return out;
}

function largestDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let most = 0;
  for (let i = 0; i < a.length; i++) most = Math.max(most, Math.abs(a[i] - b[i]));
  return most;
}

describe('TileBlur', () => {
  it.each([
    [23, 17, 5, 8, 1],
    [24, 16, 6, 8, 2], // an even kernel: its middle lies half a sample further
    [9, 31, 7, 5, 3],
    [1, 20, 5, 8, 1],
    [20, 1, 5, 64, 2],
    [6, 5, 15, 16, 1], // a kernel larger than the picture
  ])(
    'of %i x %i samples, kernel %i, tile %i, order %i, is the sum over all samples',
    (width, height, kernelPx, tilePx, order) => {
      const grid = makeBlurGrid(width, height, kernelPx, tilePx, order);
      const kernels = randomKernels(grid);
      const source = random(7, width * height);
      const expected = writtenOut(grid, kernels, source);
      const scale = Math.max(...expected);
      // float32 sums of a handful of tiles on float64 transforms
      expect(largestDifference(blurred(grid, kernels, source), expected) / scale).toBeLessThan(1e-6);
    },
  );

  it('of ones by products of spectra is the blur of a plane of ones', () => {
    for (const order of [1, 2, 3]) {
      const grid = makeBlurGrid(23, 18, 5, 8, order);
      const kernels = randomKernels(grid);
      const ones = blurred(grid, kernels, new Float32Array(23 * 18).fill(1));
      expect(largestDifference(blurred(grid, kernels, 'ones'), ones) / Math.max(...ones)).toBeLessThan(1e-6);
    }
  });

  it('does not depend on which tiles were blurred before, though spectra are kept', () => {
    const grid = makeBlurGrid(23, 17, 5, 8, 1);
    const kernels = randomKernels(grid);
    const source = random(7, 23 * 17);
    const alone = new Float32Array(23 * 17);
    new TileBlur(grid).blurTile(1, 1, source, alone, kernels);
    const after = new Float32Array(23 * 17);
    const used = new TileBlur(grid);
    used.blurTile(0, 0, source, new Float32Array(23 * 17), kernels);
    used.blurOnes(1, 1, new Float32Array(23 * 17), kernels);
    used.blurTile(1, 1, source, after, kernels);
    expect(after).toEqual(alone);
  });
});

describe('blurFftSize', () => {
  it('holds a tile and the reach of its kernel on both sides', () => {
    expect(blurFftSize(50, 15)).toBe(64);
    expect(blurFftSize(51, 15)).toBe(128);
    expect(blurFftSize(1, 3)).toBeGreaterThanOrEqual(3);
    expect(nodeCount(3, 2)).toBe(7);
  });
});
