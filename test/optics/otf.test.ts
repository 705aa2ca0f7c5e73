import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  bandDiffractionMtf,
  bandLines,
  bandMtf,
  bandOtf,
  type Direction,
  diffractionMtf,
  otf,
  pixelMtf,
} from '../../src/optics/otf.js';
import { KernelMaker, type WavefrontLine } from '../../src/optics/psf.js';
import type { LocalWavefront } from '../../src/optics/wavefront.js';
import { autocorrelation } from './brute-force.js';
import { line, sampleRig, wavefront } from './samples.js';

// integers, because fast-check's doubles are spread evenly over exponents: nearly all of them are next to
// nothing
const between = (low: number, high: number) =>
  fc.integer({ min: 0, max: 10000 }).map((step) => low + ((high - low) * step) / 10000);
const waves = (most: number) => between(-most, most);
const anyWavefront = (most: number) =>
  fc
    .record({ w40: waves(most), w31: waves(most), w22: waves(most), w20: waves(most), w11: waves(most) })
    .map((terms) => wavefront(terms));
const anyNu = between(0.005, 1.02);
const anyAngle = between(-180, 180);

function otfOf(terms: LocalWavefront, nu: number, direction: Direction): [number, number] {
  const out = new Float64Array(2);
  otf(terms, nu, direction, out);
  return [out[0], out[1]];
}

function mtfOf(terms: LocalWavefront, nu: number, direction: Direction): number {
  return Math.hypot(...otfOf(terms, nu, direction));
}

const degrees = (direction: Direction) =>
  direction === 'tangential' ? 0 : direction === 'sagittal' ? 90 : direction;

function apart(a: ArrayLike<number>, b: ArrayLike<number>): number {
  return Math.hypot(a[0] - b[0], a[1] - b[1]);
}

describe('otf against the autocorrelation of a sampled pupil', () => {
  // 0.003 is what the product promises; the sampled pupil itself is good to some 3e-4
  const limit = 0.003;

  it('at 5 waves of every term, with every sign', () => {
    for (let signs = 0; signs < 16; signs++) {
      const sign = (bit: number) => ((signs >> bit) & 1 ? -5 : 5);
      const strong = wavefront({ w40: sign(0), w31: sign(1), w22: sign(2), w20: sign(3), w11: 5 });
      const nu = 0.02 + 0.05 * signs;
      for (const direction of ['tangential', 'sagittal'] as const)
        expect(
          apart(otfOf(strong, nu, direction), autocorrelation(strong, nu, degrees(direction), 300)),
        ).toBeLessThan(limit);
    }
  });

  it('at any wavefront, frequency and direction', () => {
    fc.assert(
      fc.property(
        anyWavefront(3),
        anyNu,
        fc.oneof(fc.constantFrom<Direction>('tangential', 'sagittal'), anyAngle),
        (terms, nu, direction) => {
          expect(
            apart(otfOf(terms, nu, direction), autocorrelation(terms, nu, degrees(direction), 300)),
          ).toBeLessThan(limit);
        },
      ),
      { numRuns: 40, seed: 1 },
    );
  });

  it('at any field, stop, focus and mix of lines of a rig', () => {
    const anyBand = fc
      .array(fc.tuple(fc.integer({ min: 400, max: 1000 }), between(0.1, 1)), {
        minLength: 1,
        maxLength: 3,
      })
      .map((list) => {
        const total = list.reduce((sum, [, weight]) => sum + weight, 0);
        return { name: 'band', lines: list.map(([nm, weight]) => ({ nm, weight: weight / total })) };
      });
    fc.assert(
      fc.property(
        anyBand,
        fc.record({ W040: waves(2), W131: waves(2), W222: waves(2), W220: waves(2) }),
        between(0, 1),
        between(2, 8),
        between(-30, 30),
        between(2, 300),
        fc.boolean(),
        (band, terms, h, fNumber, sensorShiftUm, lpPerMm, isTangential) => {
          const rig = sampleRig({
            waves: terms,
            lens: {
              fNumber: 2,
              axialUm: [
                [400, 20],
                [1000, -15],
              ],
              lateralUm: [
                [400, 2],
                [1000, -1.5],
              ],
            },
            mount: { fNumber, sensorShiftUm },
          });
          const lines = bandLines(rig, 0, 4 * h, band);
          const out = new Float64Array(2);
          bandOtf(lines, fNumber, lpPerMm, isTangential ? 'tangential' : 'sagittal', out);
          let re = 0;
          let im = 0;
          for (const { nm, weight, wavefront } of lines) {
            const nu = lpPerMm * nm * 1e-6 * fNumber;
            const one = autocorrelation(wavefront, nu, isTangential ? 0 : 90, 300);
            re += weight * one[0];
            im += weight * one[1];
          }
          expect(apart([out[0], out[1]], [re, im])).toBeLessThan(limit);
        },
      ),
      { numRuns: 25, seed: 2 },
    );
  });
});

describe('laws of the OTF', () => {
  it('is good to 1e-3 at a first look', () => {
    fc.assert(
      fc.property(anyWavefront(12), anyNu, anyAngle, (terms, nu, angle) => {
        const full = otfOf(terms, nu, angle);
        const rough = new Float64Array(2);
        otf(terms, nu, angle, rough, 'rough');
        expect(apart(rough, full)).toBeLessThan(1.5e-3); // 1e-3 at worst of 1500 measured
      }),
      { numRuns: 200, seed: 10 },
    );
  });

  it('never passes the MTF of the same pupil without aberration', () => {
    fc.assert(
      fc.property(anyWavefront(20), anyNu, anyAngle, (terms, nu, angle) => {
        expect(mtfOf(terms, nu, angle)).toBeLessThan(diffractionMtf(nu) + 2e-7); // quadrature
      }),
    );
  });

  it('changes by a phase alone with tilt: W311 and W111 never change an MTF', () => {
    fc.assert(
      fc.property(anyWavefront(5), waves(20), anyNu, anyAngle, (terms, tilt, nu, angle) => {
        const before = otfOf(terms, nu, angle);
        const after = otfOf({ ...terms, w11: terms.w11 + tilt }, nu, angle);
        const turn = 4 * Math.PI * nu * tilt * Math.cos((angle * Math.PI) / 180);
        const turned = [
          before[0] * Math.cos(turn) - before[1] * Math.sin(turn),
          before[0] * Math.sin(turn) + before[1] * Math.cos(turn),
        ];
        expect(apart(after, turned)).toBeLessThan(1e-9); // tilt is a constant of the integrand: rounding
      }),
    );
  });

  it('is the conjugate in the opposite direction, and even across the radius', () => {
    fc.assert(
      fc.property(anyWavefront(5), anyNu, anyAngle, (terms, nu, angle) => {
        const [re, im] = otfOf(terms, nu, angle);
        expect(apart(otfOf(terms, nu, angle + 180), [re, -im])).toBeLessThan(1e-9);
        expect(apart(otfOf(terms, nu, -angle), [re, im])).toBeLessThan(1e-9); // W is even in s
      }),
    );
  });

  it('is the conjugate of the OTF of -W turned about: opposite even terms, same odd terms', () => {
    fc.assert(
      fc.property(anyWavefront(5), anyNu, anyAngle, (terms, nu, angle) => {
        // P*(-p) belongs to -W(-p), and has the same intensity
        const turned = { ...terms, w40: -terms.w40, w22: -terms.w22, w20: -terms.w20 };
        expect(apart(otfOf(terms, nu, angle), otfOf(turned, nu, angle))).toBeLessThan(2e-7); // quadrature
      }),
    );
  });

  it('takes the words for the angles 0 and 90', () => {
    const terms = wavefront({ w40: 0.4, w31: 0.8, w22: -0.5, w20: 0.3, w11: 0.2 });
    expect(apart(otfOf(terms, 0.2, 'tangential'), otfOf(terms, 0.2, 0))).toBeLessThan(1e-12);
    expect(apart(otfOf(terms, 0.2, 'sagittal'), otfOf(terms, 0.2, 90))).toBeLessThan(1e-9); // rounding
  });

  it('scales: the MTF of a rig depends on lp/mm x wavelength x f-number alone, waves being equal', () => {
    const terms = { w40: 0.5, w31: 0.7, w22: 0.3, w20: -0.4 };
    const reference = bandMtf(line(terms, 500), 4, 50, 'tangential');
    expect(bandMtf(line(terms, 1000), 4, 25, 'tangential')).toBeCloseTo(reference, 12);
    expect(bandMtf(line(terms, 500), 8, 25, 'tangential')).toBeCloseTo(reference, 12);
  });
});

describe('the phase of the OTF', () => {
  it('puts the centroid of the PSF at the mean of eps = -2 N lambda dW/dm', () => {
    // H(f) = 1 - i 2 pi f <x> + ..., and over the unit pupil <dW/dm> = w31 + w11
    const terms = wavefront({ w40: 0.3, w31: 0.4, w22: 0.5, w20: -0.2, w11: -0.15 });
    const [lambdaUm, fNumber, cyclesPerUm] = [0.55, 4, 1e-6];
    const [re, im] = otfOf(terms, cyclesPerUm * lambdaUm * fNumber, 'tangential');
    const centroidUm = -Math.atan2(im, re) / (2 * Math.PI * cyclesPerUm);
    expect(centroidUm).toBeCloseTo(-2 * fNumber * lambdaUm * (0.4 - 0.15), 4); // the next term in f: 7e-6
  });

  it('is that of the sampled PSF', () => {
    const rig = sampleRig();
    const terms = wavefront({ w40: 0.2, w31: 0.5, w22: 0.3, w20: -0.2, w11: 0.3, cos: 0.6, sin: -0.8 });
    const lines: WavefrontLine[] = [{ nm: 550, weight: 1, wavefront: terms }];
    const side = 121;
    const maker = new KernelMaker({ fNumber: 4, pitchUm: 1.1, boxUm: 1.1, shortestNm: 550, kernelPx: side });
    const kernel = new Float64Array(side * side);
    maker.bandKernel(lines, kernel);
    const camera = { ...rig.camera, pixelPitchUm: 1.1 };
    for (const lpPerMm of [20, 60, 150])
      for (const direction of ['tangential', 'sagittal', 30] as const) {
        const azimuth = (Math.atan2(terms.sin, terms.cos) * 180) / Math.PI + degrees(direction);
        const fx = lpPerMm * Math.cos((azimuth * Math.PI) / 180);
        const fy = lpPerMm * Math.sin((azimuth * Math.PI) / 180);
        let re = 0;
        let im = 0;
        for (let row = 0; row < side; row++)
          for (let column = 0; column < side; column++) {
            const [x, y] = [(column - 60) * 1.1e-3, (row - 60) * 1.1e-3];
            const turn = -2 * Math.PI * (fx * x + fy * y);
            re += kernel[row * side + column] * Math.cos(turn);
            im += kernel[row * side + column] * Math.sin(turn);
          }
        const out = new Float64Array(2);
        bandOtf(lines, 4, lpPerMm, direction, out);
        const pixel = pixelMtf(camera, lpPerMm, azimuth);
        // 1 % of the light falls outside the kernel and is given back by its unit sum
        expect(apart([re, im], [pixel * out[0], pixel * out[1]])).toBeLessThan(0.012);
      }
  });
});

describe('bands', () => {
  it('lose contrast along the radius to lateral colour within the band, none across', () => {
    const rig = sampleRig({
      lens: {
        lateralUm: [
          [500, 3],
          [550, 0],
          [600, -3],
        ],
      },
    });
    const band = {
      name: 'wide',
      lines: [
        { nm: 500, weight: 0.5 },
        { nm: 600, weight: 0.5 },
      ],
    };
    const lines = bandLines(rig, 4, 0, band);
    const limit = bandDiffractionMtf(band, 4, 80);
    expect(bandMtf(lines, 4, 80, 'sagittal')).toBeCloseTo(limit, 7);
    // two lines, 3 um to either side: their OTFs turn by +-2 pi f 3 um
    const turn = 2 * Math.PI * 80e-3 * 3;
    const parts = [500, 600].map((nm) => 0.5 * diffractionMtf(80e-6 * nm * 4));
    const expected = Math.hypot(
      (parts[0] + parts[1]) * Math.cos(turn),
      (parts[0] - parts[1]) * Math.sin(turn),
    );
    expect(bandMtf(lines, 4, 80, 'tangential')).toBeCloseTo(expected, 7);
  });

  it('go on past the cut-off of their long lines', () => {
    const lines = [...line({}, 400), ...line({}, 800)].map((one) => ({ ...one, weight: 0.5 }));
    const lpPerMm = 1e6 / (800 * 4) + 50;
    expect(bandMtf(lines, 4, lpPerMm, 'tangential')).toBeCloseTo(
      0.5 * diffractionMtf(lpPerMm * 400e-6 * 4),
      7,
    );
  });
});

describe('pixelMtf', () => {
  it('is the sinc of the box, unsigned, with its zeros at 1 / b', () => {
    const { camera } = sampleRig({ camera: { pixelPitchUm: 5, fillFactor: 0.8 } });
    expect(pixelMtf(camera, 0)).toBe(1);
    expect(pixelMtf(camera, 125)).toBeCloseTo(2 / Math.PI, 12); // b f = 1/2
    expect(pixelMtf(camera, 250)).toBeCloseTo(0, 12);
    expect(pixelMtf(camera, 375)).toBeCloseTo(2 / (3 * Math.PI), 12);
  });

  it('is the product of both sides along a diagonal', () => {
    const { camera } = sampleRig();
    expect(pixelMtf(camera, 100, 45)).toBeCloseTo(pixelMtf(camera, 100 * Math.SQRT1_2) ** 2, 12);
    expect(pixelMtf(camera, 100, 90)).toBeCloseTo(pixelMtf(camera, 100), 12);
  });
});
