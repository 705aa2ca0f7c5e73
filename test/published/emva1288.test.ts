/** The camera against EMVA 1288: the model's formulas, and a bench that measures the simulated camera as the
 * standard measures a real one.
 *
 * Source throughout: EMVA Standard 1288, release 3.1 section 2 and release 4.0 Linear (from memory). Seeds
 * are fixed, so each figure is the same every time; the limits are the ones asked for, and each test says how
 * many standard errors they are.
 */
import { describe, expect, it } from 'vitest';
import { type Converter, converterFor } from '../../src/camera/converter.js';
import { exposeRows } from '../../src/camera/expose.js';
import { flatFieldSignal } from '../../src/camera/signal.js';
import { logFactorial } from '../../src/numeric/log-factorial.js';
import type { Sensor } from '../../src/optics/rig.js';

const SENSOR: Sensor = {
  whiteE: 12_000,
  fullWellE: 10_000,
  darkNoiseE: 5,
  darkE: 0,
  prnuPercent: 0.7,
  dsnuE: 1.5,
  bitDepth: 12,
};

/** One flat frame of side x side pixels. */
function frame(
  sensor: Sensor,
  value: number,
  side: number,
  seed: number,
  converter?: Converter,
): Uint16Array {
  const exposure = {
    width: side,
    height: side,
    sensor,
    converter: converter ?? converterFor(sensor),
    seed,
    cameraSeed: 1,
  };
  const raw = new Uint16Array(side * side);
  exposeRows([new Float32Array(side * side).fill(value)], exposure, 0, side, [raw]);
  return raw;
}

function mean(samples: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < samples.length; i++) sum += samples[i];
  return sum / samples.length;
}

function variance(samples: ArrayLike<number>): number {
  const centre = mean(samples);
  let sum = 0;
  for (let i = 0; i < samples.length; i++) sum += (samples[i] - centre) ** 2;
  return sum / (samples.length - 1);
}

/** Mean and temporal variance of two frames of one exposure: half the variance of their difference, which no
 * fixed pattern enters. */
function photonTransferPoint(
  sensor: Sensor,
  value: number,
  side: number,
  seed: number,
  converter?: Converter,
) {
  const first = frame(sensor, value, side, seed, converter);
  const second = frame(sensor, value, side, seed + 1, converter);
  const difference = Float64Array.from(first, (number, i) => number - second[i]);
  return { mean: (mean(first) + mean(second)) / 2, variance: variance(difference) / 2 };
}

describe('the linear camera model', () => {
  // quantum efficiency 0.6, K = 0.1 DN/e, dark noise 5 e, offset 20 DN; photons -> mean, variance, SNR.
  // Source: the formulas of EMVA 1288 release 3.1 section 2, evaluated to the digits shown
  const sensor: Sensor = {
    ...SENSOR,
    whiteE: 40_000,
    fullWellE: 40_000,
    prnuPercent: 0,
    dsnuE: 0,
  };
  const converter: Converter = { gainDnPerE: 0.1, offsetDn: 20, whiteLevelDn: 4095 };
  const table = [
    [10, 20.6, 0.3933333, 0.9566892],
    [100, 26, 0.9333333, 6.21059],
    [1000, 80, 6.333333, 23.8415824],
    [10_000, 620, 60.33333, 77.2453936],
    [50_000, 3020, 300.3333, 173.1089358],
  ];

  it.each(table)('predicts mean, variance and SNR of %i photons', (photons, meanDn, varianceDn2, snr) => {
    const signal = flatFieldSignal(sensor, converter, (0.6 * photons) / 40_000);
    // half a unit of the 7 digits that the table prints
    expect(signal.meanDn / meanDn).toBeCloseTo(1, 7);
    expect(signal.temporalVarianceDn2 / varianceDn2).toBeCloseTo(1, 6);
    expect(signal.snr / snr).toBeCloseTo(1, 7);
    expect(signal.totalSnr).toBe(signal.snr);
  });

  it.each(table)('is followed by %i photons', (photons, meanDn, varianceDn2) => {
    const side = 256;
    const n = side * side;
    const point = photonTransferPoint(sensor, (0.6 * photons) / 40_000, side, 2 * photons, converter);
    // 2 n samples of the mean, n of the variance: 4 standard errors each. At 10 photons the noise is 0.6 DN,
    // where a rounding is no longer independent of what it rounds and the true variance lies 0.7 % above the
    // model.
    expect(Math.abs(point.mean - meanDn)).toBeLessThan(4 * Math.sqrt(varianceDn2 / (2 * n)));
    const allowed = 4 * Math.sqrt(2 / n) + (photons === 10 ? 0.007 : 0);
    expect(Math.abs(point.variance / varianceDn2 - 1)).toBeLessThan(allowed);
  });

  it('counts the shot noise of the dark signal with the temporal noise, and the non-uniformities with the spatial', () => {
    const full: Sensor = { ...sensor, darkE: 400, prnuPercent: 1, dsnuE: 3 };
    const signal = flatFieldSignal(full, converter, 0.25);
    expect(signal.meanDn).toBeCloseTo(20 + 0.1 * (400 + 10_000), 12);
    expect(signal.temporalVarianceDn2).toBeCloseTo(0.01 * (25 + 400 + 10_000) + 1 / 12, 12);
    expect(signal.spatialVarianceDn2).toBeCloseTo(0.01 * (9 + 100 ** 2), 12);
    expect(signal.totalSnr).toBeCloseTo(
      10_000 / Math.sqrt(25 + 400 + 10_000 + 1 / (12 * 0.01) + 9 + 10_000),
      9,
    );
  });
});

describe('photon transfer', () => {
  const side = 320;
  const n = side * side;
  const converter = converterFor(SENSOR);
  // 12 exposures from darkness to beyond the full well
  const points = Array.from({ length: 12 }, (_, k) => photonTransferPoint(SENSOR, k / 11, side, 10 * k));
  const [dark] = points;
  const saturated = points[11];
  // the standard's fit: variance over mean, both less their dark values, through 0, up to 70 % of saturation
  const fitted = points.filter((p) => p.mean - dark.mean < 0.7 * (saturated.mean - dark.mean));
  const sum = (f: (p: (typeof points)[0]) => number) => fitted.reduce((total, p) => total + f(p), 0);
  const gain =
    sum((p) => (p.variance - dark.variance) * (p.mean - dark.mean)) / sum((p) => (p.mean - dark.mean) ** 2);

  it('gives back the gain K within 1 %', () => {
    expect(fitted).toHaveLength(7);
    // a variance from n pixels has a standard error of sqrt(2/n) = 0.44 %; seven of them, weighted by the
    // fit, leave 0.24 %
    expect(Math.abs(gain / converter.gainDnPerE - 1)).toBeLessThan(0.01);
  });

  it('gives back the dark noise within 1 %', () => {
    const darkNoiseE = Math.sqrt(dark.variance - 1 / 12) / gain;
    // standard error 0.22 % from the variance and 0.24 % from the gain
    expect(Math.abs(darkNoiseE / SENSOR.darkNoiseE - 1)).toBeLessThan(0.01);
  });

  it('gives back the full well within 1 %', () => {
    // Electrons at the level where the mean stops rising. The standard's own mark, the exposure of the
    // largest variance, lies lower by about three standard deviations of the shot noise: 3 % of a well of 10 000 e,
    // see below.
    expect(points[10].mean / saturated.mean).toBeCloseTo(1, 3);
    const fullWellE = (saturated.mean - dark.mean) / gain;
    expect(Math.abs(fullWellE / SENSOR.fullWellE - 1)).toBeLessThan(0.01);
  });

  it('gives back the mean of each exposure to 4 standard errors', () => {
    for (const [k, point] of points.entries()) {
      if (k > 8) break; // from 9/11 on (9818 e) the well begins to clip
      const signal = flatFieldSignal(SENSOR, converter, k / 11);
      // two frames share their fixed pattern
      const error = Math.sqrt((signal.temporalVarianceDn2 / 2 + signal.spatialVarianceDn2) / n);
      expect(Math.abs(point.mean - signal.meanDn)).toBeLessThan(4 * error);
    }
  });

  it('has the mean and variance of a Poisson count cut off at the full well', () => {
    const sensor: Sensor = {
      ...SENSOR,
      whiteE: 10_000,
      darkNoiseE: 0,
      dsnuE: 0,
      prnuPercent: 0,
      bitDepth: 16,
    };
    const { gainDnPerE } = converterFor(sensor);
    for (const value of [0.96, 0.98, 0.99, 1]) {
      const exact = clippedPoisson(10_000 * value, 10_000);
      const point = photonTransferPoint(sensor, value, 200, 500);
      // 4 standard errors; the cut distribution has thinner tails than the normal one whose error is used for
      // the variance
      const m = 40_000;
      expect(Math.abs(point.mean / gainDnPerE - exact.mean)).toBeLessThan(4 * Math.sqrt(exact.variance / m));
      expect(Math.abs(point.variance / gainDnPerE ** 2 / exact.variance - 1)).toBeLessThan(
        4 * Math.sqrt(2 / m),
      );
    }
  });

  it("has its largest variance where the standard's mark for saturation belongs", () => {
    const sensor: Sensor = { ...SENSOR, whiteE: 10_000 };
    const values = [0.91, 0.94, 0.97, 1];
    const measured = values.map((value) => photonTransferPoint(sensor, value, 300, 700).variance);
    const expected = values.map((value) => clippedPoisson(10_000 * value, 10_000).variance);
    // the variance at 0.97 leads by 2.5 % or more; it is known to sqrt(2 / 300^2) = 0.5 %
    expect(measured.indexOf(Math.max(...measured))).toBe(2);
    expect(expected.indexOf(Math.max(...expected))).toBe(2);
  });
});

describe('non-uniformity', () => {
  const side = 160;
  const frames = 16;

  /** Mean frame and temporal variance of a stack of exposures. */
  function stack(value: number) {
    const total = new Float64Array(side * side);
    const squares = new Float64Array(side * side);
    for (let k = 0; k < frames; k++) {
      const raw = frame(SENSOR, value, side, 1000 + 100 * Math.round(10 * value) + k);
      for (let i = 0; i < raw.length; i++) {
        total[i] += raw[i];
        squares[i] += raw[i] ** 2;
      }
    }
    const average = total.map((x) => x / frames);
    const temporal = mean(squares.map((x, i) => (x - frames * average[i] ** 2) / (frames - 1)));
    return { average, temporal, spatial: variance(average) - temporal / frames };
  }

  const dark = stack(0);
  const grey = stack(0.4); // 48 % of the full well

  it('gives back DSNU within 3 %', () => {
    const dsnuE = Math.sqrt(dark.spatial) / converterFor(SENSOR).gainDnPerE;
    // 25 600 pixels and the temporal noise that 16 frames leave: standard error 0.75 %
    expect(Math.abs(dsnuE / SENSOR.dsnuE - 1)).toBeLessThan(0.03);
  });

  it('gives back PRNU within 3 %', () => {
    const prnu = Math.sqrt(grey.spatial - dark.spatial) / (mean(grey.average) - mean(dark.average));
    // standard error 0.55 %
    expect(Math.abs(100 * prnu - SENSOR.prnuPercent)).toBeLessThan(0.03 * SENSOR.prnuPercent);
  });

  it('has no row, column or neighbour that stands out, in one frame or in the mean of many', () => {
    const one = Float64Array.from(frame(SENSOR, 0.4, side, 1));
    const limit = 4 / side; // 4 standard errors of a correlation over side^2 pairs
    for (const picture of [one, grey.average, dark.average]) {
      for (const [dx, dy] of [
        [1, 0],
        [0, 1],
        [1, 1],
        [1, -1],
        [2, 0],
        [0, 2],
        [64, 0],
        [0, 64],
      ])
        expect(Math.abs(correlation(picture, dx, dy))).toBeLessThan(limit);
      // means of rows and of columns scatter by deviation / sqrt(side): their variance is known to sqrt(2 /
      // side) = 11 %
      for (const along of [rowMeans(picture), columnMeans(picture)]) {
        const ratio = (variance(along) * side) / variance(picture);
        expect(Math.abs(ratio - 1)).toBeLessThan(4 * Math.sqrt(2 / side));
      }
    }
  });

  it('has no correlation between pictures in a row once their common pattern is out', () => {
    const noise = (seed: number) =>
      Float64Array.from(frame(SENSOR, 0.4, side, seed), (number, i) => number - grey.average[i]);
    const [a, b] = [noise(1), noise(2)];
    const product = mean(a.map((x, i) => x * b[i])) / Math.sqrt(variance(a) * variance(b));
    // the stack's own noise is in both: 1/17 of the variance
    expect(Math.abs(product - 1 / 17)).toBeLessThan(4 / side);
  });

  function correlation(picture: Float64Array, dx: number, dy: number): number {
    const centre = mean(picture);
    let product = 0;
    let pairs = 0;
    for (let y = Math.max(0, -dy); y < side - Math.max(0, dy); y++)
      for (let x = 0; x < side - dx; x++) {
        product += (picture[y * side + x] - centre) * (picture[(y + dy) * side + x + dx] - centre);
        pairs++;
      }
    return product / pairs / variance(picture);
  }

  function rowMeans(picture: Float64Array): number[] {
    return Array.from({ length: side }, (_, y) => mean(picture.subarray(y * side, (y + 1) * side)));
  }

  function columnMeans(picture: Float64Array): number[] {
    return Array.from({ length: side }, (_, x) =>
      mean(Array.from({ length: side }, (_, y) => picture[y * side + x])),
    );
  }
});

/** Mean and variance of min(count, well) for a Poisson count, summed over its probabilities. */
function clippedPoisson(meanE: number, wellE: number): { mean: number; variance: number } {
  const reach = 12 * Math.sqrt(meanE);
  let first = 0;
  let second = 0;
  for (let k = Math.floor(meanE - reach); k <= meanE + reach; k++) {
    const probability = Math.exp(k * Math.log(meanE) - meanE - logFactorial(k));
    const charge = Math.min(k, wellE) - wellE;
    first += probability * charge;
    second += probability * charge * charge;
  }
  return { mean: wellE + first, variance: second - first * first };
}
