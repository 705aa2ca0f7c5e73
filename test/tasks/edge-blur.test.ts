import { describe, expect, it } from 'vitest';
import { edgeWidthUm } from '../../src/optics/edge-width.js';
import { bandLines } from '../../src/optics/otf.js';
import { edgeBlurAt } from '../../src/tasks/edge-blur.js';
import type { UpperLimit } from '../../src/tasks/rules.js';
import { benchAt, COLOUR, type RigParts, taskRig } from './rigs.js';

const PIXELS: UpperLimit = { atMost: 2, unit: 'px', perPixel: 1 };
const blur = (parts: RigParts, h: number, limit = PIXELS, accuracy: 'full' | 'rough' = 'full') => {
  const [bench, place] = benchAt(parts, h);
  return edgeBlurAt(bench, place, { kind: 'edge_blur', limit }, accuracy);
};

/** In pixels, straight from the optics. */
function width(parts: RigParts, h: number, direction: number, band = 0): number {
  const rig = taskRig(parts);
  const lines = bandLines(rig, h * 2, 0, rig.camera.bands[band]);
  return edgeWidthUm(lines, rig.mount.fNumber, rig.camera, direction) / 5;
}

describe('edge blur', () => {
  it.each([
    ['coma: along the radius', { W131: 2 }, 0],
    ['astigmatism, sagittal focus: along', { W222: 1 }, 0],
    ['astigmatism, tangential focus: across', { W222: 1, W220: -1 }, 90],
  ])('is the widest of all directions, %s', (_, waves, directionDeg) => {
    const found = blur({ waves }, 1);
    expect(found.directionDeg).toBe(directionDeg);
    let widest = 0;
    for (let angle = 0; angle <= 90; angle += 5) widest = Math.max(widest, width({ waves }, 1, angle));
    expect(found.value).toBeCloseTo(widest, 9);
    expect(found.tangential).toBe(width({ waves }, 1, 0));
    expect(found.sagittal).toBe(width({ waves }, 1, 90));
  });

  it('finds a direction in between where it is the widest', () => {
    // at the medial focus the blur is round in its second moment, but not in its shape
    const waves = { W222: 4, W220: -2 };
    const found = blur({ waves }, 1);
    expect(found.directionDeg).toBe(45);
    expect(found.value).toBeCloseTo(width({ waves }, 1, 45), 9);
    expect(found.value).toBeGreaterThan(1.05 * Math.max(found.tangential!, found.sagittal!)); // 4.98 and 4.72 pixels
  });

  it('is told in mm on the object where the rule is', () => {
    const inMm = { atMost: 0.2, unit: 'mm', perPixel: 0.1 } as const;
    expect(blur({ waves: { W131: 1 } }, 1, inMm).value).toBeCloseTo(
      0.1 * blur({ waves: { W131: 1 } }, 1).value,
      12,
    );
  });

  it('takes the worst band', () => {
    const parts = { camera: COLOUR, lens: { colour: { axial_um: { 460: 60 } } } };
    expect(blur(parts, 0)).toMatchObject({ band: 'blue', value: width(parts, 0, 0, 2) });
  });

  it('is within 1 % when it is only to be rough', () => {
    for (const waves of [{ W131: 2 }, { W222: 1.5, W220: -0.4 }, { W040: 1, W131: 3, W222: 2 }])
      expect(Math.abs(blur({ waves }, 1, PIXELS, 'rough').value / blur({ waves }, 1).value - 1)).toBeLessThan(
        0.012,
      );
  });
});
