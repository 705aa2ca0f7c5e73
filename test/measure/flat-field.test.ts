import jstat from 'jstat';
import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.js';
import { flatField } from '../../src/measure/flat-field.js';
import type { Plane } from '../../src/measure/plane.js';
import { withNoise } from './edge-pictures.js';

const even = (value: number): Plane => ({
  width: 60,
  height: 50,
  samples: new Float32Array(3000).fill(value),
});
const REGION = { x: 5, y: 7, width: 40, height: 30 };

/** The region's pixels and the terms of a plane. */
function pixelsOf({ width, samples }: Plane): { values: number[]; terms: number[][] } {
  const values: number[] = [];
  const terms: number[][] = [];
  for (let row = 0; row < REGION.height; row++)
    for (let column = 0; column < REGION.width; column++) {
      values.push(samples[(REGION.y + row) * width + REGION.x + column]);
      terms.push([1, column, row]);
    }
  return { values, terms };
}

describe('flatField', () => {
  it('gives mean and noise of an even field', () => {
    const { mean, noise, snr, snrDb } = flatField(withNoise(even(0.5), 0.005, 1), REGION);
    // 1200 pixels: the mean to 0.005 / sqrt(1200), the noise to 1 / sqrt(2 x 1200) of itself; four standard
    // errors each
    expect(Math.abs(mean - 0.5)).toBeLessThan(4 * 1.5e-4);
    expect(Math.abs(noise / 0.005 - 1)).toBeLessThan(4 * 0.0205);
    expect(snr).toBeCloseTo(mean / noise, 10);
    expect(snrDb).toBeCloseTo(20 * Math.log10(mean / noise), 10);
  });

  it('takes a plane out, and says how steep it was', () => {
    const plane = withNoise(even(0.5), 0.005, 2);
    const tilted = plane.samples.map((value, i) => value + 0.002 * (i % 60) - 0.001 * Math.floor(i / 60));
    const flat = flatField(plane, REGION);
    const sloped = flatField({ ...plane, samples: tilted }, REGION);
    expect(sloped.noise).toBeCloseTo(flat.noise, 6);
    expect((sloped.slope.x * sloped.mean - flat.slope.x * flat.mean) / 39).toBeCloseTo(0.002, 6);
    expect((sloped.slope.y * sloped.mean - flat.slope.y * flat.mean) / 29).toBeCloseTo(-0.001, 6);
  });

  // Source: jstat 1.9: mean, ordinary least squares, sample variance
  it('agrees with a general-purpose statistics library', () => {
    const plane = withNoise(even(0.4), 0.01, 3);
    const { values, terms } = pixelsOf(plane);
    const { coef } = jstat.models.ols(values, terms);
    const left = values.map((value, i) => value - terms[i].reduce((sum, term, k) => sum + term * coef[k], 0));
    const { mean, noise } = flatField(plane, REGION);
    expect(mean).toBeCloseTo(jstat.mean(values), 12);
    const free = (values.length - 1) / (values.length - 3); // the plane has three numbers, a mean one
    expect(noise).toBeCloseTo(Math.sqrt(jstat.variance(left, true) * free), 10);
  });

  it('says that there is no noise where there is none', () => {
    expect(flatField(even(0.3), REGION)).toMatchObject({ noise: 0, snr: null, snrDb: null });
  });

  it('takes a single row', () => {
    const { noise } = flatField(
      withNoise({ width: 400, height: 1, samples: new Float32Array(400).fill(0.5) }, 0.01, 4),
      {
        x: 0,
        y: 0,
        width: 400,
        height: 1,
      },
    );
    expect(Math.abs(noise / 0.01 - 1)).toBeLessThan(0.15);
  });

  it('refuses what is too small or dark', () => {
    const run = (plane: Plane, region: typeof REGION) => () => flatField(plane, region);
    expect(run(even(0.5), { ...REGION, width: 9, height: 9 })).toThrow(
      /the flat region is too small, found 9 x 9 pixels. Allowed: from 100/,
    );
    expect(run(even(0), REGION)).toThrow(/holds no light/);
    expect(run(even(0), REGION)).toThrow(InputError);
  });
});
