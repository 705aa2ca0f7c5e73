import { describe, expect, it } from 'vitest';
import { smoothMaximum } from '../../src/numeric/smooth-maximum.js';

describe('smoothMaximum', () => {
  it('finds the vertex of a parabola', () => {
    // golden-section search stops at 1e-8 of the interval
    expect(smoothMaximum((x) => 3 - (x - 0.37) ** 2, -1, 2)).toBeCloseTo(0.37, 7);
  });

  it('finds the top of a cosine to the accuracy of its 11 points', () => {
    expect(Math.abs(smoothMaximum((x) => Math.cos(x - 0.2), -1, 1) - 0.2)).toBeLessThan(1e-6);
    // on offset ground and in other units
    expect(Math.abs(smoothMaximum((x) => 1e6 + Math.cos((x - 1020) / 100), 950, 1080) - 1020)).toBeLessThan(
      0.1,
    );
  });

  it('takes the higher of two tops', () => {
    const twoTops = (x: number) => 0.2 * x - (x * x - 1) ** 2;
    expect(smoothMaximum(twoTops, -1.5, 1.5)).toBeCloseTo(1.0241, 3);
  });

  it('takes an end where the function rises to it', () => {
    expect(smoothMaximum((x) => x, 2, 5)).toBeCloseTo(5, 6);
    expect(smoothMaximum((x) => -x, 2, 5)).toBeCloseTo(2, 6);
  });

  it('asks for as many values as it was told', () => {
    let calls = 0;
    smoothMaximum(
      (x) => {
        calls++;
        return -x * x;
      },
      -1,
      1,
      7,
    );
    expect(calls).toBe(7);
  });
});
