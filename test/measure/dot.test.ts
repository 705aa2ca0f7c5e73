import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { drawShape } from '../../src/charts/draw.js';
import { disc } from '../../src/charts/shape.js';
import { InputError } from '../../src/errors.js';
import { type DotGuess, measureDot } from '../../src/measure/dot.js';
import type { Plane } from '../../src/measure/plane.js';
import { withNoise } from './edge-pictures.js';

/** Discs of exact coverage on a ground of 0.8. */
function picture(dots: { x: number; y: number; radiusPx: number }[], dark = 0.04): Plane {
  const plane = { width: 100, height: 90, oversample: 1, samples: new Float32Array(9000).fill(0.8) };
  for (const { x, y, radiusPx } of dots) drawShape(plane, disc(x, y, radiusPx), dark - 0.8);
  return plane;
}

const near = (dot: { x: number; y: number; radiusPx: number }): DotGuess => ({ ...dot, roomPx: 30 });
const off = (place: [number, number], x: number, y: number) => Math.hypot(place[0] - x, place[1] - y);

describe('measureDot', () => {
  it('finds the middle of a disc, from a guess some pixels away', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 45, max: 55, noNaN: true }),
        fc.double({ min: 40, max: 50, noNaN: true }),
        fc.double({ min: 4, max: 12, noNaN: true }),
        fc.constantFrom([0, 0], [6, -4], [-3, 5]),
        (x, y, radiusPx, [dx, dy]) => {
          const place = measureDot(picture([{ x, y, radiusPx }]), near({ x: x + dx, y: y + dy, radiusPx }));
          // the rim is not blurred, and a pixel's mean does not say where in the pixel the rim is: measured
          // 0.005 px at radii from 4 px on
          expect(off(place, x, y)).toBeLessThan(0.01);
        },
      ),
      { numRuns: 60 },
    );
  });

  it('is not moved by light that falls off, nor by a neighbour', () => {
    const dot = { x: 50.3, y: 44.6, radiusPx: 10 };
    const plane = picture([dot, { x: 92, y: 44, radiusPx: 6 }]);
    const samples = plane.samples.map(
      (value, i) => value * (1 - 0.003 * (i % 100) + 0.002 * Math.floor(i / 100)),
    );
    // without the ground's slope the fall-off of 0.4 % a pixel would move the middle by 0.004 * 10^2 / 4 =
    // 0.1 px
    expect(off(measureDot({ ...plane, samples }, near(dot)), 50.3, 44.6)).toBeLessThan(0.01);
  });

  it('finds it in noise as well as the noise allows', () => {
    const dot = { x: 50.3, y: 44.6, radiusPx: 10 };
    const errors = Array.from({ length: 20 }, (_, seed) =>
      off(measureDot(withNoise(picture([dot]), 0.01, seed + 1), near(dot)), 50.3, 44.6),
    );
    const rms = Math.sqrt(errors.reduce((sum, e) => sum + e * e, 0) / errors.length);
    // darkness has a noise of 0.01 / 0.8; over a circle of 20 px its moment is 0.0125 sqrt(pi 20^4 / 4) = 4.4
    // a direction, over an area of 298: 0.015 px, 0.021 px in both
    expect(rms).toBeGreaterThan(0.01);
    expect(rms).toBeLessThan(0.03);
  });

  const dot = { x: 50, y: 45, radiusPx: 10 };
  it.each([
    [
      'a disc without ground',
      picture([dot]),
      { ...dot, roomPx: 13 },
      /too little ground around it, found 3.0 px. Allowed: from 4 px up/,
    ],
    [
      'a disc at the frame',
      picture([{ ...dot, x: 8 }]),
      near({ ...dot, x: 8 }),
      /cut by the frame, found 8.5 px to the frame from its middle. Allowed: from 30.0/,
    ],
    [
      'an empty ground',
      picture([]),
      near(dot),
      /shows no disc, found at most -?[0-9.]+ % darker than the ground. Allowed: from 10 % up/,
    ],
    [
      'a clipped ground',
      { ...picture([dot]), samples: picture([dot]).samples.map((v) => (v > 0.7 ? 1 : v)) },
      near(dot),
      /clipped at black or white, found \d+\.\d % of the pixels. Allowed: up to 1 %/,
    ],
    [
      'a clipped disc',
      { ...picture([dot]), samples: picture([dot]).samples.map((v) => (v < 0.1 ? 0 : v)) },
      near(dot),
      /clipped at black or white/,
    ],
    [
      'a disc in noise',
      withNoise(picture([dot], 0.7), 0.05, 1),
      near(dot),
      /the disc is too noisy, found a darkness of \d\.\d times the noise. Allowed: from 5 times up/,
    ],
    [
      'a speck',
      picture([{ x: 50, y: 45, radiusPx: 3 }]),
      near(dot),
      /shows no whole disc, found a dark area of 0.\d+ times that of the disc. Allowed: from 0.5/,
    ],
  ] as [string, Plane, DotGuess, RegExp][])('refuses %s', (_, plane, guess, message) => {
    const run = () => measureDot(plane, guess);
    expect(run).toThrow(InputError);
    expect(run).toThrow(message);
  });
});
