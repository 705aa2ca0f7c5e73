import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.js';
import { findEdge } from '../../src/measure/find-edge.js';
import { measureEdge } from '../../src/measure/slanted-edge.js';
import { edgePicture, withNoise } from './edge-pictures.js';

describe('findEdge', () => {
  it('finds direction and place of an edge that crosses a region anywhere', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 359 }),
        fc.integer({ min: -8, max: 8 }),
        fc.integer({ min: -8, max: 8 }),
        (normalDeg, dx, dy) => {
          const at: [number, number] = [45 + dx, 40 + dy];
          const plane = withNoise(
            edgePicture({ width: 100, height: 90, normalDeg, at, sigmaPx: 1 }),
            0.02,
            5,
          );
          const guess = findEdge(plane, { x: 10, y: 12, width: 70, height: 60 });
          const [nx, ny] = [
            Math.cos((guess.normalDeg * Math.PI) / 180),
            Math.sin((guess.normalDeg * Math.PI) / 180),
          ];
          const turn = Math.abs(
            nx * Math.sin((normalDeg * Math.PI) / 180) - ny * Math.cos((normalDeg * Math.PI) / 180),
          );
          expect(turn).toBeLessThan(0.05);
          const off =
            (guess.x - at[0]) * Math.cos((normalDeg * Math.PI) / 180) +
            (guess.y - at[1]) * Math.sin((normalDeg * Math.PI) / 180);
          expect(Math.abs(off)).toBeLessThan(1.5);
          // a strip as long as 20 px and as wide as 8 px on either side fits into a region of this size, and
          // lies in it
          expect(guess.lengthPx).toBeGreaterThan(20);
          expect(guess.halfWidthPx).toBeGreaterThan(8);
          for (const end of [-1, 1]) {
            const [x, y] = [
              guess.x - (end * guess.lengthPx * ny) / 2,
              guess.y + (end * guess.lengthPx * nx) / 2,
            ];
            expect(x).toBeGreaterThan(9.4);
            expect(x).toBeLessThan(79.6);
            expect(y).toBeGreaterThan(11.4);
            expect(y).toBeLessThan(71.6);
          }
        },
      ),
      { numRuns: 60 },
    );
  });

  it('is good enough for the measurement', () => {
    const plane = edgePicture({ width: 120, height: 100, normalDeg: 278, at: [61, 50], sigmaPx: 0.7 });
    const region = { x: 20, y: 15, width: 80, height: 70 };
    const known = measureEdge(plane, { x: 61, y: 50, normalDeg: 278, lengthPx: 70, halfWidthPx: 30 });
    const found = measureEdge(plane, findEdge(plane, region), region);
    for (const f of [0.1, 0.25, 0.4]) expect(Math.abs(found.sfr(f) - known.sfr(f))).toBeLessThan(0.002);
  });

  it.each([
    [
      'nothing but noise',
      withNoise({ width: 60, height: 60, samples: new Float32Array(3600).fill(0.5) }, 0.05, 3),
    ],
    ['nothing at all', { width: 60, height: 60, samples: new Float32Array(3600).fill(0.5) }],
    [
      'a cross of two edges',
      (() => {
        const [a, b] = [3, 93].map((normalDeg) => edgePicture({ width: 60, height: 60, normalDeg }));
        return {
          ...a,
          samples: a.samples.map((value, i) => (value > 0.5 === b.samples[i] > 0.5 ? 0.2 : 0.8)),
        };
      })(),
    ],
  ])('refuses %s', (_, plane) => {
    const run = () => findEdge(plane, { x: 0, y: 0, width: 60, height: 60 });
    expect(run).toThrow(InputError);
    expect(run).toThrow(
      /shows no edge, or several that cross, found slopes that agree to 0(\.\d+)? on a direction. Allowed: from 0.3 up/,
    );
  });
});
