import { describe, expect, it } from 'vitest';
import { relativeIllumination } from '../../src/optics/illumination.js';
import { sampleRig } from './samples.js';

const { lens } = sampleRig(); // f = 12 mm, h = 1 at 4 mm

describe('relativeIllumination', () => {
  it.each([
    // Source: Born and Wolf, Principles of Optics, 4.8.3 (from memory): cos^4 of the angle in the field, distant exit pupil
    [10, 0.94060187],
    [20, 0.77972824],
    [30, 0.5625],
    [40, 0.34436251],
  ])('by cos^4 at %i degrees is %f', (degrees, expected) => {
    const radiusMm = 12 * Math.tan((degrees * Math.PI) / 180);
    // the figures are given to 8 decimals
    expect(Math.abs(relativeIllumination(lens)(radiusMm) - expected)).toBeLessThan(0.5e-8);
  });

  it('none is 1 everywhere', () => {
    const none = relativeIllumination({ ...lens, relativeIllumination: 'none' });
    expect([none(0), none(9)]).toEqual([1, 1]);
  });

  it('from a table goes through its points by h, and is flat outside', () => {
    const table = relativeIllumination({
      ...lens,
      relativeIllumination: [
        [0, 1],
        [0.5, 0.9],
        [1, 0.6],
      ],
    });
    expect([0, 2, 4, 7].map(table)).toEqual([1, 0.9, 0.6, 0.6]);
    expect(table(3)).toBeLessThan(0.9);
    expect(table(3)).toBeGreaterThan(0.6);
  });
});
