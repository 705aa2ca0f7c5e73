/** The reference itself against closed forms. */
import { describe, expect, it } from 'vitest';
import { line } from '../optics/samples.js';
import { exactPixels } from './exact-psf.js';

/** Bessel functions J0 and J1 by their integral, with the trapezoidal rule that converges like a power series here. */
function bessel(order: 0 | 1, x: number): number {
  const n = 200;
  let sum = 0;
  for (let k = 0; k < n; k++) {
    const t = (Math.PI * (k + 0.5)) / n;
    sum += Math.cos(order * t - x * Math.sin(t)) / n;
  }
  return sum;
}

describe('PSFs by quadrature', () => {
  it('are the Airy pattern without aberration', () => {
    // Source: Born and Wolf, Principles of Optics, 8.5.2 (from memory): pi/(4 (lambda N)^2) (2 J1(v)/v)^2, v = pi r / (lambda N)
    const box = 1e-4; // so small that the mean over it is the value to 1e-8
    const lambdaN = 0.55 * 4;
    const [heights] = exactPixels(line(), 4, box, [0, 1, 2.7, 6], [0.8]);
    [0, 1, 2.7, 6].forEach((x, i) => {
      const v = (Math.PI * Math.hypot(x, 0.8)) / lambdaN;
      const airy = (Math.PI / (4 * lambdaN ** 2)) * ((2 * bessel(1, v)) / v) ** 2;
      expect(Math.abs(heights[i] / box ** 2 - airy)).toBeLessThan(1e-8);
    });
  });

  it('hold all the light', () => {
    // a square of 12 lambda N a side holds more than the circle of half that inside it, 1 - J0^2 - J1^2 (Rayleigh 1881; from memory)
    const v = 6 * Math.PI;
    const circle = 1 - bessel(0, v) ** 2 - bessel(1, v) ** 2;
    const [[share]] = exactPixels(line({ w31: 0.4 }), 4, 12 * 0.55 * 4, [0], [0]);
    const [[perfect]] = exactPixels(line(), 4, 12 * 0.55 * 4, [0], [0]);
    expect(perfect).toBeGreaterThan(circle);
    expect(perfect).toBeLessThan(1);
    expect(share).toBeLessThan(perfect);
    expect(share).toBeGreaterThan(0.95);
  });

  it('have the on-axis intensity sinc^2(W020) out of focus', () => {
    // Source: Born and Wolf, 8.8.2 (from memory)
    const heightOf = (w20: number) => exactPixels(line({ w20 }), 8, 1e-4, [0], [0])[0][0];
    expect(
      Math.abs(heightOf(0.7) / heightOf(0) - (Math.sin(0.7 * Math.PI) / (0.7 * Math.PI)) ** 2),
    ).toBeLessThan(1e-8);
  });

  it('move by -2 N lambda times a tilt of the wavefront', () => {
    const heights = exactPixels(
      line({ w11: 0.5, cos: 0.6, sin: 0.8 }),
      4,
      1e-4,
      [-2 * 4 * 0.55 * 0.5 * 0.6],
      [-2 * 4 * 0.55 * 0.5 * 0.8],
    );
    expect(heights[0][0]).toBeCloseTo(exactPixels(line(), 4, 1e-4, [0], [0])[0][0], 12);
  });
});
