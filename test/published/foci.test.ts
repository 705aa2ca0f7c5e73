/** Where the foci of a lens lie: astigmatism, field curvature, spherical aberration. */
import { describe, expect, it } from 'vitest';
import { bestFocusUm } from '../../src/optics/focus.js';
import { bandLines, bandMtf } from '../../src/optics/otf.js';
import type { Waves } from '../../src/optics/rig.js';
import { zonesOf } from '../../src/optics/zones.js';
import { sampleRig } from '../optics/samples.js';

// 8 N^2 lambda in um, at f/4 and 550 nm
const WAVE_UM = 8 * 16 * 0.55;

function focus(waves: Partial<Waves>, h: number, lpPerMm: number) {
  return zonesOf(sampleRig({ waves }), { fields: [h], lpPerMm: [lpPerMm] }).zones[0].bestFocusUm;
}

describe('astigmatic foci and field curvature', () => {
  // Source: W. T. Welford, Aberrations of Optical Systems (cited from memory), confirmed by close real rays:
  // sensor shift to the sagittal focus -8 N^2 lambda W220 h^2, to the tangential focus -8 N^2 lambda (W220 +
  // W222) h^2
  it.each([0.3, 0.7, 1])('at h = %f', (h) => {
    // without spherical aberration and coma the phase across the overlap is linear, so the foci are those of
    // rays at any frequency
    for (const lpPerMm of [5, 40, 144]) {
      const { tangential, sagittal } = focus({ W222: 0.9, W220: 0.6 }, h, lpPerMm);
      expect(Math.abs(sagittal! + WAVE_UM * 0.6 * h * h)).toBeLessThan(0.01); // the accuracy of best focus
      expect(Math.abs(tangential! + WAVE_UM * 1.5 * h * h)).toBeLessThan(0.01);
    }
  });

  it('W220 > 0 curves the field toward the lens: the sensor has to come nearer', () => {
    expect(focus({ W220: 1 }, 1, 40).tangential).toBeLessThan(0);
  });

  it('lie three to one from the Petzval surface', () => {
    // Source: Born and Wolf, Principles of Optics, 5.5.3 (cited from memory): it lies at W220 - W222/2
    const { tangential, sagittal } = focus({ W222: 0.8, W220: 0.5 }, 1, 40);
    const petzval = -WAVE_UM * (0.5 - 0.4);
    expect((tangential! - petzval) / (sagittal! - petzval)).toBeCloseTo(3, 3); // 0.01 um in 28
  });
});

describe('focus of spherical aberration', () => {
  it('is at the least r.m.s. of the rays, W020 = -4/3 W040, at low frequencies', () => {
    // Source: Born and Wolf, 5.3; Welford (cited from memory). Where geometry rules, an MTF falls as 1 - 2
    // pi^2 f^2 <eps^2>; what is left goes with the frequency, as the rim that the shifted pupils do not share
    // does: 1.7 nu of the shift measured
    for (const W040 of [0.5, 1, -1])
      for (const lpPerMm of [1, 3, 9]) {
        const { tangential, sagittal } = focus({ W040 }, 0, lpPerMm);
        const expected = (-4 / 3) * W040 * WAVE_UM;
        const nu = lpPerMm * 4 * 550e-6;
        expect(Math.abs(tangential! / expected - 1)).toBeLessThan(2 * nu);
        expect(sagittal).toBe(tangential);
      }
  });

  it('W040 > 0 brings the marginal focus nearer the lens', () => {
    expect(focus({ W040: 1 }, 0, 60).tangential).toBeLessThan(0);
  });

  it.each([
    // Source: none outside; the MTF at W040 = 1, W020 = 0 and -1 from the table of the aberrated MTF, own
    // integration
    [0.1, 0.38070697957664446, 0.7812588207545564],
    [0.3, 0.09367841526004628, 0.4618866987872385],
    [0.5, 0.007822320769742425, 0.3172242155955889],
  ])('at %f of the cut-off is better than both the paraxial focus and W020 = -1', (nu, paraxial, middle) => {
    const lpPerMm = (nu * 1e6) / (550 * 4);
    const rig = sampleRig({ waves: { W040: 1 } });
    const at = (sensorShiftUm: number) => {
      const shifted = sampleRig({ waves: { W040: 1 }, mount: { sensorShiftUm } });
      return bandMtf(bandLines(shifted, 0, 0, rig.camera.bands[0]), 4, lpPerMm, 'tangential');
    };
    expect(Math.abs(at(0) - paraxial)).toBeLessThan(1e-7);
    expect(Math.abs(at(-WAVE_UM) - middle)).toBeLessThan(1e-7);
    const best = bestFocusUm(bandLines(rig, 0, 0, rig.camera.bands[0]), 4, lpPerMm, 'tangential')!;
    expect(at(best)).toBeGreaterThanOrEqual(middle - 1e-7);
    expect(best).toBeLessThan(0);
    expect(best).toBeGreaterThan(-2 * WAVE_UM); // before the marginal focus
  });
});
