import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import { energyOutside, extentSteps, kernelSide } from '../../src/imaging/kernel-size.js';
import { kernelSampling } from '../../src/imaging/kernel-source.js';
import { bandLines } from '../../src/optics/otf.js';
import { energyBySquareRing } from '../../src/optics/psf.js';
import type { Rig } from '../../src/optics/rig.js';
import { samplesPerPixel } from '../../src/optics/sampling.js';
import { sampleRig } from '../optics/samples.js';
import { exactPixels } from '../support/exact-psf.js';
import { BUSY_MS } from '../support/form.js';

vi.setConfig({ testTimeout: BUSY_MS });

const WAVES = { W040: 0.5, W131: 1.5, W222: 1, W220: -0.7 };
const PIXELS = [400, 300] as const;

function rigOf(pixelPitchUm: number, fNumber: number, nm: number): Rig {
  return sampleRig({
    waves: WAVES,
    lens: { fNumber, fullFieldMm: 0.25 * pixelPitchUm, wavelengthNm: nm },
    camera: { pixels: PIXELS, pixelPitchUm, bands: [{ name: 'mono', lines: [{ nm, weight: 1 }] }] },
  });
}

/** Share of the light outside a square about the image point of (0, 0), by quadrature. */
function exactOutside(rig: Rig, sideUm: number): number {
  const { axisPx } = rig.mount;
  const mm = rig.camera.pixelPitchUm / 1000;
  const lines = bandLines(rig, -axisPx[0] * mm, -axisPx[1] * mm, rig.camera.bands[0]);
  return 1 - exactPixels(lines, rig.mount.fNumber, sideUm, [0], [0])[0][0];
}

const RIGS: [number, number, number][] = [
  [3.45, 2.8, 550],
  [5.5, 4, 850],
  [2.4, 8, 460],
];

describe('extentSteps', () => {
  it.each(RIGS)('at %f um, f/%f, %i nm is the square that holds the light', (pitchUm, fNumber, nm) => {
    const rig = rigOf(pitchUm, fNumber, nm);
    const stepUm = pitchUm / samplesPerPixel(pitchUm, nm, fNumber);
    for (const tolerance of [0.05, 0.01]) {
      const radius = extentSteps(energyBySquareRing, rig, rig.camera.bands[0], 1, 0, 0, tolerance);
      // what the soft rim keeps from the far tails counts as outside, so the square comes out up to 10 % too large, never too small
      expect(exactOutside(rig, (2 * radius + 1) * stepUm)).toBeLessThan(tolerance);
      expect(exactOutside(rig, (2 * Math.floor(0.9 * radius) - 1) * stepUm)).toBeGreaterThan(tolerance);
    }
  });
});

describe('energyOutside', () => {
  it.each(RIGS)('at %f um, f/%f, %i nm is what falls outside the kernel', (pitchUm, fNumber, nm) => {
    const rig = rigOf(pitchUm, fNumber, nm);
    for (const kernelPx of [21, 41]) {
      const found = energyOutside(energyBySquareRing, rig, rig.camera.bands[0], 1, 0, 0, kernelPx, 0.01);
      const exact = exactOutside(rig, kernelPx * pitchUm);
      // up to 0.26 / diameter of the light, which the soft rim takes out of the tails: 0.1 %
      expect(found).toBeGreaterThan(exact - 2e-4);
      expect(found).toBeLessThan(exact + 1.2e-3);
    }
  });

  it('never contradicts the choice of the kernel', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...RIGS, [10, 16, 1000] as [number, number, number]),
        fc.double({ min: 0.004, max: 0.1, noNaN: true }),
        fc.constantFrom(1, 2),
        ([pitchUm, fNumber, nm], tolerance, oversample) => {
          const rig = rigOf(pitchUm, fNumber, nm);
          const band = rig.camera.bands[0];
          const extent = extentSteps(energyBySquareRing, rig, band, oversample, 0, 0, tolerance);
          const side = kernelSide(rig, oversample, extent);
          const outside = energyOutside(energyBySquareRing, rig, band, oversample, 0, 0, side, tolerance);
          // at 10 um, f/16 it once did: the two were seen in different windows
          expect(outside).toBeLessThanOrEqual(tolerance);
        },
      ),
      { numRuns: 5, seed: 1 },
    );
  });
});

describe('kernelSide', () => {
  it('is odd for odd oversampling and even for even, so that samples lie on the middles of pixels', () => {
    for (const oversample of [1, 2, 3, 4]) {
      for (const extent of [0, 3, 20, 57, 100]) {
        const side = kernelSide(rigOf(3.45, 2.8, 550), oversample, extent);
        expect(side % 2).toBe(oversample % 2);
        expect(side).toBeGreaterThanOrEqual(15);
        const fine = samplesPerPixel(3.45 / oversample, 550, 2.8);
        expect(side * fine).toBeGreaterThanOrEqual(2 * extent + 1);
      }
    }
  });

  it('ends at 1023 samples, and where the largest pupil grid ends', () => {
    expect(kernelSide(rigOf(1.4, 16, 550), 1, 100_000)).toBe(1023);
    expect(kernelSide(rigOf(1.4, 16, 550), 2, 100_000)).toBe(1022);
    const rig = rigOf(10, 1.4, 400); // 36 fine samples a pixel
    const side = kernelSide(rig, 1, 100_000);
    expect(side % 2).toBe(1);
    expect(side * 36).toBeLessThan(4096);
    expect((side + 2) * 36).toBeGreaterThan(4096 - 2 * 36);
    expect(kernelSampling(rig, 1, side).kernelPx).toBe(side);
  });
});
