/** Lenses whose coefficients were traced at several wavelengths. */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { wavelengthsOutsideTable, wavesAt } from '../../src/optics/colour.js';
import {
  bandShiftUm,
  distortionMap,
  distortionPercent,
  shiftWithinBandUm,
} from '../../src/optics/distortion.js';
import type { Band, Lens, Waves } from '../../src/optics/rig.js';
import { COEFFICIENTS } from '../../src/optics/rig.js';
import { wavefrontAt } from '../../src/optics/wavefront.js';
import { toLens } from '../../src/prescription/derive.js';
import { atWavelength, lensModel } from '../../src/prescription/lens-model.js';
import { FieldTracer } from '../../src/prescription/opd.js';
import { packhouseLens } from '../prescription/lenses.js';
import { sampleRig } from './samples.js';

const terms = (waves: Partial<Waves>): Waves => ({ ...sampleRig().lens.waves, ...waves });
const band = (...lines: [nm: number, weight: number][]): Band => ({
  name: 'x',
  lines: lines.map(([nm, weight]) => ({ nm, weight })),
});

const traced = sampleRig({
  waves: { W040: 1, W131: 2, W311: 5, W111: 0.5 },
  lens: {
    wavesByWavelength: [
      { nm: 450, waves: terms({ W040: 1.2, W131: 2, W311: 6, W111: 0.3 }) },
      { nm: 550, waves: terms({ W040: 1, W131: 2, W311: 5, W111: 0.5 }) },
      { nm: 650, waves: terms({ W040: 0.7, W131: 2, W311: 3, W111: 0.9 }) },
    ],
  },
});
const { lens } = traced;
const WHITE = band([450, 0.25], [550, 0.25], [650, 0.5]);

describe('the coefficients at a wavelength', () => {
  it('are those of the table, linear in between and held outside', () => {
    for (const { nm, waves } of lens.wavesByWavelength ?? []) expect(wavesAt(lens, nm)).toEqual(waves);
    expect(wavesAt(lens, 600).W040).toBeCloseTo(0.85, 15);
    expect(wavesAt(lens, 400)).toEqual(wavesAt(lens, 450));
    expect(wavesAt(lens, 800)).toEqual(wavesAt(lens, 650));
  });

  it('move with the ones of the lens itself at all wavelengths alike', () => {
    const turned: Lens = { ...lens, waves: { ...lens.waves, W040: 1.5, W131: 0 } };
    expect(wavesAt(turned, 550)).toEqual(turned.waves);
    expect(wavesAt(turned, 450)).toEqual({ ...wavesAt(lens, 450), W040: 1.7, W131: 0 });
    expect(wavesAt(turned, 600).W040).toBeCloseTo(1.35, 15);
  });

  it('stand at the own wavelength where the table has none there', () => {
    const [blue, , red] = lens.wavesByWavelength ?? [];
    const sparse: Lens = { ...lens, wavesByWavelength: [blue, red] };
    for (const nm of [450, 500, 550, 600, 650]) expect(wavesAt(sparse, nm)).toEqual(wavesAt(lens, nm));
    const single: Lens = { ...lens, wavesByWavelength: [blue] };
    expect(wavesAt(single, 450)).toEqual(blue.waves);
    expect(wavesAt(single, 650)).toEqual(lens.waves);
    expect(wavesAt({ ...lens, wavesByWavelength: [] }, 450)).toBe(lens.waves);
  });

  it('are missed past the table, which is said', () => {
    expect(wavelengthsOutsideTable(lens, [band([440, 0.5], [640, 0.5]), band([700, 1])])).toEqual([440, 700]);
  });
});

describe('image shifts that differ by wavelength', () => {
  it('move the band by the mean of its lines', () => {
    const map = distortionMap(lens, WHITE);
    const alone = WHITE.lines.map(({ nm }) => distortionMap(lens, band([nm, 1])));
    const mean = (of: (map: (typeof alone)[number]) => number) =>
      WHITE.lines.reduce((sum, { weight }, i) => sum + weight * of(alone[i]), 0);
    expect(map.a).toBeCloseTo(
      mean(({ a }) => a),
      15,
    );
    expect(map.c).toBeCloseTo(
      mean(({ c }) => c),
      15,
    );
    // -2 N lambda (W311 h^3 + W111 h) at h = 1 of 4 mm: 3 waves of W311 and 0.9 of W111 in red
    expect(alone[2].distorted(4)).toBeCloseTo(4 - 2 * 4 * 0.55e-3 * 3.9, 12);
  });

  it('leave in the pupil what the lines differ from it: together each line lands where it does alone', () => {
    fc.assert(
      fc.property(fc.double({ min: 0.01, max: 1, noNaN: true }), fc.constantFrom(450, 550, 650), (h, nm) => {
        const r = h * lens.fullFieldMm;
        const landing =
          distortionMap(lens, WHITE).distorted(r) + shiftWithinBandUm(lens, h, nm, WHITE) / 1000;
        expect(landing).toBeCloseTo(distortionMap(lens, band([nm, 1])).distorted(r), 13);
        // eps = -2 N lambda dW/dm at the stop in use
        const stopped = { ...traced, mount: { ...traced.mount, fNumber: 8 } };
        const { w11 } = wavefrontAt(stopped, r, 0, nm, WHITE);
        expect(-2 * 8 * nm * 1e-3 * w11).toBeCloseTo(shiftWithinBandUm(lens, h, nm, WHITE), 12);
      }),
      { numRuns: 50, seed: 1 },
    );
    expect(shiftWithinBandUm(lens, 1, 450, WHITE)).toBeLessThan(-1); // um: it is no trifle here
    expect(wavefrontAt(traced, 2, 0, 450).w11).toBeCloseTo(0, 15); // alone, all of it is in the warp
  });

  it('tell how far a band lands from the own wavelength', () => {
    for (const h of [0, 0.4, 1]) {
      const r = h * lens.fullFieldMm;
      const away = distortionMap(lens, WHITE).distorted(r) - distortionMap(lens).distorted(r);
      expect(bandShiftUm(lens, h, WHITE)).toBeCloseTo(1000 * away, 10);
    }
    expect(distortionPercent(lens, 1)).toBeCloseTo((-100 * 2 * 4 * 0.55e-3 * 5) / 4, 12);
  });

  it('change nothing where all wavelengths have the same coefficients', () => {
    const { wavesByWavelength: _, ...plain } = lens;
    const same: Lens = {
      ...plain,
      wavesByWavelength: [450, 550, 650].map((nm) => ({ nm, waves: lens.waves })),
      lateralUm: [
        [450, 2],
        [650, -1],
      ],
    };
    const without: Lens = { ...same, wavesByWavelength: undefined };
    expect(distortionMap(same, WHITE)).toEqual(distortionMap(without, WHITE));
    for (const nm of [450, 550, 650])
      expect(wavefrontAt({ ...traced, lens: same }, 1, 2, nm, WHITE)).toEqual(
        wavefrontAt({ ...traced, lens: without }, 1, 2, nm, WHITE),
      );
    for (const name of COEFFICIENTS) expect(wavesAt(same, 500)[name]).toBe(lens.waves[name]);
  });
});

it('a lens given by its surfaces: each line of a band lands where its real chief ray does, to the fifth order', () => {
  const rgb = band([450, 0.3], [550, 0.4], [650, 0.3]);
  /** Largest error over the lines at h = 1, mm. */
  const errorAt = (imageHeightMm: number) => {
    const prescription = packhouseLens({ field: { imageHeightMm } });
    const model = lensModel(prescription);
    const derived = toLens(
      prescription,
      rgb.lines.map(({ nm }) => nm),
      { relativeIllumination: 'cos4' },
    );
    return Math.max(
      ...rgb.lines.map(({ nm }) => {
        const middle = distortionMap(derived, rgb).distorted(imageHeightMm);
        const landing = middle + shiftWithinBandUm(derived, 1, nm, rgb) / 1000;
        return Math.abs(landing - new FieldTracer(atWavelength(model, nm), 1).chiefHeightMm);
      }),
    );
  };
  const [large, small] = [errorAt(1.2), errorAt(0.6)];
  expect(large / small).toBeGreaterThan(26); // 2^5 = 32 in the limit, less what the seventh order adds
  expect(large / small).toBeLessThan(38);
  // and it does matter that W311 differs by wavelength
  const derived = toLens(packhouseLens({ field: { imageHeightMm: 0.6 } }), [450, 650], {
    relativeIllumination: 'cos4',
  });
  const differenceMm = 2 * 4 * 0.55e-3 * (wavesAt(derived, 450).W311 - wavesAt(derived, 650).W311);
  expect(Math.abs(differenceMm)).toBeGreaterThan(2 * small);
});
