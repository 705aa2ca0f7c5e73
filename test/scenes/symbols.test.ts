import { beforeAll, describe, expect, it } from 'vitest';
import { crateTags } from '../../scenes/draw/crate-tags.js';
import type { Label } from '../../scenes/draw/labels.js';
import { rasterise } from '../../scenes/draw/rasterise.js';
import { code128 } from '../../scenes/draw/symbols.js';

// What follows reads the symbols off the drawn picture, at the places that the labels give.
const drawing = crateTags({ columns: 1, rows: 3 });
const symbols = (category: string) => drawing.labels.filter((label) => label.category === category);
let samples: Uint8Array;
beforeAll(async () => {
  samples = await rasterise(drawing);
});

/** Whether the picture is dark at the middle of a module, counted from the symbol's top left. */
function darkModules(label: Label, modulePx: number): boolean[][] {
  const [[left, top], , [right, bottom]] = label.outline;
  const columns = (right - left) / modulePx;
  const rows = (bottom - top) / modulePx;
  return Array.from({ length: rows }, (_, row) =>
    Array.from({ length: columns }, (_, column) => {
      const x = Math.floor(left + (column + 0.5) * modulePx);
      const y = Math.floor(top + (row + 0.5) * modulePx);
      return samples[y * drawing.width + x] < 128;
    }),
  );
}

describe('the symbols of a tag', () => {
  it('are one of each kind, and each says something of its own', () => {
    for (const category of ['qr', 'data_matrix', 'code_128']) expect(symbols(category)).toHaveLength(3);
    expect(new Set(drawing.labels.map(({ text }) => text)).size).toBe(9);
  });

  it('are QR codes with finder and timing patterns', () => {
    // Source: ISO/IEC 18004 (from memory): 7 x 7 finder patterns in three corners, timing patterns of alternating modules in row and
    // column 6, and a side of 17 + 4 x version modules
    const finder = ['#######', '#.....#', '#.###.#', '#.###.#', '#.###.#', '#.....#', '#######'];
    for (const label of symbols('qr')) {
      const modules = darkModules(label, 5);
      const side = modules.length;
      expect(side).toBe(29);
      const corner = (row: number, column: number) =>
        modules.slice(row, row + 7).map((line) =>
          line
            .slice(column, column + 7)
            .map((dark) => (dark ? '#' : '.'))
            .join(''),
        );
      expect(corner(0, 0)).toEqual(finder);
      expect(corner(0, side - 7)).toEqual(finder);
      expect(corner(side - 7, 0)).toEqual(finder);
      for (let at = 8; at < side - 8; at++) {
        expect([modules[6][at], modules[at][6]]).toEqual([at % 2 === 0, at % 2 === 0]);
      }
    }
  });

  it('are Data Matrix codes with a solid L and a dotted L', () => {
    // Source: ISO/IEC 16022 (from memory): left and lower side solid, upper and right side alternating
    for (const label of symbols('data_matrix')) {
      const modules = darkModules(label, 4);
      const last = modules.length - 1;
      for (let at = 0; at <= last; at++) {
        expect([modules[at][0], modules[last][at]]).toEqual([true, true]);
        expect([modules[0][at], modules[last - at][last]]).toEqual([at % 2 === 0, at % 2 === 0]);
      }
    }
  });

  it('are Code 128 from start to stop character, with quiet zones', () => {
    // Source: ISO/IEC 15417 (from memory): characters of 11 modules, a stop of 13 with widths 2 3 3 1 1 1 2, 10 modules of quiet zone
    for (const label of symbols('code_128')) {
      const [[left, top], [right]] = label.outline;
      const row = Math.floor(top + 20) * drawing.width;
      const dark = Array.from(
        { length: (right - left) / 3 },
        (_, at) => samples[row + left + 3 * at + 1] < 128,
      );
      expect((dark.length - 13) % 11).toBe(0);
      expect(runs(dark).slice(-7)).toEqual([2, 3, 3, 1, 1, 1, 2]);
      for (let at = 1; at <= 30; at++) {
        expect(samples[row + left - at], `left ${at}`).toBeGreaterThan(200);
        expect(samples[row + right - 1 + at], `right ${at}`).toBeGreaterThan(200);
      }
    }
  });
});

describe('code128', () => {
  it('carries its check character', () => {
    // Source: ISO/IEC 15417 (from memory): in code set B a character's value is its ASCII code less 32, the start is 104, and the check
    // character is (104 + sum of position x value) mod 103. For 'AB': (104 + 33 + 2 x 34) mod 103 = 102, whose widths are 4 1 1 1 3 1.
    const dark = code128('AB')
      .path.split('M')
      .slice(1)
      .map((bar) =>
        bar
          .match(/^(\d+) 0h(\d+)/)!
          .slice(1)
          .map(Number),
      );
    const widths = dark.flatMap(([x, width], index) =>
      index + 1 < dark.length ? [width, dark[index + 1][0] - x - width] : [width],
    );
    expect(widths.slice(18, 24)).toEqual([4, 1, 1, 1, 3, 1]);
  });
});

/** Lengths of runs of equal values. */
function runs(values: readonly boolean[]): number[] {
  const lengths: number[] = [];
  values.forEach((value, at) => {
    if (at > 0 && value === values[at - 1]) lengths[lengths.length - 1]++;
    else lengths.push(1);
  });
  return lengths;
}
