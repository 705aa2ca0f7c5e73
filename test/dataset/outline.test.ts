import fc from 'fast-check';
import { describe, expect, it, test } from 'vitest';
import {
  boxAbout,
  clippedRing,
  movedRing,
  type Point,
  ringArea,
  ringsArea,
} from '../../src/dataset/outline.js';

const SQUARE: Point[] = [
  [0, 0],
  [10, 0],
  [10, 10],
  [0, 10],
];

test('areas and boxes by hand', () => {
  expect(ringArea(SQUARE)).toBe(100);
  expect(ringArea([...SQUARE].reverse())).toBe(100);
  expect(ringArea([[0, 0], [4, 0], [0, 3]])).toBe(6); // biome-ignore format: short
  expect(ringsArea([SQUARE, [[0, 0], [4, 0], [0, 3]]])).toBe(106); // biome-ignore format: short
  expect(boxAbout([[3, 9], [-1, 2], [5, 4]])).toEqual([-1, 2, 6, 7]); // biome-ignore format: short
  expect(boxAbout([])).toBeUndefined();
});

describe('movedRing', () => {
  test('a straight map needs no new points but the middles of long sides', () => {
    expect(movedRing(SQUARE, (x, y) => [2 * x + y, y - 3])).toEqual(
      SQUARE.map(([x, y]) => [2 * x + y, y - 3]),
    );
  });

  it('follows a bending map: a side bent to an arc has the area of the circle', () => {
    // (x, y) -> polar: the rectangle 0..100 x 0..2 pi becomes a disc of radius 100
    const rectangle: Point[] = [
      [0, 0],
      [100, 0],
      [100, 2 * Math.PI],
      [0, 2 * Math.PI],
    ];
    const ring = movedRing(rectangle, (r, angle) => [r * Math.cos(angle), r * Math.sin(angle)]);
    // a polygon whose sides lie up to 0.02 inside: 2/3 of that on the average
    const lost = (2 / 3) * 0.02 * 2 * Math.PI * 100;
    expect(Math.PI * 1e4 - ringArea(ring)).toBeGreaterThan(0);
    expect(Math.PI * 1e4 - ringArea(ring)).toBeLessThan(lost);
    expect(ring.length).toBeLessThan(300);
  });

  it('sees an S whose middle lies on the straight line', () => {
    const wave = (x: number, y: number): [number, number] => [x, y + 5 * Math.sin((2 * Math.PI * x) / 100)];
    const ring = movedRing([[0, 0], [100, 0], [50, 80]], wave); // biome-ignore format: short
    const lowest = Math.min(...ring.map(([, y]) => y));
    expect(lowest).toBeCloseTo(-5, 1);
  });
});

describe('clippedRing', () => {
  test('inside, outside, cut', () => {
    expect(clippedRing(SQUARE, 20, 20)).toEqual([SQUARE]);
    expect(
      clippedRing(
        SQUARE.map(([x, y]): Point => [x + 20, y]),
        20,
        20,
      ),
    ).toEqual([]);
    const [cut] = clippedRing(SQUARE.map(([x, y]): Point => [x - 4, y + 15]), 20, 20); // biome-ignore format: short
    expect(boxAbout(cut)).toEqual([0, 15, 6, 5]);
    expect(ringArea(cut)).toBe(30);
    expect(cut).toHaveLength(4);
  });

  test('a U cut off at its bottom is two things', () => {
    const u: Point[] = [
      [0, 0],
      [2, 0],
      [2, 8],
      [6, 8],
      [6, 0],
      [8, 0],
      [8, 12],
      [0, 12],
    ];
    const parts = clippedRing(u, 20, 5);
    expect(parts.map(ringArea)).toEqual([10, 10]);
  });

  it('takes outlines that cross themselves, with edges in common with the frame', () => {
    const grid = fc.tuple(fc.integer({ min: -3, max: 13 }), fc.integer({ min: -3, max: 13 }));
    fc.assert(
      fc.property(fc.array(grid, { minLength: 3, maxLength: 9 }), (ring) => {
        const box = boxAbout(clippedRing(ring, 10, 10).flat());
        if (box === undefined) return;
        expect(Math.min(box[0], box[1])).toBeGreaterThanOrEqual(0);
        expect(Math.max(box[0] + box[2], box[1] + box[3])).toBeLessThanOrEqual(10);
      }),
    );
  });

  it('leaves what a fine grid of points says', () => {
    const corner = fc.tuple(
      fc.double({ min: -15, max: 25, noNaN: true }),
      fc.double({ min: -15, max: 25, noNaN: true }),
    );
    fc.assert(
      fc.property(fc.tuple(corner, corner, corner), (triangle) => {
        const area = ringsArea(clippedRing(triangle, 10, 10));
        let inside = 0;
        const steps = 100;
        for (let i = 0; i < steps; i++)
          for (let j = 0; j < steps; j++) {
            if (isInside(triangle, ((i + 0.5) * 10) / steps, ((j + 0.5) * 10) / steps)) inside++;
          }
        // a border of 40 at most crosses 4 cells of 0.01 for each 0.1 of its way, each half wrong at worst
        expect(Math.abs(area - inside / 100)).toBeLessThan(1);
      }),
      { numRuns: 60 },
    );
  });
});

function isInside([a, b, c]: readonly Point[], x: number, y: number): boolean {
  const side = (p: Point, q: Point) => Math.sign((q[0] - p[0]) * (y - p[1]) - (q[1] - p[1]) * (x - p[0]));
  return Math.abs(side(a, b) + side(b, c) + side(c, a)) === 3;
}
