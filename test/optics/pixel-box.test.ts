import { describe, expect, it } from 'vitest';
import { pixelBox } from '../../src/optics/pixel-box.js';

/** Transform of the taps at a frequency in cycles a sample; the taps are symmetric, so it is real. */
function response(widthSamples: number, halfSampleOff: boolean, cyclesPerSample: number): number {
  const { taps, first } = pixelBox(widthSamples, halfSampleOff);
  return taps.reduce((sum, tap, i) => sum + tap * Math.cos(2 * Math.PI * cyclesPerSample * (first + i)), 0);
}

const sinc = (x: number) => (x === 0 ? 1 : Math.sin(Math.PI * x) / (Math.PI * x));

const BOXES: [number, boolean][] = [0.3, 1, 2, 2.7, 5, 36].flatMap((width): [number, boolean][] => [
  [width, false],
  [width, true],
]);

describe('pixelBox', () => {
  it.each(BOXES)(
    'of %f samples, half-way between samples: %s, has unit sum and is symmetric',
    (width, isOff) => {
      const { taps, first } = pixelBox(width, isOff);
      expect(taps.reduce((sum, tap) => sum + tap, 0)).toBeCloseTo(1, 14);
      expect(first + taps.length - 1).toBe(-first);
      expect(Math.abs(first % 1)).toBe(isOff ? 0.5 : 0);
      for (let i = 0; i < taps.length; i++) expect(taps[i]).toBeCloseTo(taps[taps.length - 1 - i], 14);
    },
  );

  it.each(BOXES)(
    'of %f samples, half-way between samples: %s, is the sinc of the box up to near the cut-off',
    (width, isOff) => {
      // The intensity reaches 0.5 cycles a sample, where the OTF is 0. A Kaiser window of beta 6 over +-8 samples leaves ripples of 2e-3
      // and an edge 0.12 cycles wide to each side of the cut-off: what lies below must be right, and what lies in it
      // counts by the most that an OTF can be there
      for (let f = 0; f < 0.5; f += 0.01) {
        const s = 2 * f;
        const mtf = (2 / Math.PI) * (Math.acos(s) - s * Math.sqrt(1 - s * s)); // diffraction limit (Goodman 6.3, from memory)
        const error = Math.abs(response(width, isOff, f) - sinc(width * f));
        if (f < 0.38) expect(error).toBeLessThan(2e-3); // 1.6e-3 measured
        expect(error * mtf).toBeLessThan(0.012); // 0.010 measured, half-way between samples, where a filter must fall to 0 at 0.5
      }
    },
  );

  it.each([1, 4, 36])('of %i samples integrates any wave of the intensity at any phase', (width) => {
    for (const isOff of [false, true]) {
      const { taps, first } = pixelBox(width, isOff);
      for (const f of [0.05, 0.21, 0.33]) {
        for (const phase of [0, 1, 2]) {
          const sum = taps.reduce(
            (total, tap, i) => total + tap * Math.cos(2 * Math.PI * f * (first + i) + phase),
            0,
          );
          // the mean of the wave over the box is its middle times sinc
          expect(Math.abs(sum - sinc(width * f) * Math.cos(phase))).toBeLessThan(1.5e-3);
        }
      }
    }
  });
});
