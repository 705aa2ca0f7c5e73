/** RMS of the wavefront, the Strehl ratio at the reference point and at the true peak, and what ties them
 * together. */
import { describe, expect, it } from 'vitest';
import { psfPeak, strehlAtReference, strehlRatio } from '../../src/optics/strehl.js';
import { type LocalWavefront, wavefrontRmsWaves } from '../../src/optics/wavefront.js';
import { line, wavefront } from '../optics/samples.js';

type Terms = (amplitude: number) => Partial<LocalWavefront>;

const SPHERICAL: Terms = (a) => ({ w40: a });
const SPHERICAL_BALANCED: Terms = (a) => ({ w40: a, w20: -a });
const COMA: Terms = (a) => ({ w31: a });
const COMA_BALANCED: Terms = (a) => ({ w31: a, w11: (-2 / 3) * a });
const ASTIGMATISM: Terms = (a) => ({ w22: a });
const ASTIGMATISM_BALANCED: Terms = (a) => ({ w22: a, w20: -a / 2 });
const DEFOCUS: Terms = (a) => ({ w20: a });

const AMPLITUDES = [0.1, 0.25, 0.5, 1, 2];

describe('RMS of the wavefront, piston and tilt taken out', () => {
  // Source: V. N. Mahajan, JOSA 73 (1983) 860; Born and Wolf, Principles of Optics, 9.3 (both cited from
  // memory); confirmed by quadrature over the pupil. Coma's is the one with its balancing tilt
  it.each([
    ['W040', SPHERICAL, 2 / (3 * Math.sqrt(5))],
    ['W040 with W020 = -W040', SPHERICAL_BALANCED, 1 / (6 * Math.sqrt(5))],
    ['W131 with its tilt', COMA, 1 / (6 * Math.sqrt(2))],
    ['W222', ASTIGMATISM, 1 / 4],
    ['W222 with W020 = -W222/2', ASTIGMATISM_BALANCED, 1 / (2 * Math.sqrt(6))],
    ['W220 or W020', DEFOCUS, 1 / (2 * Math.sqrt(3))],
  ] as [string, Terms, number][])('of 1 wave of %s', (_, terms, sigma) => {
    expect(Math.abs(wavefrontRmsWaves(wavefront(terms(1))) - sigma)).toBeLessThan(1e-12); // rounding
    expect(Math.abs(wavefrontRmsWaves(wavefront(terms(-3))) - 3 * sigma)).toBeLessThan(1e-12);
  });

  it('of tilt alone is 0', () => {
    expect(wavefrontRmsWaves(wavefront({ w11: 5 }))).toBe(0);
  });
});

describe('Strehl ratio at the reference point', () => {
  // Source: none outside; one-dimensional Fresnel and Bessel integrals in 30 digits against two-dimensional
  // quadrature, 8e-15 apart, done apart from this project's code. The product promises 0.002
  it.each([
    [
      'W040',
      SPHERICAL,
      [0.9654316917765717, 0.8003047962226439, 0.3947413208873546, 0.08908142917254266, 0.04951985304853518],
    ],
    [
      'W040 with W020 = -W040',
      SPHERICAL_BALANCED,
      [0.9978088151295791, 0.9863724984517126, 0.9464415832819618, 0.8003047962226439, 0.3947413208873546],
    ],
    [
      'W131',
      COMA,
      [0.9519343309289064, 0.7374409804856973, 0.31745184065315635, 0.0790648738853182, 0.03411255836207087],
    ],
    [
      'W131 with W311 = -2/3 W131',
      COMA_BALANCED,
      [0.9945306803801242, 0.9662650001446877, 0.8712304286588364, 0.5705369539285171, 0.08685489396802233],
    ],
    [
      'W222',
      ASTIGMATISM,
      [0.9756283150408157, 0.8571823223635838, 0.5440746954506658, 0.1735691962309488, 0.09362825551755045],
    ],
    [
      'W222 with W020 = -W222/2',
      ASTIGMATISM_BALANCED,
      [0.9836785673173355, 0.9020638916776884, 0.6601634366179118, 0.18398175802653685, 0.014598894090815523],
    ],
  ] as [string, Terms, number[]][])('of %s at 0.1, 0.25, 0.5, 1 and 2 waves', (_, terms, expected) => {
    AMPLITUDES.forEach((amplitude, i) => {
      const found = strehlAtReference(line(terms(amplitude)), 2.8);
      expect(Math.abs(found - expected[i])).toBeLessThan(1e-6); // quadrature; 2e-7 measured
    });
  });

  it('is the same for 4a of W040 with W020 = -4a and for a of W040 alone', () => {
    // Source: derived, t^2 - t is symmetric about t = 1/2
    for (const a of [0.25, 0.5]) {
      const balanced = strehlAtReference(line({ w40: 4 * a, w20: -4 * a }), 4);
      expect(Math.abs(balanced - strehlAtReference(line({ w40: a }), 4))).toBeLessThan(1e-6);
    }
  });

  it("is 0.8 at Rayleigh's quarter wave", () => {
    // Source: Rayleigh, Phil. Mag. 8 (1879) 403; Born and Wolf, 9.3 (both cited from memory)
    expect(Math.abs(strehlAtReference(line({ w20: 0.25 }), 4) - 0.8105694691387022)).toBeLessThan(1e-6);
    expect(Math.abs(strehlAtReference(line({ w40: 0.25 }), 4) - 0.8003047962226439)).toBeLessThan(1e-6);
    expect(Math.abs(strehlAtReference(line({ w40: 1, w20: -1 }), 4) - 0.8003047962226439)).toBeLessThan(1e-6);
  });
});

describe('Strehl ratio at the true peak', () => {
  it.each([
    // Source: none outside; one-dimensional Bessel integral against two-dimensional quadrature, 2e-15 apart.
    // W131, peak, its place in lambda N (minus: toward the axis)
    [0.1, 0.9945306818421116, -0.13330890308007348],
    [0.25, 0.9662653528743126, -0.33294669009715194],
    [0.5, 0.8712520924105653, -0.6634223910102157],
    [1, 0.5717398716281015, -1.3008647153201693],
    [2, 0.19776449627145176, -1.5675225700675641],
  ])('of %f waves of coma is %f, at %f lambda N', (w31, strehl, position) => {
    const peak = psfPeak(line({ w31 }, 500), 4);
    expect(Math.abs(peak.strehl - strehl)).toBeLessThan(1e-6);
    expect(Math.abs(peak.alongUm / (0.5 * 4) - position)).toBeLessThan(1e-4);
    expect(peak.acrossUm).toBe(0);
  });

  it.each([
    // Source: criterion of Marechal (Rev. Opt. 26 (1947) 257) as in Born and Wolf, 9.3 (both cited from
    // memory): sigma = 1/14 wave; the coefficients and the exact ratios there own
    ['W040', SPHERICAL, 0.23957871187497745, 0.8152009059129719, 0.25021041428514806],
    [
      'W040 with W020 = -W040',
      SPHERICAL_BALANCED,
      0.9583148474999098,
      0.8152009059129731,
      1.0008416571405963,
    ],
    ['W131 with its tilt', COMA_BALANCED, 0.6060915267313264, 0.8162000441109302, 0.635039716664827],
    ['W222', ASTIGMATISM, 0.2857142857142857, 0.8177687112683737, 0.3009539631696861],
    [
      'W222 with W020 = -W222/2',
      ASTIGMATISM_BALANCED,
      0.3499271061118825,
      0.8167569228070822,
      0.3673194804187272,
    ],
    ['W220 or W020', DEFOCUS, 0.2474358296526967, 0.8141256305373259, 0.2575216080606988],
  ] as [string, Terms, number, number, number][])(
    'of %s is close to 0.8 at 1/14 wave RMS',
    (_, terms, atFourteenth, there, atEighty) => {
      expect(Math.abs(wavefrontRmsWaves(wavefront(terms(atFourteenth))) - 1 / 14)).toBeLessThan(1e-9);
      expect(Math.abs(strehlAtReference(line(terms(atFourteenth)), 4) - there)).toBeLessThan(1e-6);
      expect(Math.abs(strehlAtReference(line(terms(atEighty)), 4) - 0.8)).toBeLessThan(1e-6);
      // the peak lies at the reference point or, for coma, 4e-5 above it (the best tilt is not quite 2/3)
      expect(Math.abs(strehlRatio(line(terms(atFourteenth)), 4) - there)).toBeLessThan(1e-4);
    },
  );

  it('lies between the approximations of Marechal and of Mahajan for small aberrations', () => {
    // Source: (1 - x/2)^2 Marechal (1947), exp(-x) Mahajan (1983), x = (2 pi sigma)^2 (cited from memory); at
    // sigma = 1/14 they are 0.80872206 and 0.81756857, and the exact ratios above fall between them but for
    // W222's 2e-4
    for (const terms of [SPHERICAL, COMA_BALANCED, ASTIGMATISM_BALANCED, DEFOCUS]) {
      const sigma = wavefrontRmsWaves(wavefront(terms(1)));
      const x = (2 * Math.PI) ** 2 / 14 ** 2;
      const strehl = strehlRatio(line(terms(1 / 14 / sigma)), 4);
      expect(strehl).toBeGreaterThan((1 - x / 2) ** 2);
      expect(strehl).toBeLessThan(Math.exp(-x));
    }
  });

  it('over focus of W040 alone: one maximum at W020 = -W040 up to 2.36 waves, twins beyond', () => {
    // Source: V. N. Mahajan, JOSA 72 (1982) 1258, about 2.3 waves (cited from memory); 2.361585 and the rows
    // own
    const onAxis = (w40: number, offset: number) => strehlAtReference(line({ w40, w20: -w40 + offset }), 4);
    for (const [w40, middle] of [
      [2, 0.39474132088736275],
      [2.2, 0.32142724051069654],
    ]) {
      expect(Math.abs(onAxis(w40, 0) - middle)).toBeLessThan(1e-6);
      expect(onAxis(w40, 1)).toBeLessThan(middle);
    }
    for (const [w40, offset, twin] of [
      [2.4, 1, 0.2700434768139954],
      [3, 1, 0.26466507964655267],
      [4, 2, 0.17458448621093908],
    ]) {
      expect(Math.abs(onAxis(w40, offset) - twin)).toBeLessThan(1e-6);
      expect(Math.abs(onAxis(w40, -offset) - twin)).toBeLessThan(1e-6);
      expect(onAxis(w40, 0)).toBeLessThan(twin);
    }
  });
});
