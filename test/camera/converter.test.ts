import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { converterFor, rawLevels } from '../../src/camera/converter.js';
import { InputError } from '../../src/errors.js';
import { QUIET, SENSOR } from './samples.js';

describe('converterFor', () => {
  it('puts a full well on the largest raw number and the dark signal 6 deviations above 0', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 8, max: 16 }),
        fc.double({ min: 1000, max: 100_000, noNaN: true }),
        fc.double({ min: 0, max: 20, noNaN: true }),
        fc.double({ min: 0, max: 20, noNaN: true }),
        (bitDepth, fullWellE, darkNoiseE, dsnuE) => {
          const { gainDnPerE, offsetDn, whiteLevelDn } = converterFor({
            ...SENSOR,
            bitDepth,
            fullWellE,
            darkNoiseE,
            dsnuE,
          });
          expect(whiteLevelDn).toBe(2 ** bitDepth - 1);
          expect(Number.isInteger(offsetDn)).toBe(true);
          // two roundings of a number up to 65535
          expect(Math.abs(offsetDn + gainDnPerE * fullWellE - whiteLevelDn)).toBeLessThan(1e-10);
          const deviationDn = gainDnPerE * Math.sqrt(darkNoiseE ** 2 + dsnuE ** 2);
          expect(offsetDn).toBeGreaterThanOrEqual(6 * deviationDn - 1e-9);
          // and no higher than the next whole number, but for the share of the noise in the well, by which
          // that number lowers the gain
          expect(offsetDn).toBeLessThanOrEqual(6 * deviationDn + 1.2);
        },
      ),
    );
  });

  it('has no pedestal where nothing can fall below 0', () => {
    expect(converterFor(QUIET)).toEqual({ gainDnPerE: 4095 / 10_000, offsetDn: 0, whiteLevelDn: 4095 });
  });

  it('takes linear values to 16 bits without a sensor', () => {
    const converter = converterFor(undefined);
    expect(rawLevels(undefined, converter)).toEqual({
      blackLevelDn: 0,
      whiteLevelDn: 65535,
      sceneWhiteDn: 65535,
      gainDnPerE: 65535,
    });
  });

  it.each([
    [{ bitDepth: 17 }, 'camera.sensor.bit_depth', 'found 17. Allowed: a whole number from 1 to 16'],
    [{ bitDepth: 0 }, 'camera.sensor.bit_depth', 'found 0.'],
    [{ bitDepth: 7.5 }, 'camera.sensor.bit_depth', 'found 7.5.'],
    [{ darkE: 10_000 }, 'camera.sensor.dark_e', 'found 10000. Allowed: below full_well_e (10000)'],
    [
      { darkNoiseE: 1700 },
      'camera.sensor.dark_noise_e',
      'found 10200 e for dark_noise_e 1700 and dsnu_e 1.5',
    ],
    [{ dsnuE: 2000 }, 'camera.sensor.dsnu_e', 'Allowed: below full_well_e (10000)'],
  ])('refuses %o', (change, key, words) => {
    const convert = () => converterFor({ ...SENSOR, ...change });
    expect(convert).toThrow(InputError);
    expect(convert).toThrow(key);
    expect(convert).toThrow(words);
  });
});

describe('rawLevels', () => {
  it('counts the mean dark signal as black', () => {
    const converter = converterFor({ ...SENSOR, darkE: 200 });
    const levels = rawLevels({ ...SENSOR, darkE: 200 }, converter);
    expect(levels.blackLevelDn).toBeCloseTo(converter.offsetDn + 200 * converter.gainDnPerE, 12);
    expect(levels.sceneWhiteDn).toBeCloseTo(levels.blackLevelDn + 8000 * converter.gainDnPerE, 12);
  });

  it('takes the full well for white where the exposure is longer than that', () => {
    const overexposed = { ...SENSOR, whiteE: 25_000, darkE: 100 };
    const levels = rawLevels(overexposed, converterFor(overexposed));
    expect(levels.sceneWhiteDn).toBeCloseTo(levels.whiteLevelDn, 9);
  });
});
