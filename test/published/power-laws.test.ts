/** How aberrations grow with aperture and field. */
import { describe, expect, it } from 'vitest';
import { distortionMap } from '../../src/optics/distortion.js';
import type { Waves } from '../../src/optics/rig.js';
import { type LocalWavefront, wavefrontAt } from '../../src/optics/wavefront.js';
import { sampleRig } from '../optics/samples.js';

// Source: Born and Wolf, Principles of Optics, 5.3 (cited from memory): W040, W131, W222, W220 go with
// aperture r and field h as r^4 h^0, r^3 h^1, r^2 h^2, r^2 h^2; halving the aperture divides them by 16, 8,
// 4, 4, halving the field by 1, 2, 4, 4
const LAWS: [keyof Waves, keyof LocalWavefront, number, number][] = [
  ['W040', 'w40', 4, 0],
  ['W131', 'w31', 3, 1],
  ['W222', 'w22', 2, 2],
  ['W220', 'w20', 2, 2],
];

describe('power laws', () => {
  it.each(LAWS)('%s in the pupil of a field point', (coefficient, term, inAperture, inField) => {
    const at = (h: number, stop: number) => {
      const rig = sampleRig({ waves: { [coefficient]: 0.9 }, mount: { fNumber: 4 * stop } });
      return wavefrontAt(rig, 4 * h, 0, 550)[term];
    };
    // 1e-12: rounding
    for (const h of [0.25, 0.5, 1])
      for (const stop of [1, 1.4, 2, 4])
        expect(Math.abs(at(h, stop) - 0.9 * h ** inField * stop ** -inAperture)).toBeLessThan(1e-12);
  });

  it('the transverse blur of a term goes with the aperture as one power less', () => {
    // Source: Born and Wolf, 5.3 (from memory): 3, 2, 1, 1; eps = -2 N lambda grad W, and N goes as 1/r
    for (const [coefficient, term, inAperture] of LAWS) {
      const blur = (stop: number) => {
        const rig = sampleRig({ waves: { [coefficient]: 0.9 }, mount: { fNumber: 4 * stop } });
        return 2 * 4 * stop * 0.55 * Number(wavefrontAt(rig, 4, 0, 550)[term]);
      };
      expect(blur(2) / blur(1)).toBeCloseTo(2 ** (1 - inAperture), 12);
    }
  });

  it('W311: distortion grows with the cube of the field and does not change with the stop', () => {
    const map = distortionMap(sampleRig({ waves: { W311: 3 } }).lens);
    const shift = (h: number) => map.distorted(4 * h) - 4 * h;
    expect(shift(1) / shift(0.5)).toBeCloseTo(8, 9);
    const stopped = distortionMap(sampleRig({ waves: { W311: 3 }, mount: { fNumber: 8 } }).lens);
    expect(stopped.distorted(4)).toBe(map.distorted(4));
  });
});
