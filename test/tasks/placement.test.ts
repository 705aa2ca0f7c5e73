import { describe, expect, it } from 'vitest';
import { distortionPercent } from '../../src/optics/distortion.js';
import { bandLines } from '../../src/optics/otf.js';
import { KernelMaker } from '../../src/optics/psf.js';
import { landingMm } from '../../src/tasks/landing.js';
import { placementAt } from '../../src/tasks/placement.js';
import { RadialModels } from '../../src/tasks/radial-model.js';
import type { UpperLimit } from '../../src/tasks/rules.js';
import { benchAt, COLOUR, type RigParts, taskRig } from './rigs.js';

const PIXELS: UpperLimit = { atMost: 1, unit: 'px', perPixel: 1 };
const placement = (parts: RigParts, h: number, modelOrder: number | null = null, limit = PIXELS) => {
  const [bench, place] = benchAt(parts, h);
  return placementAt(bench, place, { kind: 'placement', limit, modelOrder });
};

describe('placement, raw', () => {
  it('is the distortion', () => {
    const parts = { waves: { distortion_percent: -2 } };
    for (const h of [0, 0.5, 1]) {
      const percent = distortionPercent(taskRig(parts).lens, h);
      expect(placement(parts, h).value).toBeCloseTo(((Math.abs(percent) / 100) * h * 2) / 0.005, 9); // of 2 mm, in pixels of 5 um
    }
    const inMm = { atMost: 0.1, unit: 'mm', perPixel: 0.1 } as const;
    expect(placement(parts, 1, null, inMm).value).toBeCloseTo(0.8, 9); // 8 pixels of 0.1 mm
  });

  it('counts the shift of the centroid by coma, as the samples of the PSF show it', () => {
    const waves = { W131: 1.5 };
    const rig = taskRig({ waves });
    const kernelPx = 301;
    const maker = new KernelMaker({ fNumber: 4, pitchUm: 2.5, boxUm: 5, shortestNm: 550, kernelPx });
    const kernel = new Float64Array(kernelPx * kernelPx);
    maker.bandKernel(bandLines(rig, 2, 0, rig.camera.bands[0]), kernel);
    let centroid = 0;
    for (let i = 0; i < kernel.length; i++)
      centroid += kernel[i] * ((i % kernelPx) - (kernelPx - 1) / 2) * 2.5;
    // -2 N lambda W131 = -6.6 um, toward the axis. The tails past the window and the folded ones pull by some 2 %
    expect(Math.abs(centroid / -6.6 - 1)).toBeLessThan(0.03);
    expect(1000 * (landingMm(rig, rig.camera.bands[0])(2) - 2)).toBeCloseTo(-6.6, 9);
    expect(placement({ waves }, 1).value).toBeCloseTo(6.6 / 5, 9);
    expect(placement({ waves }, 0.5).value).toBeCloseTo(3.3 / 5, 9); // it grows with h
  });

  it("follows coma's shift down with the stop, as the cube of the pupil at the N of the sensor", () => {
    // W131 (N0/N)^3 at N: eps goes with (N0/N)^2
    expect(placement({ waves: { W131: 1.5 }, mount: { f_number: 8 } }, 1).value).toBeCloseTo(6.6 / 5 / 4, 9);
  });

  it('counts a change of scale and lateral colour, in the band that lies farthest off', () => {
    // eps = -2 N lambda W111 h
    expect(placement({ waves: { W111: 3 } }, 0.5).value).toBeCloseTo((2 * 4 * 0.55 * 3 * 0.5) / 5, 9);
    const colour = { camera: COLOUR, lens: { colour: { lateral_um: { 460: 4, 540: 1, 620: -7 } } } };
    expect(placement(colour, 1)).toMatchObject({ band: 'red', value: expect.closeTo(7 / 5, 9) });
  });
});

describe('placement after the best radial model', () => {
  const parts = { waves: { distortion_percent: -3, W131: 1, W111: 2 } };

  it('leaves nothing where there is nothing but a scale', () => {
    // coma's shift and W111 are proportional to the radius
    expect(placement({ waves: { W131: 1, W111: 2 } }, 1, 1).value).toBeLessThan(1e-9);
  });

  it('leaves less the higher its order', () => {
    const left = [1, 3, 5, 7].map((order) => placement(parts, 1, order).value);
    for (const [i, value] of left.entries())
      expect(value).toBeLessThan(0.5 * (left[i - 1] ?? placement(parts, 1).value));
  });

  it.each([1, 3, 5])(
    'is the best of order %d over the frame: the error is at right angles to each of its terms',
    (order) => {
      const rig = taskRig(parts);
      const model = new RadialModels(rig).ofOrder(order);
      const landing = landingMm(rig, rig.camera.bands[0]);
      let error2 = 0;
      for (let power = 1; power <= order; power += 2) {
        let product = 0;
        let square = 0;
        for (let y = 0; y < 480; y += 4)
          for (let x = 0; x < 640; x += 4) {
            const r = 0.005 * Math.hypot(x + 1.5 - 319.5, y + 1.5 - 239.5); // middles of 4 x 4 pixels, which fill the frame
            const landed = landing(r);
            const error = model(landed) - r;
            product += error * landed ** power;
            square += landed ** (2 * power);
            error2 += error * error;
          }
        // cosine of the angle between error and term; the sum over 4 x 4 pixels is off by 1e-5 of the integral
        expect(Math.abs(product) / Math.sqrt(square * error2)).toBeLessThan(2e-3);
      }
    },
  );

  it('leaves lateral colour, since one model serves all bands', () => {
    const colour = { camera: COLOUR, lens: { colour: { lateral_um: { 460: 6, 540: 0, 620: -6 } } } };
    // The mean of the bands is 0 off, so blue and red stay 6 um off, 1.2 pixels. That the spread lies in the radius from which the model
    // starts makes it lean by some 15 x (6 um / 2 mm)^2 of the radius, 0.03 pixels.
    expect(Math.abs(placement(colour, 1, 3).value - 6 / 5)).toBeLessThan(0.05);
  });
});
