import { describe, expect, it } from 'vitest';
import { RunError } from '../../src/errors.js';
import { Arena } from '../../src/imaging/arena.js';

describe('Arena', () => {
  it('hands out room that does not overlap, from cache line to cache line, never at 0', () => {
    const arena = new Arena();
    const sizes = [1, 64, 65, 1000, 4];
    const addresses = sizes.map((size) => arena.allocate(size));
    for (const [i, address] of addresses.entries()) {
      expect(address % 64).toBe(0);
      expect(address).toBeGreaterThan(0);
      if (i > 0) expect(address).toBeGreaterThanOrEqual(addresses[i - 1] + sizes[i - 1]);
    }
  });

  it('grows, and views made before stay good', () => {
    const arena = new Arena();
    const early = arena.floats(arena.allocateFloats(10), 10);
    early.fill(0.5);
    const late = arena.floats(arena.allocateFloats(1e6), 1e6);
    late.fill(2);
    early[3] = 7;
    expect(arena.floats(early.byteOffset, 10)).toEqual(
      Float32Array.of(0.5, 0.5, 0.5, 7, 0.5, 0.5, 0.5, 0.5, 0.5, 0.5),
    );
    expect(new Arena(arena.memory).floats(late.byteOffset, 1)[0]).toBe(2); // as another thread sees it
  });

  it('gives back what was reserved since a mark', () => {
    const arena = new Arena();
    arena.allocate(100);
    const mark = arena.mark();
    const first = arena.allocate(5000);
    arena.release(mark);
    expect(arena.allocate(10)).toBe(first);
  });

  it('says so when the memory is used up, and can go on with less', () => {
    const arena = new Arena();
    expect(() => arena.allocate(5 * 2 ** 30)).toThrow(RunError);
    expect(() => arena.allocate(5 * 2 ** 30)).toThrow(/out of memory: .* 5120 MiB .*--oversample/);
    expect(arena.allocate(64)).toBe(64);
  });
});
