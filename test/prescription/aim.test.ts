import fc from 'fast-check';
import { expect, test } from 'vitest';
import { aim, paraxialStart } from '../../src/prescription/aim.js';
import { Ray } from '../../src/prescription/exact.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { doublet, packhouseLens, singlet, sixSurfaceLens } from './lenses.js';

test('the ray found passes the stop where it was asked to', () => {
  const lenses = [singlet(), doublet(), packhouseLens(), sixSurfaceLens({ field: { halfAngleDeg: 12 } })].map(
    (lens) => lensModel(lens).reference,
  );
  const ray = new Ray();
  const start = new Float64Array(2);
  fc.assert(
    fc.property(
      fc.constantFrom(...lenses),
      fc.double({ min: 0, max: 1, noNaN: true }),
      fc.double({ min: 0, max: 1, noNaN: true }),
      fc.double({ min: 0, max: 2 * Math.PI, noNaN: true }),
      (lens, h, rho, angle) => {
        const across = rho * Math.sin(angle);
        const along = rho * Math.cos(angle);
        paraxialStart(lens, h, across, along, start);
        expect(aim(ray, lens, h, across, along, start)).toBe(true);
        const radius = lens.paraxial.marginal.y[lens.system.stop];
        // as stated there, for coordinates of a radius
        expect(Math.abs(ray.x / radius - across)).toBeLessThan(2e-12);
        expect(Math.abs(ray.y / radius - along)).toBeLessThan(2e-12);
      },
    ),
    { numRuns: 200, seed: 11 },
  );
});

test('a start from which the ray misses the lens is mended by growing field and pupil', () => {
  const lens = lensModel(packhouseLens()).reference;
  const ray = new Ray();
  const start = Float64Array.of(40, 40);
  expect(aim(ray, lens, 0.9, 0.5, -0.5, start)).toBe(true);
  const other = paraxialStart(lens, 0.9, 0.5, -0.5, new Float64Array(2));
  expect(aim(ray, lens, 0.9, 0.5, -0.5, other)).toBe(true);
  expect(Math.abs(start[0] - other[0]) + Math.abs(start[1] - other[1])).toBeLessThan(1e-10);
});

test('a place of the stop that no light reaches is not found', () => {
  // at 18 degrees the front surfaces fold the pupil at -0.99 of the stop's radius
  const lens = lensModel(sixSurfaceLens()).reference;
  const start = paraxialStart(lens, 1, 0, -1, new Float64Array(2));
  expect(aim(new Ray(), lens, 1, 0, -1, start)).toBe(false);
});
