/** The intensity at the image point of a defocused lens, in the sampled PSFs. */
import { describe, expect, it } from 'vitest';
import { energyBySquareRing } from '../../src/optics/psf.js';
import { wavefront } from '../optics/samples.js';

const STEP_UM = 1;
const [NM, N] = [500, 4];

/** Intensity at the image point, as the share of all light that a step x step square of it would hold. */
const height = (w20: number) => energyBySquareRing(wavefront({ w20 }), 512, STEP_UM, NM, N)[0];

describe('intensity on the axis', () => {
  it('of a perfect lens is pi / (4 lambda^2 N^2) of all light', () => {
    // Source: Born and Wolf, Principles of Optics, 8.5.2 (from memory)
    expect(Math.abs(height(0) / ((Math.PI * STEP_UM ** 2) / (4 * 4)) - 1)).toBeLessThan(0.002);
  });

  it.each([
    // Source: sinc^2(W020); Born and Wolf, 8.8.2 (from memory), recomputed to 14 digits
    [0.1, 0.96753121],
    [0.25, 0.81056947],
    [0.5, 0.40528473],
    [0.75, 0.09006327],
    [1, 0],
    [1.5, 0.04503164],
    [2, 0],
  ])('at W020 = %f is %f of that', (w20, expected) => {
    for (const sign of [1, -1]) {
      expect(Math.abs(height(sign * w20) / height(0) - expected)).toBeLessThan(0.002); // a sampled pupil
    }
  });
});
