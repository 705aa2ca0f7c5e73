import { describe, expect, it } from 'vitest';
import { developRows } from '../../src/camera/develop.js';
import { exposeRows } from '../../src/camera/expose.js';
import { simulateSensor } from '../../src/camera/simulate-sensor.js';
import { exposure, flat, QUIET, SENSOR, speckle } from './samples.js';

describe('developRows', () => {
  it('gives back the light to half a raw number where there is no noise', () => {
    const pixels = [31, 8] as const;
    const light = [speckle(pixels, 1)];
    // shot noise of 1 in 3e5 at white, far below a step of 12 bits
    const sensor = { ...QUIET, whiteE: 8e10, fullWellE: 1e11 };
    const { picture, levels } = simulateSensor(light, exposure(pixels, { sensor }));
    const step = 1 / (levels.sceneWhiteDn - levels.blackLevelDn);
    picture[0].forEach((value, i) => {
      expect(Math.abs(value - light[0][i])).toBeLessThan(0.52 * step);
    });
  });

  it('is right in the mean, in the dark, too, with a dark signal and all noises', () => {
    const pixels = [200, 100] as const;
    const sensor = { ...SENSOR, darkE: 300 };
    for (const value of [0, 0.02, 0.6]) {
      const { picture } = simulateSensor([flat(pixels, value)], exposure(pixels, { sensor }));
      const mean = picture[0].reduce((sum, x) => sum + x, 0) / 20_000;
      const varianceE = 8000 * value + 300 + 25 + 1.5 ** 2 + (0.007 * 8000 * value) ** 2 + 0.5;
      // 4 standard errors of the mean
      expect(Math.abs(mean - value)).toBeLessThan((4 * Math.sqrt(varianceE / 20_000)) / 8000);
    }
  });

  it('shows a saturated pixel as white, however long the exposure', () => {
    const pixels = [4, 2] as const;
    for (const whiteE of [12_000, 50_000]) {
      const sensor = { ...QUIET, whiteE };
      const { picture } = simulateSensor([flat(pixels, 1)], exposure(pixels, { sensor }));
      for (const value of picture[0]) expect(value).toBeCloseTo(1, 6);
    }
  });

  it('writes the rows it was given and no others, the same as in one go', () => {
    const pixels = [11, 12] as const;
    const light = [speckle(pixels, 1), speckle(pixels, 2), speckle(pixels, 3)];
    for (const mosaic of ['none', 'bggr'] as const) {
      const shot = exposure(pixels, { sensor: SENSOR, mosaic, bands: 'colour' });
      const whole = simulateSensor(light, shot);
      const raw = whole.raw.map((plane) => new Uint16Array(plane.length));
      exposeRows(light, shot, 0, 12, raw);
      const picture = light.map((plane) => new Float32Array(plane.length).fill(-9));
      developRows(raw, shot, 3, 5, picture);
      picture.forEach((plane, band) => {
        plane.forEach((value, i) => {
          expect(value).toBe(i < 33 || i >= 55 ? -9 : whole.picture[band][i]);
        });
      });
    }
  });
});
