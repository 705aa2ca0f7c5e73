import { describe, expect, it } from 'vitest';
import { edgeWidthUm } from '../../src/optics/edge-width.js';
import { bandLines, type Direction } from '../../src/optics/otf.js';
import { KernelMaker } from '../../src/optics/psf.js';
import type { Rig } from '../../src/optics/rig.js';
import { taskRig } from '../tasks/rigs.js';

function width(rig: Rig, h: number, direction: Direction, accuracy: 'full' | 'rough' = 'full'): number {
  const lines = bandLines(rig, h * rig.lens.fullFieldMm, 0, rig.camera.bands[0]);
  return edgeWidthUm(lines, rig.mount.fNumber, rig.camera, direction, accuracy);
}

/** The same from the samples of a PSF that an FFT makes, 10 a pixel, over 80 pixels: sums along the edge, running sum across it, and the two
 * places where it passes 10 and 90 %. */
function widthOfSamples(rig: Rig, h: number, isAcross: boolean): number {
  const fine = 10;
  const kernelPx = 801;
  const { pixelPitchUm, fillFactor, bands } = rig.camera;
  const maker = new KernelMaker({
    fNumber: rig.mount.fNumber,
    pitchUm: pixelPitchUm / fine,
    boxUm: pixelPitchUm * fillFactor,
    shortestNm: Math.min(...bands[0].lines.map(({ nm }) => nm)),
    kernelPx,
  });
  const kernel = new Float64Array(kernelPx * kernelPx);
  maker.bandKernel(bandLines(rig, h * rig.lens.fullFieldMm, 0, bands[0]), kernel);
  const profile = new Float64Array(kernelPx);
  for (let row = 0; row < kernelPx; row++)
    for (let column = 0; column < kernelPx; column++)
      profile[isAcross ? row : column] += kernel[row * kernelPx + column];
  const levels: number[] = [];
  let sum = 0;
  for (let i = 0; i < kernelPx; i++) {
    const next = sum + profile[i];
    for (const level of [0.1, 0.9])
      if (sum < level && next >= level) levels.push(i + (level - sum) / (next - sum));
    sum = next;
  }
  return ((levels[1] - levels[0]) * pixelPitchUm) / fine;
}

describe('edgeWidthUm', () => {
  it('is 0.8 of the pixel where the lens blurs nothing', () => {
    // a box rises evenly; at f/0.05 the tails of diffraction add 0.2 %
    const rig = taskRig({ lens: { f_number: 0.05 } });
    expect(width(rig, 0, 'tangential') / 5).toBeCloseTo(0.8, 2);
    const half = taskRig({ lens: { f_number: 0.05 }, camera: { fill_factor: 0.5 } });
    expect(width(half, 0, 'tangential') / 5).toBeCloseTo(0.4, 2);
  });

  it('is that of a disc under strong defocus', () => {
    // A disc of radius R has the line spread of a semicircle, whose running sum is 1/2 + x sqrt(R^2 - x^2)/(pi R^2) + asin(x/R)/pi: 10 % at
    // 0.687 R. R = 4 N lambda W020 by eps = -2 N lambda grad W. Diffraction and pixel make the edge of the disc soft: 2 %.
    const rig = taskRig({ waves: { W020: 12 } });
    const radiusUm = 4 * 4 * 0.55 * 12;
    expect(Math.abs(width(rig, 0, 'tangential') / (2 * 0.687 * radiusUm) - 1)).toBeLessThan(0.02);
  });

  it.each([
    ['diffraction alone', {}, 0],
    ['spherical aberration', { W040: 1 }, 0],
    ['coma, astigmatism and field curvature', { W131: 1.5, W222: 1, W220: -0.5 }, 1],
  ])('agrees with the samples of a PSF: %s', (_, waves, h) => {
    const rig = taskRig({ waves });
    // The FFT folds the tails past its window back, and the samples' kernel cuts them: 0.8 % measured
    for (const isAcross of [false, true]) {
      const expected = widthOfSamples(rig, h, isAcross);
      expect(Math.abs(width(rig, h, isAcross ? 'sagittal' : 'tangential') / expected - 1)).toBeLessThan(0.01);
    }
  });

  it('adds up the lines of a band, lateral colour among them', () => {
    const spread = { lens: { colour: { lateral_um: { 500: 20, 600: -20 } } } };
    const rig = taskRig({ ...spread, camera: { bands_nm: { mono: [500, 600] } } });
    // two edges 40 um apart: 10 % and 90 % are each passed in the middle of one of them, off by its own shape
    expect(Math.abs(width(rig, 1, 'tangential') - widthOfSamples(rig, 1, false))).toBeLessThan(0.2);
    expect(width(rig, 1, 'tangential')).toBeGreaterThan(35);
    expect(width(rig, 1, 'sagittal')).toBeLessThan(10);
  });

  it('does not care where the edge lies, nor which way it rises', () => {
    const rig = taskRig({ waves: { W131: 1.5, W222: 1 } });
    expect(width(rig, 1, 0)).toBeCloseTo(width(rig, 1, 'tangential'), 9);
    // -180 degrees: the same edge rising the other way; rounding and the root's tolerance only
    expect(width(rig, 1, 180)).toBeCloseTo(width(rig, 1, 0), 2);
    expect(width(rig, 1, 40)).toBeCloseTo(width(rig, 1, -40), 2);
  });

  it('is right to 1 % when it is only to be rough', () => {
    for (const waves of [{}, { W040: 2 }, { W131: 4, W222: 3 }, { W131: 1, W220: 5 }])
      for (const direction of [0, 45, 90]) {
        const rig = taskRig({ waves });
        expect(Math.abs(width(rig, 1, direction, 'rough') / width(rig, 1, direction) - 1)).toBeLessThan(
          0.012,
        );
      }
  });
});
