import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { launch, Ray, rayError, trace } from '../../src/prescription/exact.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import type { Surface } from '../../src/prescription/prescription.js';
import { type OpticalSystem, systemAt } from '../../src/prescription/system.js';
import { packhouseLens, sixSurfaceLens } from './lenses.js';

const system = (surfaces: Surface[], objectDistanceMm?: number): OpticalSystem =>
  systemAt(surfaces, 550, objectDistanceMm, 50);

/** Sag of a surface by its definition. */
function sag(surface: Surface, x: number, y: number): number {
  const c = 1 / (surface.radiusMm ?? Number.POSITIVE_INFINITY);
  const k = surface.conic ?? 0;
  const r2 = x * x + y * y;
  const terms = Object.entries(surface.asphericMm ?? {});
  return (
    (c * r2) / (1 + Math.sqrt(1 - (1 + k) * c * c * r2)) +
    terms.reduce((sum, [name, value]) => sum + value * r2 ** (Number(name.slice(1)) / 2), 0)
  );
}

function cross(a: number[], b: number[]): number[] {
  return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
}

describe('one surface', () => {
  const kinds: [string, Surface][] = [
    ['sphere', { radiusMm: 30, glass: { n: 1.6 } }],
    ['sphere, hollow side', { radiusMm: -25, glass: { n: 1.6 } }],
    ['flat', { glass: { n: 1.5 } }],
    ['paraboloid', { radiusMm: 20, conic: -1, glass: { n: 1.5 } }],
    ['hyperboloid', { radiusMm: -20, conic: -2.5, glass: { n: 1.8 } }],
    ['oblate ellipsoid', { radiusMm: 40, conic: 1.5, glass: { n: 1.5 } }],
    [
      'aspheric',
      { radiusMm: 30, conic: -0.5, asphericMm: { A4: 2e-5, A6: -3e-8, A10: 1e-13 }, glass: { n: 1.5 } },
    ],
    ['flat with an aspheric term', { asphericMm: { A4: -4e-5 }, glass: { n: 1.5 } }],
    ['mirror', { radiusMm: -60, mirror: true }],
    ['aspheric mirror', { radiusMm: -60, conic: -1, asphericMm: { A6: 1e-8 }, mirror: true }],
  ];

  test.each(kinds)(
    '%s: the ray meets the surface and obeys the law of refraction or reflection',
    (_, surface) => {
      const ray = new Ray();
      fc.assert(
        fc.property(
          fc.double({ min: -6, max: 6, noNaN: true }),
          fc.double({ min: -6, max: 6, noNaN: true }),
          fc.double({ min: -0.4, max: 0.4, noNaN: true }),
          (x, y, field) => {
            const at = system([{ stop: true, thicknessMm: 2 }, surface]);
            launch(ray, at, field, x, y);
            const before = [ray.L, ray.M, ray.N];
            expect(trace(ray, at)).toBe(true);
            // on the surface, to the rounding of coordinates of 10 mm
            expect(Math.abs(ray.z - sag(surface, ray.x, ray.y))).toBeLessThan(1e-14 * 20);
            // on the line
            expect(Math.abs(ray.x - x - (before[0] / before[2]) * (2 + ray.z))).toBeLessThan(1e-13);
            expect(Math.abs(ray.y - y - (before[1] / before[2]) * (2 + ray.z))).toBeLessThan(1e-13);
            const after = [ray.L, ray.M, ray.N];
            expect(Math.abs(Math.hypot(...after) - 1)).toBeLessThan(1e-14);
            // normal by central differences of the sag: good to about 1e-9
            const step = 1e-4;
            const dx = (sag(surface, ray.x + step, ray.y) - sag(surface, ray.x - step, ray.y)) / (2 * step);
            const dy = (sag(surface, ray.x, ray.y + step) - sag(surface, ray.x, ray.y - step)) / (2 * step);
            const normal = [-dx, -dy, 1].map((v) => v / Math.hypot(dx, dy, 1));
            const n = Math.abs(at.index[2]);
            const tangentialBefore = cross(before, normal);
            cross(after, normal).forEach((v, i) => {
              expect(Math.abs(n * v - tangentialBefore[i])).toBeLessThan(1e-8);
            });
            expect(Math.sign(ray.N)).toBe(surface.mirror ? -1 : 1);
          },
        ),
        { numRuns: 60, seed: 3 },
      );
    },
  );
});

describe('optical path', () => {
  test.each([undefined, 400])(
    'is what adding up the pieces gives (object distance %s)',
    (objectDistanceMm) => {
      const lens = sixSurfaceLens();
      const at = system([...lens.surfaces], objectDistanceMm);
      const ray = new Ray();
      const field = 0.2;
      const path = (x: number, y: number) => {
        launch(ray, at, field, x, y);
        let before = { x, y, z: 0 };
        let sum =
          objectDistanceMm === undefined
            ? x * ray.L + y * ray.M
            : Math.hypot(x, y + objectDistanceMm * field, objectDistanceMm);
        let axis = objectDistanceMm ?? 0;
        for (let i = 0; i < at.count; i++) {
          launch(ray, at, field, x, y);
          trace(ray, at, i + 1);
          const t = i === 0 ? 0 : at.thickness[i - 1];
          // from the plane of the vertex the surface may lie behind
          const direction = i === 0 ? Math.sign(ray.z) || 1 : 1;
          sum +=
            direction * at.index[i] * Math.hypot(ray.x - before.x, ray.y - before.y, t + ray.z - before.z);
          axis += at.index[i] * t;
          before = { x: ray.x, y: ray.y, z: ray.z };
        }
        return { sum: sum - axis, excess: ray.excess };
      };
      for (const [x, y] of [
        [0, 0],
        [2, -3],
        [-4, 1],
      ]) {
        const { sum, excess } = path(x, y);
        expect(Math.abs(sum - excess)).toBeLessThan(1e-12); // mm; paths of 500 mm round to 1e-13
      }
    },
  );

  test('a surface between equal media changes nothing, not even a digit of the direction', () => {
    const plain = lensModel(packhouseLens()).prescription.surfaces;
    const thickness = plain[0].thicknessMm as number;
    const cut: Surface[] = [
      { ...plain[0], thicknessMm: thickness / 3 },
      { radiusMm: 7, thicknessMm: (2 * thickness) / 3, glass: plain[0].glass },
      ...plain.slice(1),
    ];
    const a = new Ray();
    const b = new Ray();
    for (const [x, y, field] of [
      [0.5, -1.2, 0.3],
      [1.1, 0.2, 0],
    ]) {
      launch(a, system([...plain]), field, x, y);
      launch(b, system(cut), field, x, y);
      expect(trace(a, system([...plain]))).toBe(true);
      expect(trace(b, system(cut))).toBe(true);
      for (const name of ['x', 'y', 'z', 'L', 'M', 'N', 'excess'] as const)
        expect(Math.abs(a[name] - b[name])).toBeLessThan(1e-14 * 10);
    }
  });

  test('stigmatic: an ellipsoid mirror joins its foci with one and the same path', () => {
    // foci at a (1 - e), a (1 + e) from the vertex; k = -e^2, R = -a (1 - e^2)
    const e = 0.5;
    const a = 80;
    const at = systemAt(
      [{ radiusMm: -a * (1 - e * e), conic: -e * e, mirror: true }],
      550,
      a * (1 - e),
      -a * (1 + e),
    );
    const ray = new Ray();
    for (const y of [1, 5, 15]) {
      launch(ray, at, 0, 0.3 * y, y);
      expect(trace(ray, at)).toBe(true);
      const toFocus = Math.hypot(ray.x, ray.y, -a * (1 + e) - ray.z);
      expect(Math.abs(ray.excess + toFocus - a * (1 + e))).toBeLessThan(1e-12);
    }
  });
});

describe('rays that do not get through name their surface', () => {
  const ray = new Ray();

  test('miss', () => {
    const at = system([
      { stop: true, thicknessMm: 1 },
      { radiusMm: 5, glass: { n: 1.5 }, thicknessMm: 2 },
      {},
    ]);
    launch(ray, at, 0, 0, 5.5);
    expect(trace(ray, at)).toBe(false);
    expect(ray.failedAt).toBe(1);
    expect(ray.blockedAt).toBe(-1);
    expect(rayError(ray, 'the test ray').message).toMatch(
      /surfaces\[1\]: surface 2: the test ray misses it\. .*semi_diameter_mm/,
    );
  });

  test('miss of an aspheric surface', () => {
    const at = system([
      { stop: true, thicknessMm: 1 },
      { radiusMm: 5, asphericMm: { A4: 1e-6 }, glass: { n: 1.5 } },
    ]);
    launch(ray, at, 0, 0, 5.5);
    expect(trace(ray, at)).toBe(false);
    expect(ray.failedAt).toBe(1);
  });

  test('total reflection', () => {
    // out of glass of n 1.5 at 45 degrees: past the critical angle of 41.8
    const at = system([{ stop: true, glass: { n: 1.5 }, thicknessMm: 5 }, { radiusMm: -10 }]);
    launch(ray, at, 0, 0, 10 * Math.SQRT1_2);
    expect(trace(ray, at)).toBe(false);
    expect(ray.failedAt).toBe(1);
    expect(rayError(ray, 'the test ray').message).toMatch(
      /surface 2: the test ray is totally reflected there/,
    );
    launch(ray, at, 0, 0, 10 * (2 / 3 - 1e-9)); // just inside the critical angle, sin = 2/3
    expect(trace(ray, at)).toBe(true);
  });

  test('a semi-diameter cuts the ray, and a miss of such a surface counts as cut', () => {
    const at = system([
      { stop: true, thicknessMm: 1 },
      { radiusMm: 5, glass: { n: 1.5 }, thicknessMm: 2, semiDiameterMm: 3 },
      { semiDiameterMm: 0.1 },
    ]);
    launch(ray, at, 0, 0, 2.9);
    expect(trace(ray, at)).toBe(true);
    expect(ray.blockedAt).toBe(2);
    launch(ray, at, 0, 2.3, 2.3);
    expect(trace(ray, at)).toBe(true);
    expect(ray.blockedAt).toBe(1);
    launch(ray, at, 0, 0, 5.5);
    expect(trace(ray, at)).toBe(false);
    expect(ray.blockedAt).toBe(1);
  });
});
