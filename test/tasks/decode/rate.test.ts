import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { decidedRate, successesNeeded } from '../../../src/tasks/decode/rate.js';
import type { Outcome } from '../../../src/tasks/decode/reading.js';

const outcomes = (text: string): Outcome[] =>
  [...text].map((letter) => ({ r: 'read', u: 'unread', m: 'misread' })[letter] as Outcome);

describe('decidedRate', () => {
  it('ends when there are enough successes', () => {
    expect(decidedRate(outcomes('rrrrrrrru'), { trials: 10, successAtLeast: 0.8 })).toMatchObject({
      value: 1,
      trials: 8,
      met: true,
    });
  });

  it('ends when there are more failures than the rule leaves room for', () => {
    expect(decidedRate(outcomes('rrururrrrr'), { trials: 10, successAtLeast: 0.9 })).toMatchObject({
      value: 3 / 5,
      trials: 5,
      read: 3,
      met: false,
    });
  });

  it('counts a misread as a failure, and tells it', () => {
    expect(decidedRate(outcomes('rmmrr'), { trials: 10, successAtLeast: 0.9 })).toMatchObject({
      trials: 3,
      read: 1,
      misread: 2,
      met: false,
    });
  });

  it('waits for tries that are still under way', () => {
    const rule = { trials: 4, successAtLeast: 0.5 };
    expect(decidedRate(['read', undefined, 'read', 'read'], rule)).toBeUndefined();
    expect(decidedRate(['read', 'read', undefined, undefined], rule)?.met).toBe(true);
  });

  it('never changes the verdict by ending early, and the rate it tells lies on the side of the verdict', () => {
    const letters = fc.array(fc.constantFrom<Outcome>('read', 'unread', 'misread'), {
      minLength: 1,
      maxLength: 60,
    });
    const limit = fc.double({ min: 0.01, max: 1, noNaN: true });
    fc.assert(
      fc.property(letters, limit, (all, successAtLeast) => {
        const rule = { trials: all.length, successAtLeast };
        const rate = decidedRate(all, rule);
        const read = all.filter((outcome) => outcome === 'read').length;
        expect(rate?.met).toBe(read >= successesNeeded(rule));
        expect(rate!.value >= successAtLeast - 1e-9).toBe(rate!.met);
      }),
    );
  });

  it('needs 49 of 50 for 0.98, not 50 for the sake of rounding', () => {
    expect(successesNeeded({ trials: 50, successAtLeast: 0.98 })).toBe(49);
    expect(successesNeeded({ trials: 10, successAtLeast: 0.3 })).toBe(3);
    expect(successesNeeded({ trials: 3, successAtLeast: 1 })).toBe(3);
  });
});
