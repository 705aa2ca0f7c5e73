import { describe, expect, it } from 'vitest';
import { wilson } from '../../src/tasks/decode/rate.js';

describe("Wilson's score interval, 95 %", () => {
  // Source: R. G. Newcombe, Statistics in Medicine 17 (1998) 857, table I, method 3 (from memory), printed to 4 decimals
  it.each([
    [81, 263, 0.2553, 0.3662],
    [15, 148, 0.0624, 0.1605],
    [0, 20, 0, 0.1611],
    [1, 29, 0.0061, 0.1718],
  ])('of %d in %d', (successes, trials, low, high) => {
    const interval = wilson(successes, trials);
    expect(Math.abs(interval[0] - low)).toBeLessThan(0.51e-4);
    expect(Math.abs(interval[1] - high)).toBeLessThan(0.51e-4);
  });

  it('mirrors', () => {
    const [low, high] = wilson(20, 20);
    expect([low, high]).toEqual([1 - wilson(0, 20)[1], 1].map((value) => expect.closeTo(value, 12)));
  });
});
