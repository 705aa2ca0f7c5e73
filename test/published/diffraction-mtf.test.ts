/** The MTF of a lens without aberrations, and what a pixel adds. */
import { describe, expect, it } from 'vitest';
import { bandMtf, diffractionMtf, normalisedFrequency, otf, pixelMtf } from '../../src/optics/otf.js';
import { line, sampleRig, wavefront } from '../optics/samples.js';

// Source: (2/pi)(acos s - s sqrt(1 - s^2)), H. H. Hopkins, Proc. R. Soc. A 231 (1955) 91; J. W. Goodman,
// Introduction to Fourier Optics, 6.3 (both cited from memory); the figures worked out in double precision
const MTF = [
  [0.05, 0.9363645585431667],
  [0.1, 0.8728885715695383],
  [0.2, 0.747060078104662],
  [0.3, 0.623837664781073],
  [0.4, 0.5046315754686909],
  [0.5, 0.39100221895577075],
  [0.6, 0.28475697986529414],
  [0.7, 0.1881204043741874],
  [0.8, 0.10408803866182784],
  [0.9, 0.037386073468498655],
] as const;

describe('diffraction-limited MTF', () => {
  it.each(MTF)('at %f of the cut-off: formula and quadrature', (s, mtf) => {
    expect(Math.abs(diffractionMtf(s) - mtf)).toBeLessThan(1e-12); // the same formula: rounding
    const out = new Float64Array(2);
    for (const direction of ['tangential', 'sagittal', 33] as const) {
      otf(wavefront(), s, direction, out);
      // 1e-9: the integral over p of sin^2 by a rule that is exact for it, the inner one by its power series
      expect(Math.hypot(out[0] - mtf, out[1])).toBeLessThan(1e-9);
    }
  });

  it('is 1 at frequency 0 and 0 from the cut-off on', () => {
    const out = new Float64Array(2);
    otf(wavefront({ w40: 2, w31: 1 }), 0, 'tangential', out);
    expect(out[0]).toBeCloseTo(1, 9);
    for (const s of [1, 1.0001, 5]) {
      expect(diffractionMtf(s)).toBe(0);
      otf(wavefront({ w40: 2 }), s, 'tangential', out);
      expect([...out]).toEqual([0, 0]);
    }
  });

  it.each([
    // Source: the cut-off 1/(lambda N), elementary; Goodman 6.3 (from memory)
    [550, 4, 454.5454545454545],
    [587.5618, 2.8, 607.8387960940571],
    [850, 8, 147.05882352941177],
  ])('cuts off %f nm at f/%f at %f lp/mm', (nm, fNumber, cutOff) => {
    expect(Math.abs(normalisedFrequency(cutOff, nm, fNumber) - 1)).toBeLessThan(1e-12);
    expect(bandMtf(line({}, nm), fNumber, cutOff * 1.000001, 'tangential')).toBe(0);
    expect(bandMtf(line({}, nm), fNumber, cutOff * 0.99, 'tangential')).toBeGreaterThan(0);
  });

  it('times a full pixel of 3.45 um at its Nyquist frequency', () => {
    // Source: arithmetic from the two formulas, 550 nm, f/4
    const { camera } = sampleRig();
    const nyquist = 144.92753623188406;
    const lens = bandMtf(line(), 4, nyquist, 'sagittal');
    expect(Math.abs(lens - 0.6010267362084223)).toBeLessThan(1e-9);
    expect(Math.abs(pixelMtf(camera, nyquist) - 2 / Math.PI)).toBeLessThan(1e-12);
    expect(Math.abs(lens * pixelMtf(camera, nyquist) - 0.38262550399183615)).toBeLessThan(1e-9);
  });
});
