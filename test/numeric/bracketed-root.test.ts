import { describe, expect, it } from 'vitest';
import { bracketedRoot } from '../../src/numeric/bracketed-root.js';

const rootOf = (f: (x: number) => number, a: number, b: number) => bracketedRoot(f, a, b, f(a), f(b), 1e-12);

describe('bracketedRoot', () => {
  it('finds known zeros', () => {
    expect(rootOf((x) => x * x - 2, 0, 2)).toBeCloseTo(Math.SQRT2, 11);
    expect(rootOf(Math.cos, 0, 3)).toBeCloseTo(Math.PI / 2, 11);
    expect(rootOf((x) => 1 - x, 0.5, 40)).toBeCloseTo(1, 11);
  });

  it('does not crawl where false position alone does', () => {
    let calls = 0;
    const steep = (x: number) => {
      calls++;
      return x ** 9 - 1e-3;
    };
    expect(rootOf(steep, 0, 2)).toBeCloseTo(1e-3 ** (1 / 9), 10);
    expect(calls).toBeLessThan(40); // false position alone takes thousands
  });

  it('takes a zero at an end', () => {
    expect(rootOf((x) => x - 2, 1, 2)).toBe(2);
  });
});
