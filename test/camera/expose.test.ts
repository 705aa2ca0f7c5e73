import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { exposeRows } from '../../src/camera/expose.js';
import { type Exposure, exposureFor } from '../../src/camera/exposure.js';
import { simulateSensor } from '../../src/camera/simulate-sensor.js';
import { InputError } from '../../src/errors.js';
import { camera, exposure, flat, ORDERS, QUIET, SENSOR, speckle } from './samples.js';

const expose = (light: Float32Array[], shot: Exposure) => {
  const raw = Array.from(
    { length: shot.sites === undefined ? light.length : 1 },
    () => new Uint16Array(light[0].length),
  );
  exposeRows(light, shot, 0, shot.height, raw);
  return raw;
};

describe('exposeRows', () => {
  it('gives the same numbers for any split into rows, in any order', () => {
    const pixels = [13, 17] as const;
    const light = [speckle(pixels, 1), speckle(pixels, 2), speckle(pixels, 3)];
    const cuts = fc.uniqueArray(fc.integer({ min: 1, max: 16 }), { maxLength: 6 });
    for (const mosaic of ['none', 'grbg'] as const) {
      const shot = exposure(pixels, { sensor: SENSOR, mosaic, bands: 'colour' });
      const whole = expose(light, shot);
      fc.assert(
        fc.property(cuts, fc.boolean(), (inner, backwards) => {
          const edges = [0, ...inner.sort((a, b) => a - b), 17];
          const bands = edges.slice(1).map((end, i) => [edges[i], end]);
          const raw = whole.map((plane) => new Uint16Array(new SharedArrayBuffer(plane.byteLength)));
          for (const [start, end] of backwards ? bands.reverse() : bands)
            exposeRows(light, shot, start, end, raw);
          raw.forEach((plane, i) => {
            expect([...plane]).toEqual([...whole[i]]);
          });
        }),
        { numRuns: 20 },
      );
    }
  });

  it.each(ORDERS)(
    'gives at each site of %s the number of the full-colour picture, noise included',
    (order) => {
      const pixels = [9, 6] as const;
      const light = [speckle(pixels, 4), speckle(pixels, 5), speckle(pixels, 6)];
      const [raw] = expose(light, exposure(pixels, { sensor: SENSOR, mosaic: order }));
      const full = expose(light, exposure(pixels, { sensor: SENSOR, bands: 'colour' }));
      raw.forEach((number, i) => {
        const row = Math.floor(i / 9);
        const letter = order[2 * (row % 2) + ((i % 9) % 2)] as 'r' | 'g' | 'b';
        expect(number).toBe(full[{ r: 0, g: 1, b: 2 }[letter]][i]);
      });
      // a check that can fail: the planes do differ
      expect(full[0]).not.toEqual(full[1]);
    },
  );

  it('repeats with the same seeds and changes with each of them', () => {
    const pixels = [40, 30] as const;
    const light = [flat(pixels, 0.4)];
    const shoot = (seed: number, cameraSeed: number) =>
      expose(light, exposure(pixels, { sensor: SENSOR }, { seed, cameraSeed }))[0];
    expect(shoot(3, 4)).toEqual(shoot(3, 4));
    for (const [seed, cameraSeed] of [
      [4, 4],
      [3, 5],
    ]) {
      const changed = shoot(seed, cameraSeed);
      const same = shoot(3, 4).filter((number, i) => number === changed[i]).length;
      // shot noise of 23 DN or a response 9 DN apart: chance keeps up to 1 in 30 of the 1200 numbers
      expect(same).toBeLessThan(120);
    }
  });

  it('takes the same fixed pattern for all pictures of a camera', () => {
    const pixels = [60, 60] as const;
    const sensor = { ...SENSOR, prnuPercent: 5, darkNoiseE: 0 }; // 5 % of 8000 e stand out from a shot noise of 89 e
    const shoot = (seed: number, cameraSeed: number) =>
      expose([flat(pixels, 1)], exposure(pixels, { sensor }, { seed, cameraSeed }))[0];
    // expected 400^2 / (400^2 + 89^2) = 0.95; other cameras: 4 standard errors of 1 / sqrt(3600)
    expect(correlation(shoot(1, 7), shoot(2, 7))).toBeGreaterThan(0.93);
    expect(Math.abs(correlation(shoot(1, 7), shoot(1, 8)))).toBeLessThan(4 / 60);
  });

  it('shares no noise and no fixed pattern between bands', () => {
    const pixels = [60, 60] as const;
    const light = [flat(pixels, 0.5), flat(pixels, 0.5), flat(pixels, 0.5)];
    for (const sensor of [
      { ...SENSOR, prnuPercent: 0, dsnuE: 0 },
      { ...SENSOR, prnuPercent: 10, dsnuE: 0 },
      { ...SENSOR, whiteE: 0.01, dsnuE: 40, darkNoiseE: 0 },
    ]) {
      const [red, green, blue] = expose(light, exposure(pixels, { sensor, bands: 'colour' }));
      for (const [a, b] of [
        [red, green],
        [green, blue],
        [blue, red],
      ])
        expect(Math.abs(correlation(a, b))).toBeLessThan(4 / 60);
    }
  });

  it('rounds the electrons times the gain where there is no noise', () => {
    const pixels = [101, 1] as const;
    // so much light that its shot noise is far below a raw number: 1e9 e to 4095 DN
    const sensor = { ...QUIET, whiteE: 1e9, fullWellE: 1e9, bitDepth: 8 };
    const light = flat(pixels, 0).map((_, i) => (i + 0.25) / 101);
    const [raw] = expose([light], exposure(pixels, { sensor }));
    raw.forEach((number, i) => {
      expect(number).toBe(Math.round((255 * (i + 0.25)) / 101));
    });
  });

  it('needs no sensor: linear values become 16 bits', () => {
    const pixels = [5, 2] as const;
    const light = [
      Float32Array.of(0, 1, 0.5, 0.25, 1.5, -0.2, Number.NaN, 1e-5, 0.3, Number.POSITIVE_INFINITY),
    ];
    expect([...expose(light, exposure(pixels))[0]]).toEqual([
      0, 65535, 32768, 16384, 65535, 0, 0, 1, 19661, 65535,
    ]);
  });

  it('takes no light from below 0 and fills the well at any light above it', () => {
    const pixels = [4, 1] as const;
    const quiet = { ...QUIET, darkE: 0 };
    const light = [Float32Array.of(-3, Number.NaN, 40, Number.POSITIVE_INFINITY)];
    expect([...expose(light, exposure(pixels, { sensor: quiet }))[0]]).toEqual([0, 0, 4095, 4095]);
  });

  it('clips the charge at the full well before the read-out noise is added', () => {
    const pixels = [100, 100] as const;
    const sensor = { ...SENSOR, whiteE: 30_000, darkNoiseE: 50, prnuPercent: 10, dsnuE: 0 };
    const shot = exposure(pixels, { sensor });
    const [raw] = expose([flat(pixels, 1)], shot);
    // The well is full in every pixel, so only read-out noise is left, and the converter cuts off its upper
    // half and the half step that rounds up. It is 50 e or 18 DN, far from the 36 DN of the shot noise and
    // the 370 DN and more of PRNU.
    const noiseDn = 50 * shot.converter.gainDnPerE;
    const full = raw.filter((number) => number === 4095).length;
    const shareFull = 0.5 + 0.5 / noiseDn / Math.sqrt(2 * Math.PI);
    expect(Math.abs(full - 10_000 * shareFull)).toBeLessThan(4 * 50); // 4 standard deviations of the count
    const squares = raw.reduce((sum, number) => sum + (number - 4095) ** 2, 0);
    // 5000 numbers give their deviation to 1 %; the limit is 4 of that
    expect(Math.abs(Math.sqrt(squares / (raw.length - full)) / noiseDn - 1)).toBeLessThan(0.04);
  });

  it('knows every bit depth from 1 to 16', () => {
    for (let bitDepth = 1; bitDepth <= 16; bitDepth++) {
      const shot = exposure([2, 1], { sensor: { ...QUIET, whiteE: 10_000, bitDepth } });
      expect([...expose([Float32Array.of(0, 40)], shot)[0]]).toEqual([0, 2 ** bitDepth - 1]);
    }
  });
});

describe('exposureFor', () => {
  it.each([
    [{ seed: -1, cameraSeed: 1 }, 'seed: a seed is a whole number, found -1'],
    [{ seed: 1, cameraSeed: 0.5 }, 'camera seed: a seed is a whole number, found 0.5'],
  ])('refuses %o', (seeds, words) => {
    expect(() => exposureFor(camera([2, 2]), seeds)).toThrow(InputError);
    expect(() => exposureFor(camera([2, 2]), seeds)).toThrow(words);
  });

  it('refuses a mosaic without its colours and a sensor without range', () => {
    expect(() => exposure([2, 2], { mosaic: 'rggb', bands: 'mono' })).toThrow(InputError);
    expect(() => exposure([2, 2], { sensor: { ...SENSOR, darkE: 20_000 } })).toThrow(InputError);
  });
});

describe('simulateSensor', () => {
  it('leaves the picture as it is without sensor and mosaic', () => {
    const pixels = [6, 4] as const;
    const light = [speckle(pixels, 9)];
    const { picture, raw } = simulateSensor(light, exposure(pixels));
    expect(picture[0]).toEqual(light[0]);
    expect(picture[0]).not.toBe(light[0]);
    expect(raw[0][5]).toBe(Math.round(65535 * light[0][5]));
  });

  it('keeps every mosaic site unquantised without a sensor', () => {
    const pixels = [6, 4] as const;
    const light = [speckle(pixels, 1), speckle(pixels, 2), speckle(pixels, 3)];
    const { picture, raw } = simulateSensor(light, exposure(pixels, { mosaic: 'rggb' }));
    expect(raw).toHaveLength(1);
    expect(picture[0][0]).toBe(light[0][0]);
    expect(picture[1][1]).toBe(light[1][1]);
    expect(picture[2][7]).toBe(light[2][7]);
  });
});

function correlation(a: Uint16Array, b: Uint16Array): number {
  const deviations = (raw: Uint16Array) => {
    const mean = raw.reduce((sum, number) => sum + number, 0) / raw.length;
    return Float64Array.from(raw, (number) => number - mean);
  };
  const dot = (x: Float64Array, y: Float64Array) => x.reduce((sum, value, i) => sum + value * y[i], 0);
  const [x, y] = [deviations(a), deviations(b)];
  return dot(x, y) / Math.sqrt(dot(x, x) * dot(y, y));
}
