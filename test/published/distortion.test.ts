/** Distortion by its definitions. */
import { describe, expect, it } from 'vitest';
import { distortionMap, distortionPercent, distortionWaves } from '../../src/optics/distortion.js';
import { sampleRig } from '../optics/samples.js';

/** f/4 at 550 nm, h = 1 at 8 mm. */
const lensOf = (W311: number) => sampleRig({ waves: { W311 }, lens: { fullFieldMm: 8 } }).lens;

describe('distortion', () => {
  it('is 100 (real - paraxial height) / paraxial height, negative for barrel', () => {
    // Source: ISO 9039; W. T. Welford, Aberrations of Optical Systems (from memory)
    for (const W311 of [10, -10]) {
      const lens = lensOf(W311);
      for (const h of [0.4, 1]) {
        const real = distortionMap(lens).distorted(8 * h);
        expect(Math.abs(distortionPercent(lens, h) - (100 * (real - 8 * h)) / (8 * h))).toBeLessThan(1e-9);
      }
    }
    // barrel draws the corners of a square in more than the middles of its sides
    const map = distortionMap(lensOf(10));
    expect(map.distorted(Math.SQRT2 * 4) / (Math.SQRT2 * 4)).toBeLessThan(map.distorted(4) / 4);
  });

  it('of third order is -2 N lambda W311 h^2 / h_max', () => {
    // Source: eps = -2 N lambda dW; confirmed to 15 digits by real chief rays of a small field. N 4, 0.55 um, W311 10, 8 mm
    expect(Math.abs(distortionPercent(lensOf(10), 1) - -0.55)).toBeLessThan(1e-9);
    expect(Math.abs(distortionPercent(lensOf(10), 0.5) - -0.55 / 4)).toBeLessThan(1e-9);
    expect(Math.abs(distortionWaves(-0.55, 4, 550, 8) - 10)).toBeLessThan(1e-9);
  });

  it.each([
    // Source: camera characterisation by the SMIA standard (from memory, unconfirmed): height of the picture's edge at the corner less that
    // at the middle, over that at the middle. The ratio to the corner's distortion, a^2 / (a^2 + b^2), is derived
    [4, 3, 0.64, -0.012892828],
    [3, 2, 0.692307692, -0.013931889],
    [16, 9, 0.759643917, -0.015266265],
  ])('bends the upper edge of a %i : %i picture as the television form says', (a, b, ratio, atTwoPercent) => {
    const television = (cornerPercent: number) => {
      const map = distortionMap(lensOf(distortionWaves(cornerPercent, 4, 550, 8)));
      // corner at h = 1: half the width 8 a / c, half the height 8 b / c
      const corner = Math.hypot(a, b);
      const halfHeight = (8 * b) / corner;
      const atCorner = map.distorted(8) * (b / corner);
      const atMiddle = map.distorted(halfHeight);
      return (atCorner - atMiddle) / atMiddle;
    };
    expect(Math.abs(television(-2) - atTwoPercent)).toBeLessThan(1e-9);
    // for small distortion: what is left is of the second order, 1e-4 of 1e-4
    expect(Math.abs(television(-1e-4) / -1e-6 - ratio)).toBeLessThan(2e-6);
  });
});
