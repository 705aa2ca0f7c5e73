import { describe, expect, it } from 'vitest';
import { psfSamples } from '../../src/imaging/psf-samples.js';
import { bandLines } from '../../src/optics/otf.js';
import { KernelMaker } from '../../src/optics/psf.js';
import { sampleRig } from '../optics/samples.js';

const POINTS = [
  { xMm: 0, yMm: 0 },
  { xMm: 2, yMm: -1 },
];

function sum(values: ArrayLike<number>): number {
  return Array.from(values).reduce((total, value) => total + value, 0);
}

describe('PSFs to look at', () => {
  const rig = sampleRig({ waves: { W040: 0.5, W131: 2, W222: 1 } });

  it('hold 97 percent of the light at least, all on one scale', () => {
    const { psfs, samples, sidePx, sideUm } = psfSamples(rig, POINTS);
    expect(samples % 2).toBe(1);
    expect(sideUm).toBeCloseTo(sidePx * 3.45, 9);
    for (const [psf] of psfs) {
      expect(psf.length).toBe(samples ** 2);
      expect(sum(psf)).toBeGreaterThanOrEqual(0.97);
      expect(sum(psf)).toBeLessThanOrEqual(1 + 1e-6); // float32 sums of numbers that add to 1
    }
  });

  it('are those of the float64 reference', () => {
    const { psfs, samples, sideUm } = psfSamples(rig, POINTS);
    const pitchUm = sideUm / samples;
    const maker = new KernelMaker({
      fNumber: 4,
      pitchUm,
      boxUm: pitchUm,
      shortestNm: 550,
      kernelPx: samples,
    });
    const exact = new Float64Array(samples ** 2);
    maker.bandKernel(bandLines(rig, 2, -1, rig.camera.bands[0]), exact);
    const inside = sum(psfs[1][0]);
    const peak = Math.max(...exact);
    for (let i = 0; i < exact.length; i++) {
      // the reference's sum is 1 within its own, smaller window; the rest is for another grid and float32: measured 6e-4 of the peak
      expect(Math.abs(psfs[1][0][i] / inside - exact[i]) / peak).toBeLessThan(2e-3);
    }
  });

  it('lie where lateral colour puts their bands', () => {
    const bands = [620, 550, 460].map((nm, i) => ({
      name: ['red', 'green', 'blue'][i],
      lines: [{ nm, weight: 1 }],
    }));
    const coloured = sampleRig({
      camera: { bands },
      lens: {
        lateralUm: [
          [460, 6],
          [550, 0],
          [620, -8],
        ],
      },
    });
    const { psfs, samples, sideUm } = psfSamples(coloured, [{ xMm: 4, yMm: 0 }]); // h = 1
    const peaks = psfs[0].map((psf) => {
      const at = psf.indexOf(Math.max(...psf));
      return [(at % samples) - (samples - 1) / 2, Math.floor(at / samples) - (samples - 1) / 2];
    });
    const step = sideUm / samples;
    for (const [i, um] of [-8, 0, 6].entries()) {
      expect(Math.abs(peaks[i][0] * step - um)).toBeLessThanOrEqual(step / 2 + 1e-9); // the nearest sample
      expect(peaks[i][1]).toBe(0);
    }
  });
});
