import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { coverage } from '../../../src/charts/coverage.js';
import { drawSymbol, type ModuleMap } from '../../../src/tasks/decode/draw-symbol.js';

/** A symbol in characters, # dark. */
function symbol(rows: readonly string[]) {
  const dark = Uint8Array.from(rows.join(''), (character) => (character === '#' ? 1 : 0));
  return { width: rows[0].length, height: rows.length, dark };
}
const L_SHAPE = symbol(['##.', '#..', '#.#']);

/** Turned by an angle about the symbol's corner at (x, y). */
function turned(degrees: number, module: number, x: number, y: number): ModuleMap {
  const [c, s] = [module * Math.cos((degrees * Math.PI) / 180), module * Math.sin((degrees * Math.PI) / 180)];
  return { xu: c, yu: s, xv: -s, yv: c, x0: x, y0: y };
}

function draw(shape: ReturnType<typeof symbol>, map: ModuleMap, width = 16, height = 14): Float64Array {
  const out = new Float64Array(width * height).fill(Number.NaN);
  drawSymbol(shape, map, out, width, height);
  return out;
}

describe('drawSymbol', () => {
  it('draws modules of whole samples as they are', () => {
    const out = draw(L_SHAPE, { xu: 2, xv: 0, x0: 3, yu: 0, yv: 1, y0: 1 }, 10, 5);
    const row = (at: number) => [...out.subarray(10 * at, 10 * (at + 1))];
    expect(row(0)).toEqual([0, 0, 0, 0, 0, 0, 0, 0, 0, 0]);
    expect(row(1)).toEqual([0, 0, 0, 1, 1, 1, 1, 0, 0, 0]);
    expect(row(2)).toEqual([0, 0, 0, 1, 1, 0, 0, 0, 0, 0]);
    expect(row(3)).toEqual([0, 0, 0, 1, 1, 0, 0, 1, 1, 0]);
  });

  it('shares out the samples on a border', () => {
    const out = draw(symbol(['#']), { xu: 1.5, xv: 0, x0: 1.25, yu: 0, yv: 1, y0: 0.75 }, 4, 3);
    // x from 1.25 to 2.75, y from 0.75 to 1.75
    expect([...out]).toEqual([0, 0.1875, 0.1875, 0, 0, 0.5625, 0.5625, 0, 0, 0, 0, 0]);
  });

  it('is the exact coverage of each sample, as the charts draw it', () => {
    const angle = fc.double({ min: -180, max: 180, noNaN: true });
    const shift = fc.double({ min: -1, max: 1, noNaN: true });
    fc.assert(
      fc.property(angle, shift, shift, (degrees, dx, dy) => {
        const map = turned(degrees, 2.3, 8 + dx, 7 + dy);
        const out = draw(symbol(['#']), map);
        const [c, s] = [Math.cos((degrees * Math.PI) / 180), Math.sin((degrees * Math.PI) / 180)];
        const along = c * map.x0 + s * map.y0;
        const across = -s * map.x0 + c * map.y0;
        const halfPlanes = [
          { nx: c, ny: s, c: along + 2.3 },
          { nx: -c, ny: -s, c: -along },
          { nx: -s, ny: c, c: across + 2.3 },
          { nx: s, ny: -c, c: -across },
        ];
        for (let row = 0; row < 14; row++)
          for (let column = 0; column < 16; column++) {
            const expected = coverage({ halfPlanes } as never, column + 0.5, row + 0.5, 1);
            expect(Math.abs(out[16 * row + column] - expected)).toBeLessThan(1e-9); // rounding; the charts' own is 1e-12
          }
      }),
      { numRuns: 60 },
    );
  });

  it('keeps the area of all dark modules, turned, stretched or mirrored', () => {
    const sum = (map: ModuleMap) => draw(L_SHAPE, map).reduce((total, value) => total + value, 0);
    for (const degrees of [0, 17, 90, 123.4, 270])
      expect(sum(turned(degrees, 1.3, 8, 7))).toBeCloseTo(5 * 1.3 ** 2, 9);
    expect(sum({ xu: -1.3, xv: 0.2, x0: 8, yu: 0.1, yv: 2, y0: 4 })).toBeCloseTo(
      5 * (1.3 * 2 + 0.2 * 0.1),
      9,
    );
  });

  it('cuts off what lies outside', () => {
    const whole = draw(L_SHAPE, turned(30, 2, 3, 1), 24, 20);
    const cut = draw(L_SHAPE, turned(30, 2, 3 - 4, 1 - 2), 24, 20);
    for (let row = 0; row < 18; row++)
      for (let column = 0; column < 20; column++)
        expect(cut[24 * row + column]).toBeCloseTo(whole[24 * (row + 2) + column + 4], 9);
  });
});
