import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { lanczos3, resamplePlane, resampleWeights } from '../../src/numeric/resample.js';

/** Resample a line by direct evaluation: Lanczos weights, then the least change under the window that makes a
 * ramp a ramp. */
const direct = (line: readonly number[], outputLength: number, scale: number) => {
  const widening = Math.max(1, 1 / scale);
  return Array.from({ length: outputLength }, (_, k) => {
    const middle = (k - (outputLength - 1) / 2) / scale + (line.length - 1) / 2;
    const places: number[] = [];
    for (let i = Math.ceil(middle - 3 * widening); i <= middle + 3 * widening; i++) places.push(i - middle);
    const total = (f: (t: number) => number) => places.reduce((sum, t) => sum + f(t), 0);
    const lanczos = (t: number) => lanczos3(t / widening);
    const g = (t: number) => (1 - Math.abs(t) / (3 * widening)) ** 2;
    const lack = -total((t) => t * lanczos(t)) / total(lanczos);
    const mean = total((t) => t * g(t)) / total(g);
    const slope = lack / total((t) => t * (t - mean) * g(t));
    return total((t) => {
      const sample = line[Math.min(Math.max(Math.round(t + middle), 0), line.length - 1)];
      return (lanczos(t) / total(lanczos) + slope * (t - mean) * g(t)) * sample;
    });
  });
};

const limited = (values: readonly number[], line: readonly number[]) =>
  values.map((value) => Math.min(Math.max(value, Math.min(...line)), Math.max(...line)));

const lines = fc.array(fc.float({ min: 0, max: 1, noNaN: true }), { minLength: 1, maxLength: 40 });
const lengths = fc.integer({ min: 1, max: 60 });
const scales = fc.double({ min: 0.08, max: 9, noNaN: true });

describe('lanczos3', () => {
  it('is 1 at 0, 0 at every other whole number and beyond 3', () => {
    expect([0, 1, -1, 2, -2, 3, 3.5, -17.25].map(lanczos3)).toEqual([1, 0, 0, 0, 0, 0, 0, 0]);
  });

  it('is sinc(x) sinc(x / 3)', () => {
    expect(lanczos3(0.5)).toBeCloseTo((2 / Math.PI) * (Math.sin(Math.PI / 6) / (Math.PI / 6)), 15);
    expect(lanczos3(-1.5)).toBeCloseTo((-2 / (3 * Math.PI)) * (2 / Math.PI), 15);
  });
});

describe('resampleWeights', () => {
  it('sum to 1 and balance about the place of the sample', () => {
    fc.assert(
      fc.property(lengths, lengths, scales, (input, output, scale) => {
        const { taps, first, weights } = resampleWeights(input, output, scale);
        for (let k = 0; k < output; k++) {
          const place = (k - (output - 1) / 2) / scale + (input - 1) / 2;
          let [sum, moment] = [0, 0];
          for (let j = 0; j < taps; j++) {
            sum += weights[k * taps + j];
            moment += weights[k * taps + j] * (first[k] + j - place);
          }
          expect(sum).toBeCloseTo(1, 12);
          expect(moment).toBeCloseTo(0, 10);
        }
      }),
    );
  });

  it('copies where the scale is 1 and the sizes differ by an even number', () => {
    expect(resampleWeights(9, 5, 1)).toMatchObject({ taps: 1, first: Int32Array.of(2, 3, 4, 5, 6) });
  });
});

describe('resamplePlane', () => {
  it('is the direct sum, along rows and down columns, clipped to the range of the input', () => {
    fc.assert(
      fc.property(lines, lengths, scales, (line, length, scale) => {
        const expected = limited(direct(line, length, scale), line);
        const weights = resampleWeights(line.length, length, scale);
        const copy = resampleWeights(1, 1, 1);
        for (const [across, down, width, height] of [
          [weights, copy, line.length, 1],
          [copy, weights, 1, line.length],
        ] as const) {
          const out = new Float32Array(length);
          resamplePlane(Float32Array.from(line), width, height, across, down, out);
          // float64 sums of up to 80 terms, rounded once to float32: 3e-8 of values up to 1
          for (let k = 0; k < length; k++) expect(Math.abs(out[k] - expected[k])).toBeLessThan(1e-7);
        }
      }),
    );
  });

  it('does rows and columns each by their own weights', () => {
    const [width, height] = [13, 9];
    const [outWidth, outHeight] = [7, 17];
    const [across, down] = [0.6, 1.9];
    const row = Array.from({ length: width }, (_, x) => 0.5 + 0.4 * Math.sin(x));
    const column = Array.from({ length: height }, (_, y) => 0.5 + 0.3 * Math.cos(1.3 * y));
    const plane = Float32Array.from(
      { length: width * height },
      (_, i) => row[i % width] * column[(i / width) | 0],
    );
    const out = new Float32Array(outWidth * outHeight);
    const weights = [
      resampleWeights(width, outWidth, across),
      resampleWeights(height, outHeight, down),
    ] as const;
    resamplePlane(plane, width, height, ...weights, out);
    const [outRow, outColumn] = [direct(row, outWidth, across), direct(column, outHeight, down)];
    const range = [...plane];
    out.forEach((value, i) => {
      const product = outRow[i % outWidth] * outColumn[(i / outWidth) | 0];
      // input and output are rounded to float32
      expect(Math.abs(value - limited([product], range)[0])).toBeLessThan(2e-7);
    });
  });
});
