import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  DistortionMap,
  distortionMap,
  distortionPercent,
  distortionWaves,
} from '../../src/optics/distortion.js';
import { sampleRig } from './samples.js';

describe('DistortionMap', () => {
  it('has an exact inverse up to the fold', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.9, max: 1.1, noNaN: true }),
        fc.double({ min: -0.02, max: 0.02, noNaN: true }),
        fc.double({ min: 0, max: 0.999, noNaN: true }),
        (a, c, share) => {
          const map = new DistortionMap(a, c);
          const distorted = share * Math.min(map.foldMm, 10);
          // near the fold the inverse is as steep as (1 - share)^(-1/2), 30 at most, and so is its rounding
          expect(Math.abs(map.distorted(map.ideal(distorted)) - distorted)).toBeLessThan(1e-13 * 30 * 10);
        },
      ),
      { numRuns: 200, seed: 1 },
    );
  });

  it('and takes the rising branch: the inverse of what was distorted is the point itself', () => {
    for (const c of [-0.01, -1e-9, 0, 1e-9, 0.01]) {
      const map = new DistortionMap(1.001, c);
      for (const ideal of [0, 0.1, 2, 5.7]) {
        expect(Math.abs(map.ideal(map.distorted(ideal)) - ideal)).toBeLessThan(1e-12 * 5.7);
      }
    }
  });

  it('keeps its digits for the smallest distortions', () => {
    // r = r' - c r'^3 + 3 c^2 r'^5 to first orders
    const map = new DistortionMap(1, 1e-12);
    expect(Math.abs(map.ideal(5) - (5 - 125e-12))).toBeLessThan(5e-15);
    expect(Math.abs(new DistortionMap(1, -1e-12).ideal(5) - (5 + 125e-12))).toBeLessThan(5e-15);
  });

  it('does nothing for a cubic term too small to be told from 0', () => {
    expect(new DistortionMap(0.9, 5e-324).ideal(4.5)).toBe(5); // once came out as NaN
  });

  it('folds where its slope ends: barrel only', () => {
    const barrel = new DistortionMap(1, -1 / 300); // dr'/dr = 1 - r^2/100
    expect(barrel.foldMm).toBeCloseTo(barrel.distorted(10), 12);
    expect(barrel.ideal(barrel.foldMm * (1 - 1e-12))).toBeCloseTo(10, 4);
    expect(barrel.ideal(barrel.foldMm * 1.001)).toBeNaN();
    expect(new DistortionMap(1, 0.01).foldMm).toBe(Number.POSITIVE_INFINITY);
    expect(new DistortionMap(-1, 0.01).foldMm).toBe(0); // a scale so wrong that the picture turns inside out
  });

  it('knows when it does nothing', () => {
    expect(new DistortionMap(1, 0).isIdentity).toBe(true);
    expect(new DistortionMap(1, 1e-9).isIdentity).toBe(false);
    expect(new DistortionMap(1.001, 0).isIdentity).toBe(false);
  });
});

describe('distortionMap', () => {
  it('is r - 2 N0 lambda (W311 h^3 + W111 h) + lateral colour, whatever the stop', () => {
    const band = { name: 'blue', lines: [{ nm: 450, weight: 1 }] };
    const { lens } = sampleRig({ waves: { W311: 6, W111: 2, W040: 9 }, lens: { lateralUm: [[450, 1.4]] } });
    const h = 0.7;
    const expected = 4 * h - 2 * 4 * 0.00055 * (6 * h ** 3 + 2 * h) + 0.0014 * h;
    expect(distortionMap(lens, band).distorted(4 * h)).toBeCloseTo(expected, 14);
    // without a band: at the lens's own wavelength
    expect(distortionMap(lens).distorted(4 * h)).toBeCloseTo(expected - 0.0014 * h, 14);
  });

  it('is barrel for W311 > 0 and pincushion for W311 < 0', () => {
    expect(distortionMap(sampleRig({ waves: { W311: 6 } }).lens).distorted(3)).toBeLessThan(3);
    expect(distortionMap(sampleRig({ waves: { W311: -6 } }).lens).distorted(3)).toBeGreaterThan(3);
    expect(distortionPercent(sampleRig({ waves: { W311: 6 } }).lens, 1)).toBeLessThan(0);
  });

  it('has the percentage 100 (r - r0) / r0, from which W311 comes back', () => {
    const { lens } = sampleRig({ waves: { W311: 6 } });
    for (const h of [0.3, 1, 1.2]) {
      const r = 4 * h;
      const map = distortionMap(lens);
      expect(distortionPercent(lens, h)).toBeCloseTo((100 * (map.distorted(r) - r)) / r, 12);
    }
    expect(distortionWaves(distortionPercent(lens, 1), 4, 550, 4)).toBeCloseTo(6, 12);
  });
});
