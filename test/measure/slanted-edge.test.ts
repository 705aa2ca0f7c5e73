import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.js';
import type { Plane } from '../../src/measure/plane.js';
import { measureEdge } from '../../src/measure/slanted-edge.js';
import type { EdgeGuess } from '../../src/measure/strip.js';
import { type EdgePicture, edgePicture, withNoise } from './edge-pictures.js';

const MIDDLE: EdgeGuess = { x: 39.5, y: 39.5, normalDeg: 0, lengthPx: 70, halfWidthPx: 30 };

/** A measurement of an exact picture, with a guess a degree off. */
function measured(picture: EdgePicture, guess: Partial<EdgeGuess> = {}) {
  return measureEdge(edgePicture(picture), { ...MIDDLE, normalDeg: picture.normalDeg + 1, ...guess });
}

const sinc = (x: number) => (x === 0 ? 1 : Math.sin(Math.PI * x) / (Math.PI * x));

/** Response of a square pixel and a Gaussian along a direction. */
function expectedSfr(f: number, degrees: number, sigmaPx = 0): number {
  const angle = (degrees * Math.PI) / 180;
  return sinc(f * Math.cos(angle)) * sinc(f * Math.sin(angle)) * Math.exp(-2 * (Math.PI * sigmaPx * f) ** 2);
}

const FREQUENCIES = Array.from({ length: 9 }, (_, i) => (i + 1) / 20);

function worstError(edge: { sfr: (f: number) => number }, degrees: number, sigmaPx = 0): number {
  return Math.max(...FREQUENCIES.map((f) => Math.abs(edge.sfr(f) - expectedSfr(f, degrees, sigmaPx))));
}

describe('measureEdge', () => {
  it("finds the pixel's own response in an ideal edge, at any angle and in all quadrants", () => {
    fc.assert(
      fc.property(
        fc.double({ min: 2, max: 43.5, noNaN: true }),
        fc.constantFrom(0, 90, 180, 270),
        fc.constantFrom(-1, 1),
        (slant, quadrant, way) => {
          const normalDeg = quadrant + way * slant;
          const edge = measured({ normalDeg });
          // measured 0.0010 at most, and 0.005 at 26.5 degrees: the edge has no blur but the pixel's, and at
          // a slope of 1/2 its pixels stand at distances 0.45 px apart
          const isHalf = Math.abs(slant - 26.57) < 0.5;
          expect(worstError(edge, normalDeg)).toBeLessThan(isHalf ? 0.008 : 0.002);
          expect(Math.abs(((edge.normalDeg - normalDeg + 540) % 360) - 180)).toBeLessThan(0.01);
          expect(edge.angleDeg).toBeCloseTo(slant, 1);
        },
      ),
      { numRuns: 40 },
    );
  });

  it.each([9.462, 11.31, 8.13, 18.435, 33.69])(
    'does as well where the slope is near a simple fraction (%s degrees)',
    (normalDeg) => {
      expect(worstError(measured({ normalDeg }), normalDeg)).toBeLessThan(0.002);
    },
  );

  it.each([0.3, 0.8, 1.5, 3])('finds a Gaussian of %s px through the pixel', (sigmaPx) => {
    const edge = measured({ normalDeg: 95, sigmaPx });
    // the Hamming window makes wide blurs look a little sharper: measured 0.0011 at 1.5 px, 0.0034 at 3 px
    expect(worstError(edge, 95, sigmaPx)).toBeLessThan(sigmaPx < 2 ? 0.002 : 0.005);
    // 10 to 90 % of a Gaussian is 2.563 sigma; the pixel adds its own 1/12 px^2 to the variance
    const width = 2.563 * Math.sqrt(sigmaPx ** 2 + 1 / 12);
    expect(Math.abs(edge.edgeWidthPx! - width)).toBeLessThan(0.06);
    expect([edge.dark, edge.bright]).toEqual([expect.closeTo(0.2, 4), expect.closeTo(0.8, 4)]);
    expect(edge.noise).toBeLessThan(1e-4);
  });

  it('says where the edge lies', () => {
    const edge = measured({ normalDeg: 184, at: [41.7, 38.2] });
    const angle = (184 * Math.PI) / 180;
    const off = ([x, y]: readonly [number, number]) =>
      (x - 41.7) * Math.cos(angle) + (y - 38.2) * Math.sin(angle);
    for (const point of [[edge.x, edge.y], edge.from, edge.to] as const)
      expect(Math.abs(off(point as [number, number]))).toBeLessThan(0.01);
    expect(edge.lengthPx).toBeCloseTo(70, 0);
  });

  it('finds the edge when the guess is 15 pixels and 4 degrees off', () => {
    const sharp = measured({ normalDeg: 6, width: 120, at: [60, 39] }, { x: 60, y: 39 });
    const far = measured({ normalDeg: 6, width: 120, at: [60, 39] }, { x: 75, y: 39, normalDeg: 10 });
    for (const f of FREQUENCIES) expect(Math.abs(far.sfr(f) - sharp.sfr(f))).toBeLessThan(0.002);
  });

  it('follows an edge that distortion bends', () => {
    const bend = (y: number) => 0.0006 * (y - 39.5) ** 2; // 0.7 px over 70
    const samples = new Float32Array(80 * 80);
    for (let y = 0; y < 80; y++) {
      const row = edgePicture({ normalDeg: 5, sigmaPx: 0.8, at: [39.8 + bend(y), 39.3], height: 80 });
      samples.set(row.samples.subarray(80 * y, 80 * (y + 1)), 80 * y);
    }
    const edge = measureEdge({ width: 80, height: 80, samples }, { ...MIDDLE, normalDeg: 5 });
    expect(worstError(edge, 5, 0.8)).toBeLessThan(0.004);
  });

  it('takes light that falls off across the edge for what it is', () => {
    const plane = edgePicture({ normalDeg: 5, sigmaPx: 1 });
    for (const slope of [0.001, -0.001]) {
      const samples = plane.samples.map((value, i) => value * (1 + slope * ((i % 80) - 39.5)));
      const edge = measureEdge({ ...plane, samples }, { ...MIDDLE, normalDeg: 5 });
      // without the correction 0.03: the fall-off over 60 px is 6 % of the light
      expect(worstError(edge, 5, 1)).toBeLessThan(0.003);
    }
  });

  it('takes light that falls off along the edge for no noise', () => {
    const plane = edgePicture({ normalDeg: 5, sigmaPx: 1 });
    const samples = plane.samples.map((value, i) => value * (1 + 0.001 * (Math.floor(i / 80) - 39.5)));
    const edge = measureEdge({ ...plane, samples }, { ...MIDDLE, normalDeg: 5 });
    expect(edge.noise).toBeLessThan(2e-4); // the fall-off over 70 px is 7 % of the light
    expect(worstError(edge, 5, 1)).toBeLessThan(0.003);
  });

  it('keeps to the response in noise', () => {
    const errors = [1, 2, 3, 4].map((seed) => {
      const plane = withNoise(edgePicture({ normalDeg: 5, sigmaPx: 1 }), 0.008, seed);
      const edge = measureEdge(plane, { ...MIDDLE, normalDeg: 5 });
      expect(edge.noise).toBeCloseTo(0.008, 3);
      return worstError(edge, 5, 1);
    });
    // SNR 100 at the bright side; these and other seeds give 0.008 to 0.024
    expect(Math.max(...errors)).toBeLessThan(0.03);
  });

  it('makes do with less width near the border of the picture', () => {
    const [near, middle] = [22, 39.5].map((x) =>
      measureEdge(edgePicture({ normalDeg: 5, at: [x, 39.5], sigmaPx: 0.7 }), {
        ...MIDDLE,
        x,
        normalDeg: 5,
        lengthPx: 50,
      }),
    );
    for (const f of FREQUENCIES) expect(Math.abs(near.sfr(f) - middle.sfr(f))).toBeLessThan(0.003);
  });

  it('uses no pixel outside of its bounds', () => {
    const plane = edgePicture({ normalDeg: 5, sigmaPx: 0.5 });
    const bounds = { x: 15, y: 10, width: 50, height: 60 };
    const guess = { ...MIDDLE, normalDeg: 5, lengthPx: 50, halfWidthPx: 20 };
    const spoilt = plane.samples.map((value, i) => {
      const [x, y] = [i % 80, Math.floor(i / 80)];
      return x >= 15 && x < 65 && y >= 10 && y < 70 ? value : Number.NaN;
    });
    const [clean, other] = [plane, { ...plane, samples: spoilt }].map((picture) =>
      measureEdge(picture, guess, bounds),
    );
    expect(other.sfr(0.25)).toBe(clean.sfr(0.25));
    expect(other.edgeWidthPx).toBe(clean.edgeWidthPx);
  });
});

describe('refusals', () => {
  const flat = (value: number): Plane => ({
    width: 80,
    height: 80,
    samples: new Float32Array(6400).fill(value),
  });
  const check = (plane: Plane, guess: Partial<EdgeGuess>, message: RegExp) => {
    const run = () => measureEdge(plane, { ...MIDDLE, normalDeg: 5, ...guess });
    expect(run).toThrow(InputError);
    expect(run).toThrow(message);
  };

  it('refuses an edge that is too short', () => {
    check(
      edgePicture({ normalDeg: 5 }),
      { lengthPx: 15 },
      /the edge is too short, found 15.0 px. Allowed: from 20 px up/,
    );
  });

  it('refuses an edge without room', () => {
    check(
      edgePicture({ normalDeg: 5 }),
      { halfWidthPx: 5 },
      /too little room beside it, found 5.0 px. Allowed: from 8 px up/,
    );
  });

  it('refuses an edge at the border of the picture', () => {
    check(
      edgePicture({ normalDeg: 5, at: [10, 39.5] }),
      { x: 10 },
      /too little room beside it, found 7.\d px/,
    );
  });

  it('refuses an edge that is too straight', () => {
    const plane = edgePicture({ normalDeg: 1 });
    check(
      plane,
      { normalDeg: 0 },
      /the edge is too straight, found 1.00 degrees against the pixels. Allowed: from 1.5 degrees up. Turn/,
    );
  });

  it('refuses an edge whose pixels repeat: at 45 degrees, or too short for its angle', () => {
    check(
      edgePicture({ normalDeg: 44.9 }),
      { normalDeg: 45 },
      /the edge is too steep, found at 44.\d+ degrees over 70 px its pixels run 0.\d+ times/,
    );
    check(
      edgePicture({ normalDeg: 1.8 }),
      { lengthPx: 22, normalDeg: 2 },
      /too short for its angle, found at 1.\d+ degrees over 22 px/,
    );
  });

  it('refuses an edge that is clipped', () => {
    check(
      edgePicture({ normalDeg: 5, bright: 1 }),
      {},
      /the edge is clipped at black or white, found \d+ % of its pixels. Allowed: up to 1 %/,
    );
    check(edgePicture({ normalDeg: 5, dark: 0 }), {}, /the edge is clipped at black or white/);
  });

  it('refuses an edge that is too noisy', () => {
    check(
      withNoise(edgePicture({ normalDeg: 5, sigmaPx: 1 }), 0.08, 1),
      {},
      /too noisy, found a step of \d\.\d times the noise. Allowed: from 10 times up/,
    );
  });

  it('refuses a picture without an edge', () => {
    check(flat(0.5), {}, /shows no edge/);
    check(withNoise(flat(0.5), 0.02, 2), {}, /shows no edge/);
    check(
      edgePicture({ normalDeg: 5, dark: 0.5, bright: 0.53 }),
      {},
      /shows no edge, found a modulation of 0.029. Allowed: from 0.05 up/,
    );
  });

  it('refuses a corner', () => {
    const one = edgePicture({ normalDeg: 5 });
    const other = edgePicture({ normalDeg: 95 });
    const samples = one.samples.map((value, i) => Math.min(value, other.samples[i]));
    check({ ...one, samples }, {}, /shows no (single smooth )?edge/);
  });
});
