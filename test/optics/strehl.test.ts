import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { gaussLegendre } from '../../src/numeric/gauss-legendre.js';
import { findCoarsePeaks, slopeRange } from '../../src/optics/coarse-peaks.js';
import { bandLines, bandOtf } from '../../src/optics/otf.js';
import type { WavefrontLine } from '../../src/optics/psf.js';
import { psfPeak, strehlAtReference, strehlRatio } from '../../src/optics/strehl.js';
import { type LocalWavefront, opticalPathWaves } from '../../src/optics/wavefront.js';
import { psfHeights } from './brute-force.js';
import { line, sampleRig, wavefront } from './samples.js';

const between = (low: number, high: number) =>
  fc.integer({ min: 0, max: 10000 }).map((step) => low + ((high - low) * step) / 10000);
const waves = (most: number) => between(-most, most);

const range = (from: number, to: number, step: number) =>
  Array.from({ length: Math.floor((to - from) / step) + 1 }, (_, i) => from + i * step);

/** The highest of the heights on a grid that covers all of the PSF, in steps of 0.3 lambda N. */
function highestOnGrid(lines: readonly WavefrontLine[], fNumber: number): number {
  const airyUm = Math.min(...lines.map(({ nm }) => (nm / 1000) * fNumber));
  const most = Math.max(
    ...lines.map(({ nm, wavefront: w }) => {
      const { alongMin, alongMax, acrossMax } = slopeRange(w);
      return 2 * (nm / 1000) * fNumber * Math.max(-alongMin, alongMax, acrossMax);
    }),
  );
  const reach = most + airyUm;
  const heights = psfHeights(
    lines,
    fNumber,
    range(-reach, reach, 0.3 * airyUm),
    range(0, reach, 0.3 * airyUm),
    72,
  );
  return Math.max(...heights.flat());
}

describe('psfPeak', () => {
  it('is 1, at the image point, without aberration', () => {
    const peak = psfPeak(
      [...line({}, 450), ...line({}, 650)].map((one) => ({ ...one, weight: 0.5 })),
      2.8,
    );
    expect(peak.strehl).toBeCloseTo(1, 9);
    expect(Math.hypot(peak.alongUm, peak.acrossUm)).toBeLessThan(1e-6);
  });

  it('follows a tilt: -2 N lambda w11', () => {
    const peak = psfPeak(line({ w11: 3.3 }, 500), 4);
    expect(peak.strehl).toBeCloseTo(1, 6);
    expect(peak.alongUm).toBeCloseTo(-2 * 4 * 0.5 * 3.3, 4);
  });

  it('is the highest point of the whole PSF', () => {
    fc.assert(
      fc.property(
        fc.record({ w40: waves(1), w31: waves(1.2), w22: waves(1.2), w20: waves(1.2), w11: waves(0.5) }),
        (terms) => {
          const peak = strehlRatio(line(terms), 4);
          const grid = highestOnGrid(line(terms), 4);
          // sums over 72 samples across the pupil are good to 1 %; a grid of 0.3 lambda N misses up to 12 %
          // of a peak
          expect(peak).toBeGreaterThan(0.985 * grid);
          expect(grid).toBeGreaterThan(0.86 * peak);
        },
      ),
      { numRuns: 12, seed: 3 },
    );
  });

  it('is the highest point of the sum of the lines, tilted and defocused against each other', () => {
    fc.assert(
      fc.property(
        fc.array(
          fc.record({
            nm: fc.integer({ min: 400, max: 900 }),
            weight: between(0.2, 1),
            w31: waves(1),
            w20: waves(1),
            w11: waves(1),
          }),
          { minLength: 2, maxLength: 3 },
        ),
        (parts) => {
          const lines = parts.map(({ nm, weight, ...terms }) => ({
            nm,
            weight,
            wavefront: wavefront(terms),
          }));
          const peak = strehlRatio(lines, 4);
          const grid = highestOnGrid(lines, 4);
          expect(peak).toBeGreaterThan(0.985 * grid);
          expect(grid).toBeGreaterThan(0.86 * peak);
        },
      ),
      { numRuns: 10, seed: 4 },
    );
  });

  it('finds the peaks of two lines thrown far apart at one of them', () => {
    const lines = [
      { nm: 500, weight: 0.6, wavefront: wavefront({ w11: 4 }) },
      { nm: 600, weight: 0.4, wavefront: wavefront({ w11: -4 }) },
    ];
    const peak = psfPeak(lines, 4);
    // the line of 500 nm alone holds 0.6 / 500^2 of the sum; the rings of the other add little 30 lambda N
    // away
    const share = 0.6 / 500 ** 2 / (0.6 / 500 ** 2 + 0.4 / 600 ** 2);
    expect(peak.strehl).toBeGreaterThan(share);
    expect(peak.strehl).toBeLessThan(share + 1e-3);
    expect(peak.alongUm).toBeCloseTo(-16, 1);
  });

  it('finds twin peaks beside the radius', () => {
    const lines = line({ w22: 0.8325669933110476, w20: -0.9088105969130993 });
    const peak = psfPeak(lines, 2.8);
    expect(peak.acrossUm).toBeGreaterThan(1);
    const [[onRadius]] = psfHeights(lines, 2.8, [peak.alongUm], [0]);
    expect(peak.strehl).toBeGreaterThan(1.02 * onRadius);
    const [[mirrored]] = psfHeights(lines, 2.8, [peak.alongUm], [-peak.acrossUm]);
    expect(Math.abs(mirrored / peak.strehl - 1)).toBeLessThan(0.02); // 96 samples across the pupil
  });

  it('does not depend on the sign of the even terms, nor on scale', () => {
    fc.assert(
      fc.property(waves(1.5), waves(1.5), waves(1.5), waves(1.5), (w40, w31, w22, w20) => {
        const peak = strehlRatio(line({ w40, w31, w22, w20 }, 550), 4);
        // -W(-p) has the same PSF; 1e-5 is what the search promises
        expect(
          Math.abs(strehlRatio(line({ w40: -w40, w31, w22: -w22, w20: -w20 }, 550), 4) - peak),
        ).toBeLessThan(1e-5);
        expect(Math.abs(strehlRatio(line({ w40, w31, w22, w20 }, 800), 11) - peak)).toBeLessThan(1e-5);
      }),
      { numRuns: 30, seed: 5 },
    );
  });

  it('works on strong lenses: 12 waves of coma, of astigmatism, of balanced spherical aberration', () => {
    for (const terms of [
      { w31: 12 },
      { w31: 12, w22: 8, w20: -4 },
      { w40: 12, w20: -12 },
      { w22: 12, w20: -6 },
    ]) {
      const peak = psfPeak(line(terms), 2.8);
      const around = [-0.6, -0.3, 0, 0.3, 0.6];
      const heights = psfHeights(
        line(terms),
        2.8,
        around.map((d) => peak.alongUm + d),
        around.map((d) => peak.acrossUm + d),
        200,
      );
      expect(Math.abs(heights[2][2] / peak.strehl - 1)).toBeLessThan(0.02); // 200 samples across the pupil
      expect(Math.max(...heights.flat())).toBeLessThan(1.01 * heights[2][2]);
    }
  });

  it('gives the same for the same input, whatever was computed before', () => {
    const lines = line({ w40: 0.4, w31: 0.9, w20: 0.2 });
    const first = psfPeak(lines, 4);
    psfPeak(line({ w22: 3, w20: 2 }), 8);
    expect(psfPeak(lines, 4)).toEqual(first);
  });
});

describe('strehlAtReference', () => {
  it('is the volume under the OTF of the band over that without aberration', () => {
    // Source: the Fourier integral at x = 0; Goodman, Introduction to Fourier Optics, 6.3 (cited from memory)
    const rig = sampleRig({
      waves: { W040: 0.3, W131: 0.4, W222: 0.3, W220: 0.1 },
      lens: {
        axialUm: [
          [450, 10],
          [650, -8],
        ],
        lateralUm: [
          [450, 0.6],
          [650, -0.5],
        ],
      },
    });
    const band = {
      name: 'wide',
      lines: [
        { nm: 450, weight: 0.5 },
        { nm: 550, weight: 0.2 },
        { nm: 650, weight: 0.3 },
      ],
    };
    const lines = bandLines(rig, 3, 2, band);
    const ideal = lines.map((one) => ({ ...one, wavefront: wavefront() }));
    const reference = strehlAtReference(lines, 4);
    // 1e-4: steps of the sum over frequencies
    expect(Math.abs(volume(lines) / volume(ideal) - reference)).toBeLessThan(1e-4);
    expect(strehlRatio(lines, 4)).toBeGreaterThan(reference);
  });

  it('is never above the Strehl ratio', () => {
    fc.assert(
      fc.property(waves(2), waves(2), waves(2), waves(2), waves(1), (w40, w31, w22, w20, w11) => {
        const lines = line({ w40, w31, w22, w20, w11 });
        expect(strehlAtReference(lines, 4)).toBeLessThan(strehlRatio(lines, 4) + 1e-5);
      }),
      { numRuns: 40, seed: 6 },
    );
  });
});

describe('slopeRange', () => {
  it('covers the slopes of W all over the pupil', () => {
    fc.assert(
      fc.property(
        waves(5),
        waves(5),
        waves(5),
        waves(5),
        waves(5),
        between(0, 1),
        between(0, Math.PI),
        (w40, w31, w22, w20, w11, rho, theta) => {
          const terms: LocalWavefront = wavefront({ w40, w31, w22, w20, w11 });
          const { alongMin, alongMax, acrossMax } = slopeRange(terms);
          const [m, s] = [rho * Math.cos(theta), rho * Math.sin(theta)];
          const along = (opticalPathWaves(terms, m + 1e-5, s) - opticalPathWaves(terms, m - 1e-5, s)) / 2e-5;
          const across = (opticalPathWaves(terms, m, s + 1e-5) - opticalPathWaves(terms, m, s - 1e-5)) / 2e-5;
          const slack = 0.3; // rings 1/8 and spokes 15 degrees apart: the margin of the map is larger
          expect(along).toBeGreaterThan(alongMin - slack);
          expect(along).toBeLessThan(alongMax + slack);
          expect(Math.abs(across)).toBeLessThan(acrossMax + slack);
        },
      ),
      { numRuns: 500 },
    );
  });
});

describe('findCoarsePeaks', () => {
  it('starts within a quarter of lambda N of a lone peak', () => {
    const lines = line({ w31: 0.6, w11: 2.13 }, 500);
    const [[alongUm, acrossUm]] = findCoarsePeaks(
      lines,
      lines.map(({ wavefront: w }) => slopeRange(w)),
      4,
    );
    const peak = psfPeak(lines, 4);
    expect(Math.hypot(alongUm - peak.alongUm, acrossUm - peak.acrossUm)).toBeLessThan(0.25 * 0.5 * 4);
  });
});

/** Integral of Re OTF over all frequencies: half a turn counts for the whole, since the other half is
 * conjugate. */
function volume(lines: readonly WavefrontLine[]): number {
  const cutOff = 1e6 / (450 * 4);
  const { nodes, weights } = gaussLegendre(60);
  const out = new Float64Array(2);
  let sum = 0;
  for (let angle = 0; angle < 180; angle += 10)
    nodes.forEach((x, i) => {
      const lpPerMm = 0.5 * cutOff * (1 + x);
      bandOtf(lines, 4, lpPerMm, angle, out);
      sum += weights[i] * lpPerMm * out[0];
    });
  return sum;
}
