import fc from 'fast-check';
import { describe, expect, it, test } from 'vitest';
import { sceneShares, turnOf } from '../../src/dataset/shares.js';

describe('turnOf', () => {
  it('divides any number of pictures as the shares say, to within two, and counts each part on its own', () => {
    const part = fc.option(fc.integer({ min: 1, max: 20 }), { nil: undefined });
    fc.assert(
      fc.property(part, part, fc.integer({ min: 1, max: 20 }), (train, val, test) => {
        const shares = Object.fromEntries(
          Object.entries({ train, val, test }).filter(([, share]) => share !== undefined),
        );
        const sum = (train ?? 0) + (val ?? 0) + test;
        const counts: Record<string, number> = { train: 0, val: 0, test: 0 };
        for (let picture = 0; picture < 200; picture++) {
          const { split, turn } = turnOf(shares, picture);
          expect(turn).toBe(counts[split!]++);
          for (const [name, share] of Object.entries(shares))
            expect(Math.abs(counts[name] - ((picture + 1) * share!) / sum)).toBeLessThan(2);
        }
      }),
      { numRuns: 40 },
    );
  });

  test('no shares: one part', () => {
    expect(turnOf(undefined, 41)).toEqual({ turn: 41 });
  });
});

describe('sceneShares', () => {
  it('gives every scene to one part, at least one to each, the shares as near as can be', () => {
    const shares = { train: 0.8, val: 0.1, test: 0.1 };
    for (const count of [3, 4, 10, 57, 100]) {
      const { train, val, test } = sceneShares({ shares, seed: 3 }, count);
      expect([...train!, ...val!, ...test!].sort((a, b) => a - b)).toEqual([...Array(count).keys()]);
      expect(val!.length).toBe(Math.max(1, Math.round(count * 0.1)));
      expect(test!.length).toBeGreaterThanOrEqual(1);
    }
  });

  it('draws them from the seed', () => {
    const of = (seed: number) => sceneShares({ shares: { train: 1, val: 1 }, seed }, 40);
    expect(of(3)).toEqual(of(3));
    expect(of(3)).not.toEqual(of(4));
  });

  it('refuses fewer scenes than parts', () => {
    expect(() => sceneShares({ shares: { train: 1, val: 1, test: 1 }, seed: 1 }, 2)).toThrow(
      'shares: there are fewer scenes than parts, and no two parts show the same scene, found 2 scenes for train, val, test. Allowed: 3 scenes or more.',
    );
  });
});
