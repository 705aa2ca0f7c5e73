import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  BLUR_SHAPE_BYTES,
  BLUR_TILE_BYTES,
  MIRROR_X,
  MIRROR_Y,
  writeBlurShape,
  writeBlurTile,
} from '../../src/numeric/kernels.js';
import { noise, Workbench } from './workbench.js';

interface Shape {
  fftWidth: number;
  fftHeight: number;
  tileWidth: number;
  tileHeight: number;
  kernelSize: number;
  nodesX: number;
  nodesY: number;
}

interface Frame {
  width: number;
  height: number;
  samples: Float64Array;
}

interface Tile {
  frame: Frame;
  left: number;
  top: number;
  mirror: number;
  weightsY: Float64Array;
  /** One kernel a node, row by row; undefined leaves the node out. */
  kernels: (Float64Array | undefined)[];
}

/** By the definition, in float64: every sample of the tile spreads with its own blend of kernels. */
function directBlur(shape: Shape, weightsX: Float64Array, tile: Tile): Float64Array {
  const { tileWidth, tileHeight, kernelSize, nodesX, nodesY } = shape;
  const { frame, left, top, mirror } = tile;
  const out = new Float64Array(frame.width * frame.height);
  const reach = Math.floor(kernelSize / 2);
  const place = (x: number, y: number) => {
    const seenX = mirror & MIRROR_X ? frame.width - 1 - x : x;
    const seenY = mirror & MIRROR_Y ? frame.height - 1 - y : y;
    return seenY * frame.width + seenX;
  };
  const clamp = (i: number, count: number) => Math.min(count - 1, Math.max(0, i));
  for (let y = 0; y < tileHeight; y++) {
    for (let x = 0; x < tileWidth; x++) {
      const sample = frame.samples[place(clamp(left + x, frame.width), clamp(top + y, frame.height))];
      const blend = new Float64Array(kernelSize ** 2);
      for (let node = 0; node < nodesX * nodesY; node++) {
        const weight =
          weightsX[(node % nodesX) * tileWidth + x] *
          tile.weightsY[Math.floor(node / nodesX) * tileHeight + y];
        tile.kernels[node]?.forEach((value, i) => {
          blend[i] += weight * value;
        });
      }
      for (let v = 0; v < kernelSize; v++) {
        for (let u = 0; u < kernelSize; u++) {
          const [outX, outY] = [left + x - reach + u, top + y - reach + v];
          if (outX < 0 || outY < 0 || outX >= frame.width || outY >= frame.height) continue;
          out[place(outX, outY)] += sample * blend[v * kernelSize + u];
        }
      }
    }
  }
  return out;
}

interface Options {
  /** The second tile has the kernels of the first. */
  shared?: boolean;
  /** Both tiles show a scene of ones, whatever their frames hold. */
  ones?: boolean;
  /** What the targets hold before. */
  start?: number;
  /** What the work space holds before. */
  dirt?: number;
}

/** The same by the kernels, added to what the targets hold. */
function kernelBlur(
  shape: Shape,
  weightsX: Float64Array,
  tiles: Tile[],
  options: Options = {},
): Float32Array[] {
  const { shared = false, ones = false, start = 0, dirt = Number.NaN } = options;
  const bench = new Workbench();
  const { kernels, memory } = bench;
  const { fftWidth, fftHeight, kernelSize, nodesX, nodesY } = shape;
  const dirty = (bytes: number) => bench.place(new Float32Array(bytes / 4).fill(dirt));
  const scratch = dirty(kernels.blurScratchBytes(fftWidth, fftHeight, nodesX, nodesY));
  const spectrumScratch = dirty(kernels.spectrumScratchBytes(kernelSize, fftHeight));
  const shapeAt = bench.allocate(BLUR_SHAPE_BYTES);
  writeBlurShape(memory, shapeAt, { ...shape, weightsX: bench.place(weightsX), scratch });
  const placed = tiles.map((tile, index) => {
    const { frame, left, top, mirror } = tile;
    const spectra = tile.kernels.map((kernel) => {
      if (kernel === undefined) return 0;
      const spectrum = dirty(kernels.spectrumBytes(fftWidth, fftHeight));
      kernels.kernelSpectrum(
        bench.place(kernel),
        kernelSize,
        0,
        fftWidth,
        fftHeight,
        spectrumScratch,
        spectrum,
      );
      return spectrum;
    });
    const list = bench.allocate(4 * spectra.length);
    new Uint32Array(memory.buffer, list, spectra.length).set(spectra);
    const stride = frame.width + 3; // to see that strides are heeded
    const rows = new Float32Array(stride * frame.height).fill(Number.NaN);
    for (let row = 0; row < frame.height; row++) {
      rows.set(frame.samples.subarray(row * frame.width, (row + 1) * frame.width), row * stride);
    }
    const source = ones ? 0 : bench.place(rows);
    const target = bench.place(new Float32Array(frame.width * frame.height).fill(start));
    const at = bench.allocate(BLUR_TILE_BYTES);
    writeBlurTile(memory, at, {
      source,
      sourceStride: 4 * stride,
      target,
      targetStride: 4 * frame.width,
      frameWidth: frame.width,
      frameHeight: frame.height,
      left,
      top,
      mirror,
      weightsY: bench.place(tile.weightsY),
      spectra: index === 1 && shared ? 0 : list,
    });
    return { at, target, count: frame.width * frame.height };
  });
  kernels.blurTiles(shapeAt, placed[0].at, placed[1]?.at ?? 0);
  return placed.map(({ target, count }) => bench.floats(target, count).slice());
}

/** Samples, and the sums of weights and of kernels, are about 1 here. Measured up to 2.4e-7 over 400 random shapes. */
const LIMIT = 1e-6;

function makeFrame(width: number, height: number, seed: number): Frame {
  return { width, height, samples: noise(width * height, seed).map((value) => Math.abs(value)) };
}

/** A kernel of unit sum without any symmetry. */
function makeKernel(size: number, seed: number): Float64Array {
  const kernel = noise(size * size, seed).map((value) => Math.abs(value) ** 3);
  const sum = kernel.reduce((a, b) => a + b, 0);
  return kernel.map((value) => Math.fround(value / sum));
}

/** Weights that add up to 1 over the nodes. */
function makeWeights(nodes: number, length: number, seed: number): Float64Array {
  const weights = noise(nodes * length, seed).map((value) => Math.abs(value) / nodes);
  for (let i = 0; i < length; i++) {
    let rest = 1;
    for (let node = 0; node < nodes - 1; node++) rest -= weights[node * length + i];
    weights[(nodes - 1) * length + i] = rest;
  }
  return weights.map(Math.fround);
}

function ones(count: number): Float64Array {
  return new Float64Array(count).fill(1);
}

function worst(found: ArrayLike<number>, expected: ArrayLike<number>): number {
  let error = 0;
  for (let i = 0; i < expected.length; i++) error = Math.max(error, Math.abs(found[i] - expected[i]));
  return error;
}

/** Two tiles with all that a shape needs, in frames of their own. */
function makeTiles(shape: Shape, frames: Frame[], seed: number, shared: boolean): Tile[] {
  const { tileHeight, kernelSize, nodesX, nodesY } = shape;
  return frames.map((frame, index) => ({
    frame,
    left: 3 - index,
    top: index - 2,
    mirror: 0,
    weightsY: makeWeights(nodesY, tileHeight, seed + 3 + index),
    kernels: Array.from({ length: nodesX * nodesY }, (_, node) =>
      makeKernel(kernelSize, seed + (shared ? 0 : 16 * index) + node),
    ),
  }));
}

const SHAPE = {
  fftWidth: 64,
  fftHeight: 128,
  tileWidth: 21,
  tileHeight: 18,
  kernelSize: 7,
  nodesX: 3,
  nodesY: 2,
};

describe('the blur of tiles', () => {
  it('lays a kernel around a single sample, its middle on the sample', () => {
    const shape = { ...SHAPE, tileWidth: 20, tileHeight: 16, kernelSize: 5, nodesX: 1, nodesY: 1 };
    const frame = { width: 40, height: 30, samples: new Float64Array(1200) };
    frame.samples[14 * 40 + 17] = 1;
    const kernel = makeKernel(5, 1);
    const tile = { frame, left: 8, top: 6, mirror: 0, weightsY: ones(16), kernels: [kernel] };
    const [out] = kernelBlur(shape, ones(20), [tile]);
    const expected = new Float64Array(1200);
    for (let v = 0; v < 5; v++) {
      for (let u = 0; u < 5; u++) expected[(12 + v) * 40 + 15 + u] = kernel[5 * v + u];
    }
    expect(worst(out, expected)).toBeLessThan(LIMIT);
  });

  const side = fc.constantFrom(64, 128, 256);
  const share = fc.double({ min: 0, max: 1, noNaN: true });
  const place = fc.record({
    left: fc.integer({ min: -40, max: 50 }),
    top: fc.integer({ min: -40, max: 50 }),
    mirror: fc.nat(3),
  });
  const scenario = fc.record({
    fftWidth: side,
    fftHeight: side,
    kernelSize: fc.integer({ min: 1, max: 13 }),
    shares: fc.tuple(share, share),
    nodesX: fc.integer({ min: 1, max: 4 }),
    nodesY: fc.integer({ min: 1, max: 4 }),
    width: fc.integer({ min: 1, max: 50 }),
    height: fc.integer({ min: 1, max: 50 }),
    places: fc.array(place, { minLength: 1, maxLength: 2 }),
    shared: fc.boolean(),
    ones: fc.boolean(),
    seed: fc.nat(1000),
  });

  it('agrees with the definition for any shape, one tile or two, inside the frame and over its borders', () => {
    fc.assert(
      fc.property(scenario, ({ shares, width, height, places, shared, ones, seed, ...sizes }) => {
        const sideOf = (fft: number, part: number) =>
          Math.max(1, Math.round(part * Math.min(40, fft - sizes.kernelSize + 1)));
        const tileWidth = sideOf(sizes.fftWidth, shares[0]);
        const tileHeight = sideOf(sizes.fftHeight, shares[1]);
        const shape = { ...sizes, tileWidth, tileHeight };
        const weightsX = makeWeights(shape.nodesX, tileWidth, seed);
        const frames = places.map((_, index) => makeFrame(width, height, seed + index));
        if (ones) for (const frame of frames) frame.samples.fill(1);
        const tiles = makeTiles(shape, frames, seed, shared).map((tile, index) => ({
          ...tile,
          ...places[index],
        }));
        const found = kernelBlur(shape, weightsX, tiles, { shared, ones });
        tiles.forEach((tile, index) => {
          expect(worst(found[index], directBlur(shape, weightsX, tile))).toBeLessThan(LIMIT);
        });
      }),
      { numRuns: 60 },
    );
  });

  it('fills its transforms to the last sample', () => {
    const shape = { ...SHAPE, tileWidth: 50, tileHeight: 114, kernelSize: 15 };
    const weightsX = makeWeights(3, 50, 1);
    const [tile] = makeTiles(shape, [makeFrame(70, 130, 2)], 3, true);
    const [out] = kernelBlur(shape, weightsX, [tile]);
    expect(worst(out, directBlur(shape, weightsX, tile))).toBeLessThan(LIMIT);
  });

  it.each([
    [512, 470, 43],
    [1024, 300, 255],
    [2048, 80, 1023],
  ])('holds for transforms of %i', (fft, tileSide, kernelSize) => {
    // a single bright sample shows the blend of the kernels at its place; wide transforms with a low one, high ones with both
    const shape = {
      fftWidth: fft,
      fftHeight: 64,
      tileWidth: tileSide,
      tileHeight: 40,
      kernelSize: 25,
      nodesX: 2,
      nodesY: 1,
    };
    const tall = kernelSize > 40;
    const used = tall ? { ...shape, fftHeight: fft, kernelSize } : { ...shape, kernelSize: 25 };
    const kernelsOf = [makeKernel(used.kernelSize, 1), makeKernel(used.kernelSize, 2)];
    const frame = { width: fft, height: fft, samples: new Float64Array(fft * fft) };
    const [x, y] = [tileSide - 3, 17];
    const reach = Math.floor(used.kernelSize / 2);
    frame.samples[(y + reach) * fft + x + reach] = 1;
    const weightsX = makeWeights(2, tileSide, 5);
    const tile = { frame, left: reach, top: reach, mirror: 0, weightsY: ones(40), kernels: kernelsOf };
    const [out] = kernelBlur(used, weightsX, [tile]);
    let error = 0;
    let peak = 0;
    for (let v = 0; v < used.kernelSize; v++) {
      for (let u = 0; u < used.kernelSize; u++) {
        const at = v * used.kernelSize + u;
        const expected = weightsX[x] * kernelsOf[0][at] + weightsX[tileSide + x] * kernelsOf[1][at];
        error = Math.max(error, Math.abs(out[(y + v) * fft + x + u] - expected));
        peak = Math.max(peak, expected);
      }
    }
    expect(error / peak).toBeLessThan(1e-6); // measured 1.6e-7 to 3.3e-7
  });

  it('leaves out nodes without a spectrum', () => {
    const weightsX = makeWeights(3, SHAPE.tileWidth, 1);
    const tiles = makeTiles(SHAPE, [makeFrame(30, 30, 1), makeFrame(30, 30, 2)], 4, false);
    for (const { kernels } of tiles) kernels[4] = undefined;
    const found = kernelBlur(SHAPE, weightsX, tiles);
    tiles.forEach((tile, index) => {
      expect(worst(found[index], directBlur(SHAPE, weightsX, tile))).toBeLessThan(LIMIT);
    });
  });

  it('adds to its target and touches nothing past its reach', () => {
    const weightsX = makeWeights(3, SHAPE.tileWidth, 1);
    const [tile] = makeTiles(SHAPE, [makeFrame(40, 40, 1)], 4, false);
    const [added] = kernelBlur(SHAPE, weightsX, [tile], { start: 0.5 });
    const expected = directBlur(SHAPE, weightsX, tile);
    expect(
      worst(
        added,
        expected.map((value) => value + 0.5),
      ),
    ).toBeLessThan(LIMIT);
    const [right, bottom] = [tile.left + SHAPE.tileWidth + 3, tile.top + SHAPE.tileHeight + 3];
    const outside = added.filter((_, i) => i % 40 >= right || Math.floor(i / 40) >= bottom);
    expect(outside.length).toBeGreaterThan(500);
    expect(outside.every((value) => value === 0.5)).toBe(true);
  });

  it('gives the same bytes whatever the work space held', () => {
    const weightsX = makeWeights(3, SHAPE.tileWidth, 1);
    const tiles = makeTiles(SHAPE, [makeFrame(40, 40, 1), makeFrame(40, 40, 2)], 4, false);
    const clean = kernelBlur(SHAPE, weightsX, tiles, { dirt: 0 });
    expect(kernelBlur(SHAPE, weightsX, tiles, { dirt: 1e30 })).toEqual(clean);
    expect(kernelBlur(SHAPE, weightsX, tiles, { dirt: Number.NaN })).toEqual(clean);
  });

  it('treats two tiles alike: changing places changes nothing but rounding', () => {
    const weightsX = makeWeights(3, SHAPE.tileWidth, 1);
    const tiles = makeTiles(SHAPE, [makeFrame(40, 40, 1), makeFrame(40, 40, 2)], 4, false);
    const [a, b] = kernelBlur(SHAPE, weightsX, tiles);
    const [swappedB, swappedA] = kernelBlur(SHAPE, weightsX, [tiles[1], tiles[0]]);
    expect(worst(swappedA, a)).toBeLessThan(LIMIT);
    expect(worst(swappedB, b)).toBeLessThan(LIMIT);
  });
});

describe('the spectrum of a kernel', () => {
  it.each([0, MIRROR_X, MIRROR_Y, MIRROR_X + MIRROR_Y])('may be taken of its mirror image (%i)', (mirror) => {
    const bench = new Workbench();
    const { kernels } = bench;
    const kernel = makeKernel(11, 5);
    const mirrored = kernel.map((_, i) => {
      const [row, column] = [Math.floor(i / 11), i % 11];
      return kernel[(mirror & MIRROR_Y ? 10 - row : row) * 11 + (mirror & MIRROR_X ? 10 - column : column)];
    });
    const scratch = bench.allocate(kernels.spectrumScratchBytes(11, 64));
    const count = kernels.spectrumBytes(128, 64) / 4;
    const [seen, made] = [bench.allocate(4 * count), bench.allocate(4 * count)];
    kernels.kernelSpectrum(bench.place(kernel), 11, mirror, 128, 64, scratch, seen);
    kernels.kernelSpectrum(bench.place(mirrored), 11, 0, 128, 64, scratch, made);
    expect(bench.floats(seen, count)).toEqual(bench.floats(made, count));
  });
});
