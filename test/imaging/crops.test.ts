import { describe, expect, it } from 'vitest';
import { cropOf, planCrops } from '../../src/imaging/crops.js';
import type { Raster } from '../../src/imaging/raster.js';
import { distortionMap, distortionWaves } from '../../src/optics/distortion.js';
import { sampleRig } from '../optics/samples.js';

const [WIDTH, HEIGHT] = [1000, 800];

function rigWith(percent: number) {
  const W311 = distortionWaves(percent, 4, 550, 2.2);
  return sampleRig({ waves: { W311 }, lens: { fullFieldMm: 2.2 }, camera: { pixels: [WIDTH, HEIGHT] } });
}

function blank(width = WIDTH, height = HEIGHT): Raster {
  return { width, height, planes: [new Float32Array(width * height)] };
}

describe('the places of a sheet', () => {
  it('are the axis, half-way to the corner, the edge and the corner, as far as the crops fit in', () => {
    const { crops, width, height } = planCrops(rigWith(0), blank(), 1);
    expect({ width, height }).toEqual({ width: 160, height: 120 });
    expect(crops.map(({ name, ideal }) => [name, ideal.left, ideal.top])).toEqual([
      ['axis', 420, 340],
      // (499.5 + 999) / 2 - 79.5 = 669.75 and 199.75 - 59.5 = 140.25, to whole pixels
      ['half field', 670, 140],
      ['edge', 840, 340],
      ['corner', 840, 0],
    ]);
  });

  it('are the same pixels in scene and picture where nothing is distorted', () => {
    for (const { ideal, recorded } of planCrops(rigWith(0), blank(), 1).crops)
      expect(recorded).toEqual(ideal);
  });

  it.each([-6, 6])(
    'follow the light under %s percent of distortion, both crops within their frames',
    (percent) => {
      const rig = rigWith(percent);
      const map = distortionMap(rig.lens);
      const { crops, width, height } = planCrops(rig, blank(), 1);
      const radiusPx = ({ left, top }: { left: number; top: number }) =>
        Math.hypot(left + (width - WIDTH) / 2, top + (height - HEIGHT) / 2);
      for (const { ideal, recorded } of crops) {
        const landedPx = map.distorted(radiusPx(ideal) * 0.00345) / 0.00345;
        expect(Math.abs(radiusPx(recorded) - landedPx)).toBeLessThan(1.5); // two roundings to whole pixels in x and y
        for (const { left, top } of [ideal, recorded]) {
          expect(Math.min(left, WIDTH - width - left, top, HEIGHT - height - top)).toBeGreaterThanOrEqual(0);
        }
      }
      expect(radiusPx(crops[3].recorded) < radiusPx(crops[3].ideal)).toBe(percent < 0);
    },
  );

  it('move to where the scene shows something, and no farther than a crop', () => {
    const scene = blank();
    for (let i = 0; i < 40; i++) scene.planes[0][(330 + i) * WIDTH + 360 + i] = 1; // a line left of the axis
    const [axis] = planCrops(rigWith(0), scene, 1).crops;
    expect(axis.ideal.left).toBeLessThan(420);
    expect(axis.ideal.left).toBeGreaterThanOrEqual(420 - 120);
    expect(axis.xMm).toBeLessThan(0);
  });

  it('fit into frames smaller than a crop', () => {
    const rig = sampleRig({ camera: { pixels: [90, 31] } });
    const { crops, width, height } = planCrops(rig, blank(90, 31), 1);
    expect({ width, height }).toEqual({ width: 45, height: 15 });
    expect(crops[3].ideal).toEqual({ left: 45, top: 0 });
  });
});

describe('a crop', () => {
  it('averages the samples of an oversampled scene', () => {
    const scene: Raster = { width: 4, height: 4, planes: [Float32Array.from({ length: 16 }, (_, i) => i)] };
    const { planes } = cropOf(scene, { left: 1, top: 0 }, { width: 1, height: 2 }, 2);
    expect([...planes[0]]).toEqual([(2 + 3 + 6 + 7) / 4, (10 + 11 + 14 + 15) / 4]);
  });
});
