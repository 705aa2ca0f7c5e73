import { describe, expect, it } from 'vitest';
import { pixelMtf } from '../../src/optics/otf.js';
import { wavefrontAt } from '../../src/optics/wavefront.js';
import { zonesOf } from '../../src/optics/zones.js';
import { contrastAt } from '../../src/tasks/contrast.js';
import { autocorrelation } from '../optics/brute-force.js';
import { benchAt, COLOUR, type RigParts, taskRig } from './rigs.js';

const contrast = (parts: RigParts, h: number, lpPerMm: number) => {
  const [bench, place] = benchAt(parts, h);
  return contrastAt(bench, place, { kind: 'contrast', lpPerMm, atLeast: 0.3 });
};

const STRONG = { W040: 0.4, W131: 1.2, W222: 0.9, W220: -0.5 };

describe('contrast', () => {
  it('is that of zones, along and across the radius, to the last digit', () => {
    for (const h of [0, 0.5, 1]) {
      const { mtf } = zonesOf(taskRig({ waves: STRONG }), { fields: [h], lpPerMm: [40] }).zones[0];
      const { tangential, sagittal, value } = contrast({ waves: STRONG }, h, 40);
      expect([tangential, sagittal]).toEqual([mtf[0].camera.tangential, mtf[0].camera.sagittal]);
      expect(value).toBeLessThanOrEqual(Math.min(tangential!, sagittal!));
    }
  });

  it('takes the worst of all directions', () => {
    // at the medial focus of pure astigmatism both directions are alike and the diagonals are the worst
    const rig = { waves: { W222: 1, W220: -0.5 } };
    const { tangential, sagittal, value, directionDeg } = contrast(rig, 1, 50);
    expect(tangential).toBeCloseTo(sagittal!, 6);
    const wavefront = wavefrontAt(taskRig(rig), 2, 0, 550);
    const nu = 50 * 0.55e-3 * 4;
    const pixel = pixelMtf(taskRig(rig).camera, 50);
    let lowest = 1;
    let at = 0;
    for (let angle = 0; angle <= 90; angle += 3) {
      const mtf = pixel * Math.hypot(...autocorrelation(wavefront, nu, angle, 300));
      if (mtf < lowest) [lowest, at] = [mtf, angle];
    }
    // the ragged rim of the sampled pupil: some 5e-4; the angles of the brute force: 1.5 degrees
    expect(Math.abs(value - lowest)).toBeLessThan(1e-3);
    expect(Math.abs(directionDeg! - at)).toBeLessThan(3);
    expect(value).toBeLessThanOrEqual(tangential!);
  });

  it('takes the worst band and names it', () => {
    const parts = { camera: COLOUR, lens: { colour: { axial_um: { 460: 40, 620: -10 } } } };
    const byBand = zonesOf(taskRig(parts), { fields: [0], lpPerMm: [40] }).zones;
    const lowest = byBand.reduce((a, b) => (b.mtf[0].camera.tangential < a.mtf[0].camera.tangential ? b : a));
    expect(contrast(parts, 0, 40)).toMatchObject({
      band: lowest.band,
      value: lowest.mtf[0].camera.tangential,
    });
  });

  it('is none above half a cycle a pixel, where the camera shows aliases', () => {
    expect(contrast({}, 0, 100).value).toBeGreaterThan(0.3); // half a cycle of 5 um
    expect(contrast({}, 0, 100.1).value).toBe(0);
  });
});
