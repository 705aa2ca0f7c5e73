import { describe, expect, it } from 'vitest';
import {
  axialColourUm,
  bandLateralColourUm,
  lateralColourUm,
  wavelengthsOutsideTable,
} from '../../src/optics/colour.js';
import { sampleRig } from './samples.js';

const { lens } = sampleRig({
  lens: {
    axialUm: [
      [450, 12],
      [650, -5],
    ],
    lateralUm: [
      [450, 1.4],
      [650, -0.8],
    ],
  },
});

const band = (...nm: number[]) => ({ name: 'x', lines: nm.map((at) => ({ nm: at, weight: 1 / nm.length })) });

describe('colour of a lens', () => {
  it('goes through the points of its table, and through 0 at its own wavelength', () => {
    expect([450, 550, 650].map((nm) => axialColourUm(lens, nm))).toEqual([12, 0, -5]);
    expect([450, 550, 650].map((nm) => lateralColourUm(lens, nm))).toEqual([1.4, 0, -0.8]);
  });

  it('takes the word of a table that has a value at the own wavelength', () => {
    expect(axialColourUm({ ...lens, axialUm: [[550, 3]] }, 550)).toBe(3);
  });

  it('falls from point to point without overshoot, and is flat outside', () => {
    let before = axialColourUm(lens, 450);
    for (let nm = 455; nm <= 650; nm += 5) {
      const value = axialColourUm(lens, nm);
      expect(value).toBeLessThan(before);
      before = value;
    }
    expect(axialColourUm(lens, 400)).toBe(12);
    expect(axialColourUm(lens, 1000)).toBe(-5);
  });

  it('is 0 without a table', () => {
    const plain = sampleRig().lens;
    expect([axialColourUm(plain, 400), lateralColourUm(plain, 700)]).toEqual([0, 0]);
  });

  it('of a band is the mean of its lines by their weights', () => {
    const lines = [
      { nm: 450, weight: 0.25 },
      { nm: 650, weight: 0.75 },
    ];
    expect(bandLateralColourUm(lens, { name: 'x', lines })).toBeCloseTo(0.25 * 1.4 - 0.75 * 0.8, 15);
  });

  it('names each wavelength outside a table once', () => {
    expect(wavelengthsOutsideTable(lens, [band(700, 500), band(440, 700), band(450, 650)])).toEqual([
      440, 700,
    ]);
    expect(wavelengthsOutsideTable(sampleRig().lens, [band(300)])).toEqual([]);
    // the lens's own wavelength is known, too
    expect(wavelengthsOutsideTable({ ...lens, wavelengthNm: 700, lateralUm: [] }, [band(690, 710)])).toEqual([
      710,
    ]);
  });
});
