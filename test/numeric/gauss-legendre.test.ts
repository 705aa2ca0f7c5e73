import { describe, expect, it } from 'vitest';
import { gaussLegendre } from '../../src/numeric/gauss-legendre.js';

describe('gaussLegendre', () => {
  it('has the closed-form nodes and weights of 2 and 3 points', () => {
    // Source: Abramowitz and Stegun, Handbook of Mathematical Functions, table 25.4 (from memory); rounding
    // only
    const two = gaussLegendre(2);
    expect(two.nodes[1]).toBeCloseTo(Math.sqrt(1 / 3), 14);
    expect(two.weights[0]).toBeCloseTo(1, 14);
    const three = gaussLegendre(3);
    expect(three.nodes[1]).toBeCloseTo(0, 14);
    expect(three.nodes[2]).toBeCloseTo(Math.sqrt(3 / 5), 14);
    expect(three.weights[1]).toBeCloseTo(8 / 9, 14);
    expect(three.weights[2]).toBeCloseTo(5 / 9, 14);
  });

  it.each([1, 4, 7, 32, 150, 800])('integrates every power up to 2n - 1 with %i nodes', (n) => {
    const { nodes, weights } = gaussLegendre(n);
    for (const power of new Set([0, 1, n, 2 * n - 2, 2 * n - 1])) {
      const sum = nodes.reduce((total, x, i) => total + weights[i] * x ** power, 0);
      const exact = power % 2 === 0 ? 2 / (power + 1) : 0;
      // rounding of the recurrence grows with n: 9e-13 measured at 800
      expect(Math.abs(sum - exact)).toBeLessThan(1e-14 + 2e-15 * n);
    }
  });

  it('has rising nodes, symmetric about 0', () => {
    const { nodes } = gaussLegendre(33);
    for (let i = 0; i < 33; i++) {
      expect(Math.abs(nodes[i] + nodes[32 - i])).toBeLessThan(1e-15);
      if (i > 0) expect(nodes[i]).toBeGreaterThan(nodes[i - 1]);
    }
  });

  it('computes a rule once', () => {
    expect(gaussLegendre(12)).toBe(gaussLegendre(12));
  });
});
