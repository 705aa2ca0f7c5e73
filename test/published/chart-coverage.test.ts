import Flatten from '@flatten-js/core';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { coverage } from '../../src/charts/coverage.js';
import { disc, rectangle, sector } from '../../src/charts/shape.js';

const { BooleanOperations, Box, Circle, Polygon, point } = Flatten;

// Source: @flatten-js/core 1.6, a general-purpose library of plane geometry: areas of intersections of
// polygons whose sides may be arcs. Its own tolerance for points that coincide is 1e-6, so shapes that only
// graze a corner of the square are left out of its reach by 1e-3.
describe('coverage against a general-purpose geometry library', () => {
  const square = (x: number, y: number, side: number) =>
    new Polygon(new Box(x - side / 2, y - side / 2, x + side / 2, y + side / 2));
  const overlap = (a: Flatten.Polygon, b: Flatten.Polygon) =>
    Math.abs(BooleanOperations.intersect(a, b).area());
  const corners = (x: number, y: number, along: number, across: number, degrees: number) => {
    const [cos, sin] = [Math.cos((degrees * Math.PI) / 180), Math.sin((degrees * Math.PI) / 180)];
    return [
      [-1, -1],
      [1, -1],
      [1, 1],
      [-1, 1],
    ].map(([u, v]) =>
      point(
        x + (u * along * cos) / 2 - (v * across * sin) / 2,
        y + (u * along * sin) / 2 + (v * across * cos) / 2,
      ),
    );
  };

  /** Numbers without a leaning to the limits, where shapes would coincide; a fixed seed, since the library is
   * not to be put to the test. */
  const number = (min: number, max: number) => fc.noBias(fc.double({ min, max, noNaN: true }));
  const RUNS = { seed: 1, numRuns: 150 };

  it('agrees for discs', () => {
    const agree = fc.property(number(-0.6, 0.6), number(-0.6, 0.6), number(0.2, 3), (x, y, radius) => {
      const theirs = overlap(square(x + radius, y, 1), new Polygon(new Circle(point(0, 0), radius)));
      expect(coverage(disc(0, 0, radius), x + radius, y, 1)).toBeCloseTo(theirs, 9);
    });
    fc.assert(agree, RUNS);
  });

  it('agrees for rectangles', () => {
    const place = fc.tuple(number(-1, 1), number(-1, 1));
    const size = fc.tuple(number(0.2, 2), number(0.2, 2));
    const agree = fc.property(place, size, number(1, 89), ([x, y], [along, across], degrees) => {
      const theirs = overlap(square(0, 0, 0.7), new Polygon(corners(x, y, along, across, degrees)));
      expect(coverage(rectangle(x, y, along, across, degrees), 0, 0, 0.7)).toBeCloseTo(theirs / 0.49, 9);
    });
    fc.assert(agree, RUNS);
  });

  it('agrees for sectors of a disc', () => {
    const place = fc.tuple(number(-2, 2), number(-2, 2));
    const agree = fc.property(place, number(1, 359), number(5, 80), ([x, y], from, turn) => {
      const end = (degrees: number) =>
        point(3 * Math.cos((degrees * Math.PI) / 180), 3 * Math.sin((degrees * Math.PI) / 180));
      // a triangle whose far side lies outside of the disc makes the wedge
      const wedge = new Polygon([point(0, 0), end(from), end(from + turn)]);
      const pie = BooleanOperations.intersect(wedge, new Polygon(new Circle(point(0, 0), 2)));
      const ours = coverage(sector({ x: 0, y: 0, innerPx: 0, outerPx: 2 }, from, from + turn), x, y, 0.8);
      expect(ours).toBeCloseTo(overlap(square(x, y, 0.8), pie) / 0.64, 9);
    });
    fc.assert(agree, RUNS);
  });
});
