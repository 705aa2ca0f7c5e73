import { describe, expect, test } from 'vitest';
import type { Waves } from '../../src/optics/rig.js';
import { exactField, modelWavefront } from '../../src/prescription/exact-field.js';
import { type Explained, explain, explainedWarnings } from '../../src/prescription/explained.js';
import { lensModel } from '../../src/prescription/lens-model.js';
import { packhouseLens, singlet } from './lenses.js';

const { reference } = lensModel(singlet());
const lens = { fNumber: 8, fullFieldMm: reference.paraxial.imageHeightMm, wavelengthNm: 550 };
const axis = exactField(reference, 0);
const waves: Waves = { W040: 1, W131: 0, W222: 0, W220: 0, W311: 0, W020: 0, W111: 0 };
const exactly = (of: Waves, h = 0) => {
  const field = exactField(reference, h);
  return { ...field, wavefrontMm: modelWavefront(field, of).map((value) => value * 550e-6) };
};

describe('share of the variance', () => {
  test('all of it where the wavefront is the terms', () => {
    const [found] = explain([exactly(waves)], axis, lens, waves);
    expect(found.share).toBeCloseTo(1, 12);
    expect(found.rmsLeftWaves).toBeLessThan(1e-12);
    // sigma of one wave of W040: 2 / (3 sqrt 5). Source: Mahajan, JOSA 73 (1983) 860 (cited from memory)
    expect(found.rmsWaves).toBeCloseTo(2 / (3 * Math.sqrt(5)), 10);
  });

  test('three quarters where the terms are half or three halves of it; below 0 where they are worse than nothing', () => {
    const share = (W040: number) => explain([exactly(waves)], axis, lens, { ...waves, W040 })[0].share;
    expect(share(0.5)).toBeCloseTo(0.75, 12);
    expect(share(1.5)).toBeCloseTo(0.75, 12);
    expect(share(0)).toBeCloseTo(0, 12);
    expect(share(-1)).toBeCloseTo(-3, 12);
  });

  test('tilt counts for nothing: W311 moves the spot, it does not shape it', () => {
    const field = exactly(waves, 1);
    const tilted = {
      ...field,
      wavefrontMm: field.wavefrontMm.map((value, i) => value + 0.01 * field.samples.m[i]),
    };
    expect(explain([tilted], axis, lens, { ...waves, W311: 40 })[0].share).toBeCloseTo(1, 9);
  });

  test('nothing is said where no light gets through', () => {
    const empty = new Float64Array(0);
    const dark = {
      ...axis,
      h: 1,
      samples: { m: empty, s: empty, weight: empty },
      wavefrontMm: empty,
      openShare: 0,
      illuminance: 0,
    };
    const [found] = explain([dark], axis, lens, waves);
    expect([found.share, found.rmsLeftWaves, found.rmsWaves, found.relativeIllumination]).toEqual([
      null,
      null,
      null,
      0,
    ]);
    expect(explainedWarnings([found], false).join()).toMatch(/At field 1 no light reaches the sensor/);
  });
});

test('distortion of the chief ray and of the terms', () => {
  const model = lensModel(packhouseLens());
  const field = exactField(model.reference, 0.5);
  const [found] = explain(
    [field],
    axis,
    { fNumber: 4, fullFieldMm: 4.6, wavelengthNm: 550 },
    { ...waves, W311: 10 },
  );
  expect(found.distortionPercent).toBeCloseTo(100 * (field.chiefHeightMm / 2.3 - 1), 9);
  // -2 N lambda W311 h^3 over h h'max
  expect(found.distortionOfTermsPercent).toBeCloseTo((-100 * 2 * 4 * 550e-6 * 10 * 0.25) / 4.6, 9);
});

describe('warnings', () => {
  const good: Explained = {
    field: 0.7,
    share: 0.95,
    rmsLeftWaves: 0.3,
    rmsWaves: 1.3,
    distortionPercent: -1,
    distortionOfTermsPercent: -1.05,
    openShare: 0.95,
    relativeIllumination: 0.9,
  };
  test('none where the terms carry', () => {
    expect(explainedWarnings([good], false)).toEqual([]);
    // a bad share of a wavefront that is good anyway is nothing to warn of
    expect(explainedWarnings([{ ...good, share: 0.1, rmsLeftWaves: 0.05, rmsWaves: 0.053 }], false)).toEqual(
      [],
    );
  });

  test.each<[string, Partial<Explained>, RegExp]>([
    [
      'low share',
      { share: 0.4 },
      /^At field 0.7 the five terms explain 40 % .*\(1.30 waves RMS in truth, 0.30 of them .*--best-fit/,
    ],
    ['negative share', { share: -2 }, /worse than no aberration at all/],
    ['distortion', { distortionOfTermsPercent: -1.2 }, /-1.00 % distortion, the terms -1.20 %/],
    ['vignetting', { openShare: 0.6 }, /cut 40 % of the beam/],
  ])('%s', (_, change, text) => {
    const warnings = explainedWarnings([{ ...good, ...change }], false);
    expect(warnings).toHaveLength(1);
    expect(warnings[0]).toMatch(text);
  });

  test('one warning a matter, with all field points', () => {
    const bad: Partial<Explained>[] = [
      { field: 0.5, share: 0.8 },
      { field: 0.8, share: 0.4, openShare: 0.8 },
      { field: 0.9, share: -1, openShare: 0.7 },
      { field: 1, share: -2, rmsLeftWaves: 2 },
      { field: 1.1, share: null, rmsLeftWaves: null, rmsWaves: null, openShare: 0 },
    ];
    const warnings = explainedWarnings(
      bad.map((change) => ({ ...good, ...change })),
      false,
    );
    expect(warnings).toEqual([
      expect.stringMatching(/^At field 0.5 .* 80 % .*, at field 0.8 40 % \(1.30, 0.30\)\. Higher orders/),
      expect.stringMatching(/^At field 0.9, 1 .* worse .*\(1.30, 1.30 waves RMS in truth, 0.30, 2.00 left/),
      expect.stringMatching(/^At field 0.8, 0.9 the surfaces cut 20 %, 30 % of the beam/),
      expect.stringMatching(/^At field 1.1 no light/),
    ]);
  });

  test('after a fit another fit is no cure', () => {
    expect(explainedWarnings([{ ...good, share: 0.4 }], true)[0]).not.toMatch(/best-fit/);
  });
});
