import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Waves } from '../../src/optics/rig.js';
import {
  defocusWaves,
  opticalPathWaves,
  slopeBound,
  tiltShiftUm,
  wavefrontAt,
  wavefrontRmsWaves,
} from '../../src/optics/wavefront.js';
import { sampleRig, wavefront } from './samples.js';

const WAVES: Waves = { W040: 0.8, W131: 1.1, W222: 0.9, W220: 0.6, W311: 6, W020: 0.3, W111: 2 };

const coefficient = fc.double({ min: -5, max: 5, noNaN: true });
const anyWavefront = fc
  .record({
    w40: coefficient,
    w31: coefficient,
    w22: coefficient,
    w20: coefficient,
    w11: coefficient,
    angle: fc.double({ min: 0, max: 6.3, noNaN: true }),
  })
  .map(({ angle, ...terms }) => wavefront({ ...terms, cos: Math.cos(angle), sin: Math.sin(angle) }));

/** What rounding leaves of sums of a few terms of size 10. */
const ROUNDING = 1e-12;

describe('wavefrontAt', () => {
  it('states the terms as the rig does at h = 1, its own stop and wavelength; W311 and W111 are left to the warp', () => {
    const { w40, w31, w22, w20, w11, cos, sin } = wavefrontAt(sampleRig({ waves: WAVES }), 0, -4, 550);
    expect([w40, w31, w22, w11]).toEqual([0.8, 1.1, 0.9, 0].map((value) => expect.closeTo(value, 12)));
    expect(w20).toBeCloseTo(0.6 + 0.3, 12);
    expect([cos, sin]).toEqual([0, -1]);
  });

  it('grows with the field as h^0, h^1, h^2, h^2', () => {
    const { w40, w31, w22, w20 } = wavefrontAt(sampleRig({ waves: WAVES }), -1.2, 1.6, 550); // h = 0.5
    expect(w40).toBeCloseTo(0.8, 12);
    expect(w31).toBeCloseTo(1.1 / 2, 12);
    expect(w22).toBeCloseTo(0.9 / 4, 12);
    expect(w20).toBeCloseTo(0.6 / 4 + 0.3, 12);
  });

  it('keeps the optical path at another wavelength', () => {
    const rig = sampleRig({ waves: WAVES });
    const here = wavefrontAt(rig, 3, 1, 550);
    const there = wavefrontAt(rig, 3, 1, 440);
    for (const term of ['w40', 'w31', 'w22', 'w20'] as const) {
      expect(there[term] * 440).toBeCloseTo(here[term] * 550, 9);
    }
  });

  it('keeps the path at every place of the pupil when the stop closes', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 4, max: 22, noNaN: true }),
        fc.double({ min: -1, max: 1, noNaN: true }),
        fc.double({ min: -1, max: 1, noNaN: true }),
        fc.double({ min: -100, max: 100, noNaN: true }),
        (fNumber, m, s, sensorShiftUm) => {
          const open = wavefrontAt(sampleRig({ waves: WAVES, mount: { sensorShiftUm } }), 2, 2, 600);
          const closed = wavefrontAt(
            sampleRig({ waves: WAVES, mount: { fNumber, sensorShiftUm } }),
            2,
            2,
            600,
          );
          const q = 4 / fNumber; // the rim of the stop lies at q of the whole pupil
          const difference = opticalPathWaves(closed, m, s) - opticalPathWaves(open, q * m, q * s);
          expect(Math.abs(difference)).toBeLessThan(ROUNDING);
        },
      ),
      { numRuns: 50, seed: 1 },
    );
  });

  it('adds the defocus of a shifted sensor, + away from the lens, and takes off axial colour', () => {
    // delta / (8 N^2 lambda) = 10 / (8 * 16 * 0.5)
    const rig = sampleRig({ lens: { axialUm: [[500, 4]] }, mount: { sensorShiftUm: 10 } });
    expect(wavefrontAt(rig, 0, 0, 550).w20).toBeCloseTo(10 / (8 * 16 * 0.55), 12);
    // at 500 nm the focus lies 4 um farther from the lens, so the sensor stands only 6 um behind it
    expect(wavefrontAt(rig, 0, 0, 500).w20).toBeCloseTo(6 / (8 * 16 * 0.5), 12);
    expect(defocusWaves(10, 4, 0.5)).toBeCloseTo(10 / 64, 15);
  });

  it('lets defocus vary over a tilted sensor: about x brings +y away from the lens, about y brings +x nearer', () => {
    const aboutX = sampleRig({ mount: { sensorTiltDeg: [1, 0] } });
    const aboutY = sampleRig({ mount: { sensorTiltDeg: [0, 1] } });
    const slope = Math.tan(Math.PI / 180);
    expect(tiltShiftUm(aboutX, 1, 2)).toBeCloseTo(2000 * slope, 9);
    expect(tiltShiftUm(aboutY, 1, 2)).toBeCloseTo(-1000 * slope, 9);
    expect(wavefrontAt(aboutX, 1, 2, 550).w20).toBeCloseTo(defocusWaves(2000 * slope, 4, 0.55), 12);
    expect(wavefrontAt(aboutX, 0, -1, 550).w20).toBeLessThan(0);
    expect(wavefrontAt(aboutY, -1, 0, 550).w20).toBeGreaterThan(0);
  });

  it('keeps in the PSF what a line differs from its band in lateral colour', () => {
    const lines = [
      { nm: 500, weight: 0.25 },
      { nm: 600, weight: 0.75 },
    ];
    const band = { name: 'mono', lines };
    const lens = {
      lateralUm: [
        [500, 2],
        [600, -2],
      ] as const,
    };
    const rig = sampleRig({ lens, camera: { bands: [band] } });
    // mean -1 um at h = 1; at h = 0.5 the line of 500 nm lands 1.5 um outward of it, that of 600 nm 0.5 um inward
    const shiftUm = (nm: number) => -2 * 4 * (nm / 1000) * wavefrontAt(rig, 2, 0, nm, band).w11;
    expect(shiftUm(500)).toBeCloseTo(1.5, 12);
    expect(shiftUm(600)).toBeCloseTo(-0.5, 12);
    expect(wavefrontAt(rig, 2, 0, 500).w11).toBeCloseTo(0, 15); // alone, all of it is the warp's
  });

  it('takes coefficients traced at several wavelengths, blended between and held outside', () => {
    const at = (nm: number, W040: number) => ({ nm, waves: { ...WAVES, W040 } });
    const lens = { wavesByWavelength: [at(450, 1), at(550, 2), at(650, 4)] };
    const rig = sampleRig({ waves: { ...WAVES, W040: 2 }, lens });
    const pathAt = (nm: number) => (wavefrontAt(rig, 0, 0, nm).w40 * nm) / 550;
    [
      [400, 1],
      [450, 1],
      [500, 1.5],
      [550, 2],
      [625, 3.5],
      [700, 4],
    ].forEach(([nm, expected]) => {
      expect(pathAt(nm)).toBeCloseTo(expected, 12);
    });
  });

  it('points to +x on the axis, where the direction is free', () => {
    const { w31, w22, cos, sin } = wavefrontAt(sampleRig({ waves: WAVES }), 0, 0, 550);
    expect([w31, w22, cos, sin]).toEqual([0, 0, 1, 0]);
  });
});

describe('opticalPathWaves', () => {
  it('is the expansion in rho and theta', () => {
    fc.assert(
      fc.property(
        anyWavefront,
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.double({ min: 0, max: 7, noNaN: true }),
        (terms, rho, theta) => {
          const { w40, w31, w22, w20, w11 } = terms;
          const c = Math.cos(theta);
          // W. T. Welford, Aberrations of Optical Systems (1986), ch. 7 (from memory)
          const expected =
            w40 * rho ** 4 + w31 * rho ** 3 * c + w22 * (rho * c) ** 2 + w20 * rho ** 2 + w11 * rho * c;
          expect(Math.abs(opticalPathWaves(terms, rho * c, rho * Math.sin(theta)) - expected)).toBeLessThan(
            ROUNDING,
          );
        },
      ),
      { numRuns: 50, seed: 1 },
    );
  });
});

describe('slopeBound', () => {
  it('is never under the slope anywhere in the pupil', () => {
    fc.assert(
      fc.property(
        anyWavefront,
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.double({ min: 0, max: 7, noNaN: true }),
        (terms, rho, theta) => {
          const m = rho * Math.cos(theta);
          const s = rho * Math.sin(theta);
          const step = 1e-5;
          const along =
            (opticalPathWaves(terms, m + step, s) - opticalPathWaves(terms, m - step, s)) / (2 * step);
          const across =
            (opticalPathWaves(terms, m, s + step) - opticalPathWaves(terms, m, s - step)) / (2 * step);
          // the difference quotient is right to 1e-10 times the third derivative, here some 100
          expect(Math.hypot(along, across)).toBeLessThan(slopeBound(terms) + 1e-6);
        },
      ),
      { numRuns: 200, seed: 1 },
    );
  });
});

describe('wavefrontRmsWaves', () => {
  it('is the RMS over the pupil about the plane of best fit', () => {
    fc.assert(
      fc.property(anyWavefront, (terms) => {
        // a polar midpoint sum: exact in theta, right to 1e-4 in rho^2 with 200 rings of equal area
        let n = 0;
        let mean = 0;
        let square = 0;
        let tilt = 0;
        for (let ring = 0; ring < 200; ring++) {
          const rho = Math.sqrt((ring + 0.5) / 200);
          for (let spoke = 0; spoke < 16; spoke++) {
            const m = rho * Math.cos((spoke * Math.PI) / 8);
            const w = opticalPathWaves(terms, m, rho * Math.sin((spoke * Math.PI) / 8));
            n++;
            mean += w;
            square += w * w;
            tilt += w * m;
          }
        }
        const slope = (4 * tilt) / n; // <m^2> is 1/4
        const variance = square / n - (mean / n) ** 2 - slope ** 2 / 4;
        expect(Math.abs(wavefrontRmsWaves(terms) ** 2 - variance)).toBeLessThan(1e-4 * (square / n) + 1e-12);
      }),
      { numRuns: 30, seed: 1 },
    );
  });
});
