import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { bestFocusUm, mtf50LpPerMm } from '../../src/optics/focus.js';
import { bandLines, bandMtf, pixelMtf } from '../../src/optics/otf.js';
import type { WavefrontLine } from '../../src/optics/psf.js';
import { defocusWaves } from '../../src/optics/wavefront.js';
import { line, sampleRig, wavefront } from './samples.js';

const between = (low: number, high: number) =>
  fc.integer({ min: 0, max: 10000 }).map((step) => low + ((high - low) * step) / 10000);
const waves = (most: number) => between(-most, most);
const anyDirection = fc.constantFrom<'tangential' | 'sagittal'>('tangential', 'sagittal');

/** The lines with the sensor moved. */
function moved(lines: readonly WavefrontLine[], fNumber: number, shiftUm: number): WavefrontLine[] {
  return lines.map((one) => ({
    ...one,
    wavefront: {
      ...one.wavefront,
      w20: one.wavefront.w20 + defocusWaves(shiftUm, fNumber, one.nm / 1000),
    },
  }));
}

describe('bestFocusUm', () => {
  it('is where the sensor stands for a perfect lens', () => {
    for (const lpPerMm of [5, 60, 200, 400])
      expect(Math.abs(bestFocusUm(line(), 4, lpPerMm, 'tangential')!)).toBeLessThan(0.01);
  });

  it('undoes a sensor shift exactly', () => {
    // 0.01 um is what is promised; the larger depth of focus at f/16 asks for more digits of the MTF
    for (const fNumber of [1.4, 4, 16])
      for (const shiftUm of [-40, 3.7, 25]) {
        const lines = moved(line({ w40: 0.3, w31: 0.4 }), fNumber, shiftUm);
        const still = bestFocusUm(line({ w40: 0.3, w31: 0.4 }), fNumber, 30, 'tangential')!;
        expect(Math.abs(bestFocusUm(lines, fNumber, 30, 'tangential')! - (still - shiftUm))).toBeLessThan(
          0.01,
        );
      }
  });

  it('is null where no focus brings contrast: at and above the cut-off', () => {
    const cutOff = 1e6 / (550 * 4);
    expect(bestFocusUm(line({ w40: 1 }), 4, cutOff, 'sagittal')).toBeNull();
    expect(bestFocusUm(line({ w40: 1 }), 4, 0.98 * cutOff, 'sagittal')).not.toBeNull();
  });

  it('is the highest MTF over all focus positions, multiple maxima or not', () => {
    fc.assert(
      fc.property(
        fc.record({ w40: waves(4), w31: waves(4), w22: waves(4), w20: waves(4) }),
        between(10, 300),
        anyDirection,
        (terms, lpPerMm, direction) => {
          const lines = line(terms);
          const best = bestFocusUm(lines, 4, lpPerMm, direction)!;
          const mtf = bandMtf(moved(lines, 4, best), 4, lpPerMm, direction);
          for (let shiftUm = -2000; shiftUm <= 2000; shiftUm += 7) {
            const other = bandMtf(moved(lines, 4, shiftUm), 4, lpPerMm, direction);
            expect(other).toBeLessThan(mtf + 1e-6); // quadrature
          }
        },
      ),
      { numRuns: 25, seed: 7 },
    );
  });

  it('weighs the lines of a band against each other', () => {
    const rig = sampleRig({
      lens: {
        axialUm: [
          [450, 30],
          [650, -30],
        ],
      },
    });
    const band = {
      name: 'two',
      lines: [
        { nm: 450, weight: 0.5 },
        { nm: 650, weight: 0.5 },
      ],
    };
    const lines = bandLines(rig, 0, 0, band);
    const best = bestFocusUm(lines, 4, 40, 'tangential')!;
    const mtf = bandMtf(moved(lines, 4, best), 4, 40, 'tangential');
    for (let shiftUm = -60; shiftUm <= 60; shiftUm += 1)
      expect(bandMtf(moved(lines, 4, shiftUm), 4, 40, 'tangential')).toBeLessThan(mtf + 1e-7);
    // each line alone is sharp at its own focus
    expect(Math.abs(bestFocusUm([lines[0]], 4, 40, 'tangential')! - 30)).toBeLessThan(0.01);
    expect(Math.abs(bestFocusUm([lines[1]], 4, 40, 'tangential')! + 30)).toBeLessThan(0.01);
  });

  it('takes the twin nearer to the sensor', () => {
    // coma alone: the two halves of the pupil focus on either side, with the same contrast
    const lines = line({ w31: 4 });
    const up = bestFocusUm(moved(lines, 4, 5), 4, 100, 'tangential')!;
    const down = bestFocusUm(moved(lines, 4, -5), 4, 100, 'tangential')!;
    expect(Math.abs(up + down)).toBeLessThan(0.01);
    const twin = bandMtf(moved(lines, 4, 5 + up), 4, 100, 'tangential');
    expect(Math.abs(bandMtf(moved(lines, 4, -5 - up), 4, 100, 'tangential') - twin)).toBeLessThan(1e-6);
  });
});

describe('mtf50LpPerMm', () => {
  const camera = sampleRig().camera;

  it('of a perfect lens before tiny pixels is where the diffraction MTF is a half', () => {
    const tiny = { ...camera, pixelPitchUm: 0.001 };
    // acos s - s sqrt(1 - s^2) = pi/4 at s = 0.4039727532995 (solved by bisection)
    const expected = (0.4039727532995 * 1e6) / (550 * 4);
    expect(Math.abs(mtf50LpPerMm(line(), 4, tiny, 'tangential') / expected - 1)).toBeLessThan(1e-6);
  });

  it('of a sharp lens before large pixels is where sinc is a half', () => {
    const large = { ...camera, pixelPitchUm: 100 };
    // sinc x = 1/2 at x = 0.6033545644016 (solved by bisection); at f/1 the lens takes 0.3 % at that
    // frequency
    const expected = 0.6033545644016 / 0.1;
    expect(Math.abs(mtf50LpPerMm(line(), 1, large, 'sagittal') / expected - 1)).toBeLessThan(0.004);
  });

  it('is the first frequency with half of the contrast', () => {
    fc.assert(
      fc.property(
        fc.record({ w40: waves(3), w31: waves(3), w22: waves(3), w20: waves(3) }),
        between(1.4, 11),
        anyDirection,
        (terms, fNumber, direction) => {
          const lines = [
            { nm: 500, weight: 0.5, wavefront: wavefront(terms) },
            { nm: 600, weight: 0.5, wavefront: wavefront({ ...terms, w11: 0.4 }) },
          ];
          const both = (lpPerMm: number) =>
            bandMtf(lines, fNumber, lpPerMm, direction) * pixelMtf(camera, lpPerMm);
          const found = mtf50LpPerMm(lines, fNumber, camera, direction);
          expect(Math.abs(both(found) - 0.5)).toBeLessThan(1e-6);
          for (let part = 1; part < 100; part++) expect(both((found * part) / 100)).toBeGreaterThan(0.5);
        },
      ),
      { numRuns: 60, seed: 8 },
    );
  });
});
