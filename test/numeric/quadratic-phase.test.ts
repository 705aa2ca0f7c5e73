import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { gaussLegendre } from '../../src/numeric/gauss-legendre.js';
import { quadraticPhaseIntegral } from '../../src/numeric/quadratic-phase.js';

function closed(psi: number, alpha: number, beta: number): [number, number] {
  const out = new Float64Array(2);
  quadraticPhaseIntegral(psi, alpha, beta, out);
  return [out[0], out[1]];
}

/** The same integral, node by node. */
function summed(psi: number, alpha: number, beta: number): [number, number] {
  const { nodes, weights } = gaussLegendre(40 + 2 * Math.ceil(Math.abs(alpha) + Math.abs(beta)));
  let re = 0;
  let im = 0;
  nodes.forEach((t, i) => {
    const phase = psi + alpha * t * t + beta * t;
    re += weights[i] * Math.cos(phase);
    im += weights[i] * Math.sin(phase);
  });
  return [re, im];
}

describe('quadraticPhaseIntegral', () => {
  it("gives Fresnel's integrals", () => {
    // Source: Abramowitz and Stegun, table 7.7 (from memory): C(1) = 0.7798934, S(1) = 0.4382591, 7 decimals
    const [re, im] = closed(0, Math.PI / 2, 0);
    expect(Math.abs(re / 2 - 0.7798934)).toBeLessThan(0.5e-7);
    expect(Math.abs(im / 2 - 0.4382591)).toBeLessThan(0.5e-7);
  });

  it('gives the sinc of a linear phase', () => {
    for (const beta of [0, 1e-9, 0.3, 0.999999, 1, 7.5, 300]) {
      const [re, im] = closed(0, 0, beta);
      expect(Math.abs(re - (beta === 0 ? 2 : (2 * Math.sin(beta)) / beta))).toBeLessThan(1e-12);
      expect(im).toBeCloseTo(0, 15);
    }
  });

  it('agrees with the sum over nodes for any phase', () => {
    const scale = fc.constantFrom(1e-5, 1e-4, 2e-4, 1e-3, 0.1, 1, 10, 60, 300);
    const part = fc.integer({ min: -10000, max: 10000 }).map((step) => step / 10000);
    fc.assert(
      fc.property(part, scale, part, scale, part, (psi, alphaScale, a, betaScale, b) => {
        const alpha = alphaScale * a;
        const beta = betaScale * b;
        const [re, im] = closed(9 * psi, alpha, beta);
        const [re0, im0] = summed(9 * psi, alpha, beta);
        // 2e-9: the term left out below alpha = 1e-4; elsewhere 6e-12 sqrt(1 / alpha) from the table
        expect(Math.hypot(re - re0, im - im0)).toBeLessThan(3e-9);
      }),
      { numRuns: 400 },
    );
  });

  it('has no step where one formula hands over to the next', () => {
    const cases = [
      [1e-4 * (1 - 1e-12), 1e-4 * (1 + 1e-12), 0.7],
      [8 ** 2 * (1 - 1e-12), 8 ** 2 * (1 + 1e-12), 0],
      [2 * (1 - 1e-12), 2 * (1 + 1e-12), 4], // the stationary point enters at beta = 2 alpha
    ];
    for (const [low, high, beta] of cases) {
      const below = closed(0.2, low, beta);
      const above = closed(0.2, high, beta);
      expect(Math.hypot(below[0] - above[0], below[1] - above[1])).toBeLessThan(3e-9);
    }
  });
});
