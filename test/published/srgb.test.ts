import { describe, expect, it } from 'vitest';
import { LUMINANCE_WEIGHTS, toBands } from '../../src/files/pictures/bands.js';
import { encodeSrgb8, srgbDecode, srgbEncode } from '../../src/numeric/srgb.js';

// Source: IEC 61966-2-1:1999. The constants are from memory and agree with encyclopaedia copies; the figures
// were computed from them with independent code. Limit: the branches differ by 3e-8 where they meet, and the
// figures are printed to nine decimals.
const LIMIT = 1e-7;

describe('sRGB, IEC 61966-2-1', () => {
  it.each([
    [0.001, 0.01292, 3],
    [0.0031308, 0.040449936, 10],
    [0.01, 0.099852823, 25],
    [0.05, 0.247800528, 63],
    [0.18, 0.46135613, 118],
    [0.5, 0.735356983, 188],
    [0.8, 0.906331753, 231],
  ])('encodes %d as %d, in 8 bits %i', (linear, encoded, code) => {
    expect(Math.abs(srgbEncode(linear) - encoded)).toBeLessThan(LIMIT);
    const out = new Uint8Array(1);
    encodeSrgb8(out, 0, 1, Float32Array.of(linear), 0, 1);
    expect(out[0]).toBe(code);
  });

  it.each([
    [0.04045, 0.003130805],
    [0.1, 0.010022826],
    [0.25, 0.050876088],
    [0.5, 0.21404114],
    [128 / 255, 0.2158605],
    [0.75, 0.522521554],
  ])('decodes %d as %d', (encoded, linear) => {
    expect(Math.abs(srgbDecode(encoded) - linear)).toBeLessThan(LIMIT);
  });
});

describe('luminance, ITU-R BT.709 (from memory)', () => {
  it('weighs red, green and blue by 0.2126, 0.7152 and 0.0722', () => {
    expect([...LUMINANCE_WEIGHTS]).toEqual([0.2126, 0.7152, 0.0722]);
    const planes = [0.2, 0.5, 0.8].map((value) => Float32Array.of(value));
    // 0.2126 * 0.2 + 0.7152 * 0.5 + 0.0722 * 0.8; float32 rounds by 3e-8
    expect(toBands({ width: 1, height: 1, planes }, ['mono']).planes[0][0]).toBeCloseTo(0.45788, 7);
  });
});
