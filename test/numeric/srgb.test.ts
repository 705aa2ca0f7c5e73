import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { encodeSrgb8, srgbDecode, srgbDecodeTable, srgbEncode } from '../../src/numeric/srgb.js';

const encode8 = (values: readonly number[]) => {
  const out = new Uint8Array(values.length);
  encodeSrgb8(out, 0, 1, Float32Array.from(values), 0, values.length);
  return [...out];
};

describe('srgbEncode and srgbDecode', () => {
  it('keep black and white', () => {
    expect(srgbEncode(0)).toBe(0);
    expect(srgbDecode(0)).toBe(0);
    expect(srgbEncode(1)).toBeCloseTo(1, 14);
    expect(srgbDecode(1)).toBe(1);
  });

  it('undo each other', () => {
    fc.assert(
      fc.property(fc.double({ min: 0, max: 1, noNaN: true }), (value) => {
        // the standard's rounded constants leave the branches 3e-8 apart where they meet; elsewhere it is
        // rounding only
        expect(Math.abs(srgbDecode(srgbEncode(value)) - value)).toBeLessThan(4e-8);
        expect(Math.abs(srgbEncode(srgbDecode(value)) - value)).toBeLessThan(5e-7);
      }),
    );
  });
});

describe('srgbDecodeTable', () => {
  it.each([8, 16] as const)('holds the linear value of every %i-bit code', (bitDepth) => {
    const table = srgbDecodeTable(bitDepth);
    const fullScale = 2 ** bitDepth - 1;
    expect(table.length).toBe(fullScale + 1);
    for (let code = 0; code <= fullScale; code += bitDepth === 8 ? 1 : 37) {
      expect(table[code]).toBe(Math.fround(srgbDecode(code / fullScale)));
    }
  });

  it('keeps every 16-bit step apart', () => {
    const table = srgbDecodeTable(16);
    for (let code = 1; code < table.length; code++)
      if (!(table[code] > table[code - 1])) expect.fail(`${code}`);
  });

  it('is made once', () => {
    expect(srgbDecodeTable(8)).toBe(srgbDecodeTable(8));
  });
});

describe('encodeSrgb8', () => {
  it('gives back every 8-bit code', () => {
    const codes = Array.from({ length: 256 }, (_, code) => code);
    expect(encode8([...srgbDecodeTable(8)])).toEqual(codes);
  });

  it('is the rounded formula for any value', () => {
    fc.assert(
      fc.property(fc.float({ min: 0, max: 1, noNaN: true }), (value) => {
        expect(encode8([value])).toEqual([Math.round(255 * srgbEncode(value))]);
      }),
      { numRuns: 2000 },
    );
  });

  it('changes code where the formula does: just below and just above each step', () => {
    for (let code = 0; code < 255; code++) {
      const step = srgbDecode((code + 0.5) / 255);
      // 1e-6 is more than float32 rounds and less than a hundredth of the narrowest step, 3e-4
      expect(encode8([step - 1e-6, step + 1e-6])).toEqual([code, code + 1]);
    }
  });

  it('clips, and takes what is no number as black', () => {
    const { NaN: notANumber, NEGATIVE_INFINITY, POSITIVE_INFINITY } = Number;
    expect(encode8([-0.5, -0, 1, 1.5, 1e9, POSITIVE_INFINITY, NEGATIVE_INFINITY, notANumber])).toEqual([
      0, 0, 255, 255, 255, 255, 0, 0,
    ]);
  });

  it('reads and writes where it is told', () => {
    const out = new Uint8Array(9).fill(7);
    encodeSrgb8(out, 1, 3, Float32Array.of(9, 0, 1, 0, 9), 1, 3);
    expect([...out]).toEqual([7, 0, 7, 7, 255, 7, 7, 0, 7]);
  });
});
