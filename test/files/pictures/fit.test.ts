import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fitToSensor } from '../../../src/files/pictures/fit.js';
import type { Picture } from '../../../src/files/pictures/picture.js';

const plane = (width: number, height: number, value: (x: number, y: number) => number) =>
  Float32Array.from({ length: width * height }, (_, i) => value(i % width, Math.floor(i / width)));

const mono = (width: number, height: number, value: (x: number, y: number) => number): Picture => ({
  width,
  height,
  planes: [plane(width, height, value)],
});

/** A disc whose edge is a ramp, `edge` pixels wide: 1 pixel is near enough to the coverage of a hard disc. */
const disc = (x0: number, y0: number, radius: number, edge: number) => (x: number, y: number) =>
  Math.min(1, Math.max(0, (radius - Math.hypot(x - x0, y - y0)) / edge + 0.5));

const centroid = ({ width, planes: [values] }: Picture): [x: number, y: number] => {
  let [sum, sumX, sumY] = [0, 0, 0];
  values.forEach((value, i) => {
    sum += value;
    sumX += value * (i % width);
    sumY += value * Math.floor(i / width);
  });
  return [sumX / sum, sumY / sum];
};

const SIZES: readonly [width: number, height: number, targetWidth: number, targetHeight: number][] = [
  [301, 201, 207, 138],
  [301, 201, 173, 115],
  [300, 201, 173, 116],
  [200, 151, 397, 265],
  [97, 101, 160, 120],
  [101, 64, 100, 64], // nothing to magnify, half a pixel to move
  [120, 81, 119, 80],
  [400, 90, 80, 90],
];

describe('fitToSensor', () => {
  it('gives a picture of the right size back as it is', () => {
    const picture = mono(7, 5, (x, y) => x * y);
    expect(fitToSensor(picture, 7, 5)).toBe(picture);
  });

  it('only crops where the middle allows it', () => {
    const fitted = fitToSensor(
      mono(9, 6, (x, y) => (10 * y + x) / 100),
      5,
      6,
    );
    expect([...fitted.planes[0]]).toEqual([...plane(5, 6, (x, y) => (10 * y + x + 2) / 100)]);
  });

  it.each(SIZES)(
    '%i x %i to %i x %i: a disc keeps its place against the middle',
    (width, height, toWidth, toHeight) => {
      const scale = Math.max(toWidth / width, toHeight / height);
      const radius = Math.min(toWidth, toHeight) / scale / 4;
      // In the middle the symmetry holds it: rounding only. Elsewhere: a soft edge that the pixels can carry,
      // 0.002 px from the sampling of the disc; a hard one rings, and what is clipped off the ringing weighs
      // unevenly (0.011 px measured, at half a pixel's shift)
      for (const [dx, dy, edge, limit] of [
        [0, 0, 1, 1e-6],
        [3.3, -2.7, 5, 3e-3],
        [3.3, -2.7, 1, 0.015],
      ]) {
        const scene = mono(width, height, disc((width - 1) / 2 + dx, (height - 1) / 2 + dy, radius, edge));
        const [x, y] = centroid(fitToSensor(scene, toWidth, toHeight));
        expect(Math.abs(x - (toWidth - 1) / 2 - dx * scale)).toBeLessThan(limit);
        expect(Math.abs(y - (toHeight - 1) / 2 - dy * scale)).toBeLessThan(limit);
      }
    },
  );

  it.each(SIZES)(
    '%i x %i to %i x %i: mirrored scenes give mirrored pictures',
    (width, height, toWidth, toHeight) => {
      const value = (x: number, y: number) => ((x * 31 + y * 17) % 23) / 22;
      const scene = fitToSensor(mono(width, height, value), toWidth, toHeight);
      const turned = fitToSensor(
        mono(width, height, (x, y) => value(width - 1 - x, height - 1 - y)),
        toWidth,
        toHeight,
      );
      const last = toWidth * toHeight - 1;
      let largest = 0;
      scene.planes[0].forEach((sample, i) => {
        largest = Math.max(largest, Math.abs(sample - turned.planes[0][last - i]));
      });
      expect(largest).toBeLessThan(1e-6); // float32, and sums in another order
    },
  );

  it.each(SIZES)('%i x %i to %i x %i: a uniform scene stays uniform', (width, height, toWidth, toHeight) => {
    for (const level of [0, 0.123456, 1]) {
      const fitted = fitToSensor(
        mono(width, height, () => level),
        toWidth,
        toHeight,
      );
      for (const value of fitted.planes[0]) if (value !== Math.fround(level)) expect.fail(`${value}`);
    }
  });

  it('keeps a ramp a ramp: every sample is taken from its exact place', () => {
    for (const [width, toWidth] of [
      [301, 207],
      [301, 397],
    ]) {
      const { planes } = fitToSensor(
        mono(width, width, (x) => x / width),
        toWidth,
        toWidth,
      );
      for (let x = 20; x < toWidth - 20; x++) {
        const place = ((x - (toWidth - 1) / 2) * width) / toWidth + (width - 1) / 2;
        // float32 values up to 1, times the width: 2e-5
        expect(Math.abs(planes[0][toWidth * 40 + x] * width - place)).toBeLessThan(5e-5);
      }
    }
  });

  it('filters out what the coarser grid cannot carry, in linear light', () => {
    // a checker of black and white, finer than the sensor: half the light everywhere but at the border
    const { planes } = fitToSensor(
      mono(400, 400, (x, y) => (x + y) % 2),
      100,
      100,
    );
    const within = planes[0].filter((_, i) => i % 100 >= 10 && i % 100 < 90 && i >= 1000 && i < 9000);
    expect(within.every((value) => Math.abs(value - 0.5) < 0.01)).toBe(true);
  });

  it('covers any frame from any shape, and never leaves the range of the scene', () => {
    const side = fc.integer({ min: 1, max: 40 });
    fc.assert(
      fc.property(side, side, side, side, fc.integer(), (width, height, toWidth, toHeight, seed) => {
        const scene = mono(
          width,
          height,
          (x, y) => 0.2 + 0.5 * (((x * 7 + y * 13 + Math.abs(seed % 97)) % 5) / 4),
        );
        const fitted = fitToSensor(scene, toWidth, toHeight);
        expect([fitted.width, fitted.height, fitted.planes[0].length]).toEqual([
          toWidth,
          toHeight,
          toWidth * toHeight,
        ]);
        const [low, high] = [Math.min(...scene.planes[0]), Math.max(...scene.planes[0])];
        expect(fitted.planes[0].every((value) => value >= low && value <= high)).toBe(true);
      }),
    );
  });

  it('fits each plane, in memory that the caller gives', () => {
    const scene: Picture = {
      width: 6,
      height: 4,
      planes: [0.1, 0.5, 0.9].map((level) => plane(6, 4, () => level)),
    };
    const own = [0, 1, 2].map(() => new Float32Array(15));
    const fitted = fitToSensor(scene, 5, 3, { allocate: () => own });
    expect(fitted.planes).toBe(own);
    own.forEach((values, k) => {
      expect([...new Set(values)]).toEqual([Math.fround([0.1, 0.5, 0.9][k])]);
    });
  });
});
