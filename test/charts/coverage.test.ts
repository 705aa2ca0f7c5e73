import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { coverage } from '../../src/charts/coverage.js';
import { disc, rectangle, sector } from '../../src/charts/shape.js';

const place = fc.double({ min: -3, max: 3, noNaN: true });
const angle = fc.double({ min: 0, max: 360, noNaN: true });
const side = fc.double({ min: 0.05, max: 2, noNaN: true });

/** Area of the unit square at the origin below the line nx x + ny y = c, by the second antiderivative of a
 * step: with a = |nx|, b = |ny|, A = sum over the corners of +- max(0, c +- a/2 +- b/2)^2 / (2 a b).
 * Derived; exact but for its cancellation where a b is small. */
function halfPlaneArea(nx: number, ny: number, c: number): number {
  const [a, b] = [Math.abs(nx), Math.abs(ny)];
  const ramp = (x: number) => Math.max(0, x) ** 2;
  return (
    (ramp(c + a / 2 + b / 2) - ramp(c + a / 2 - b / 2) - ramp(c - a / 2 + b / 2) + ramp(c - a / 2 - b / 2)) /
    (2 * a * b)
  );
}

describe('coverage', () => {
  it('of a half-plane is the closed form', () => {
    fc.assert(
      fc.property(angle, fc.double({ min: -1, max: 1, noNaN: true }), (degrees, c) => {
        const nx = Math.cos((degrees * Math.PI) / 180);
        const ny = Math.sin((degrees * Math.PI) / 180);
        fc.pre(Math.abs(nx * ny) > 1e-4); // the closed form loses digits there, not the clipping: 1e-16 / 1e-4
        expect(coverage({ halfPlanes: [{ nx, ny, c }] }, 0, 0, 1)).toBeCloseTo(halfPlaneArea(nx, ny, c), 11);
      }),
    );
  });

  it('of a half-plane along the axes is a ramp', () => {
    const below = (c: number) => coverage({ halfPlanes: [{ nx: 0, ny: 1, c }] }, 5, 7, 1);
    expect([6, 6.5, 6.75, 7, 7.5, 9].map(below)).toEqual([0, 0, 0.25, 0.5, 1, 1]);
  });

  // Source: area of a circular segment, r^2 acos(d/r) - d sqrt(r^2 - d^2) (handbook formula, from memory)
  it('of a disc by a square that holds a cap of it is the circular segment', () => {
    for (const [radius, distance] of [
      [0.4, 0.3],
      [0.4, -0.05],
      [0.49, 0],
    ]) {
      const segment =
        radius ** 2 * Math.acos(distance / radius) - distance * Math.sqrt(radius ** 2 - distance ** 2);
      // the disc around the origin, cut by the near side of a square that begins at x = distance
      expect(coverage(disc(0, 0, radius), distance + 0.5, 0, 1)).toBeCloseTo(segment, 12);
    }
  });

  it('of a disc much larger than the square is that of the tangent', () => {
    // a circle bends by side^2 / (8 radius) over the square, so that is how far the two may differ
    const radius = 1e6;
    const tangent = coverage({ halfPlanes: [{ nx: 1, ny: 0, c: 0.1 }] }, 0, 0, 1);
    expect(Math.abs(coverage(disc(0.1 - radius, 0, radius), 0, 0, 1) - tangent)).toBeLessThan(
      1 / (8 * radius),
    );
  });

  it('adds up to the area of the shape over all squares of a grid', () => {
    fc.assert(
      fc.property(place, place, angle, side, (x, y, degrees, step) => {
        const ring = { x, y, innerPx: 0.4, outerPx: 2.3 };
        const shapes = [
          { shape: disc(x, y, 1.7), area: Math.PI * 1.7 ** 2 },
          { shape: rectangle(x, y, 2.5, 1.1, degrees), area: 2.5 * 1.1 },
          { shape: sector(ring, degrees, degrees + 25), area: (Math.PI * 25 * (2.3 ** 2 - 0.4 ** 2)) / 360 },
        ];
        for (const { shape, area } of shapes) {
          let sum = 0;
          const reach = Math.ceil(6 / step);
          for (let row = -reach; row <= reach; row++)
            for (let column = -reach; column <= reach; column++)
              sum += coverage(shape, column * step, row * step, step);
          expect(sum * step * step).toBeCloseTo(area, 9);
        }
      }),
      { numRuns: 12 },
    );
  });

  it('of a square is the mean over its quarters', () => {
    fc.assert(
      fc.property(place, place, angle, side, (x, y, degrees, size) => {
        const shape = sector({ x, y, innerPx: 0.3, outerPx: 2 }, degrees, degrees + 60);
        const quarters = [-1, 1].flatMap((u) =>
          [-1, 1].map((v) => coverage(shape, (u * size) / 4, (v * size) / 4, size / 2)),
        );
        expect(quarters.reduce((a, b) => a + b) / 4).toBeCloseTo(coverage(shape, 0, 0, size), 10);
      }),
    );
  });
});
