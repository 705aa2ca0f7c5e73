import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { InputError, InterruptedError } from '../../src/errors.js';
import { Crew } from '../../src/imaging/crew.js';
import { formImage, prepareBands, refuseUnformable } from '../../src/imaging/form-image.js';
import { KernelSource, kernelSampling } from '../../src/imaging/kernel-source.js';
import { CounterRandom } from '../../src/numeric/random.js';
import { KernelMaker } from '../../src/optics/psf.js';
import type { Rig } from '../../src/optics/rig.js';
import { type RigParts, sampleRig } from '../optics/samples.js';
import { formWith, useFormer } from '../support/form.js';

const { form, crew } = useFormer();

/** Kernels that may lose a little more light are small and quick; what these tests hold does not depend on it. */
const QUICK = { kernel: 0.03 };
const WAVES = { W040: 0.5, W131: 1, W222: 0.6, W220: -0.4, W311: 0.5 };

/** A small sensor in a small field, so that the PSFs change over it. */
function rigOf(width: number, height: number, parts: RigParts = {}): Rig {
  const { lens, camera, ...rest } = parts;
  return sampleRig({
    waves: WAVES,
    lens: { fNumber: 2.8, fullFieldMm: 0.4, relativeIllumination: 'none', ...lens },
    camera: { pixels: [width, height], ...camera },
    ...rest,
  });
}

function random(seed: number, count: number): Float32Array {
  const draw = new CounterRandom(seed, 0);
  draw.start(0);
  return Float32Array.from({ length: count }, () => draw.uniform());
}

function largestDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  expect(a.length).toBe(b.length);
  let most = 0;
  for (let i = 0; i < a.length; i++) most = Math.max(most, Math.abs(a[i] - b[i]));
  return most;
}

/** What float32 leaves of transforms, sums, PSFs and of the warp's curves: the most that the two engines may differ by, of full scale. */
const ROUNDING = 5e-6;

describe('a uniform scene', () => {
  it.each([
    ['a small symmetric sensor', rigOf(61, 40), 1],
    ['pincushion', rigOf(50, 40, { waves: { ...WAVES, W311: -9 } }), 1],
    ['pixels of 2 samples a side', rigOf(31, 24), 2],
    [
      'a tilted sensor, the axis outside',
      rigOf(40, 30, { mount: { sensorTiltDeg: [1, 2], axisPx: [-60, 70] } }),
      1,
    ],
    [
      '12 waves of coma',
      rigOf(60, 40, { waves: { W131: 12 }, lens: { fullFieldMm: 4 }, mount: { axisPx: [-900, 3] } }),
      1,
    ],
  ])('stays uniform up to the border: %s', async (_, rig, oversample) => {
    const [width, height] = rig.camera.pixels;
    const scene = new Float32Array(width * height * oversample ** 2).fill(0.7);
    const { planes } = await form(rig, [scene], { ...QUICK, oversample });
    // 1e-5 is promised; float32 leaves 2e-7
    expect(largestDifference(planes[0], new Float32Array(width * height).fill(0.7))).toBeLessThan(1e-6);
  });

  it('falls off by the relative illumination alone', async () => {
    const lens = { relativeIllumination: 'cos4', focalLengthMm: 1.2 } as const;
    const rig = rigOf(101, 80, { waves: { W040: 0.3 }, lens });
    const { planes } = await form(rig, [new Float32Array(101 * 80).fill(1)], QUICK);
    for (const [x, y] of [
      [50, 40],
      [20, 40],
      [30, 20],
    ]) {
      const radiusMm = 0.00345 * Math.hypot(x - 50, y - 39.5);
      // the fall-off is smooth, but not flat: blur by a few pixels moves it by 1e-4 of its bend
      expect(Math.abs(planes[0][y * 101 + x] - Math.cos(Math.atan(radiusMm / 1.2)) ** 4)).toBeLessThan(2e-4);
    }
  });
});

describe('energy', () => {
  it.each([
    [{ W040: 0.8 }, 1e-5], // kernels of unit sum, in float32
    // spots that grow with the field spread a little more light outward than inward, which uniform light is evened out for: 2e-4
    [{ W040: 0.8, W222: 0.9, W220: -0.6 }, 1e-3],
  ])('of bright pixels is kept through %o', async (waves, limit) => {
    const rig = rigOf(90, 70, { waves });
    const scene = new Float32Array(90 * 70);
    scene[35 * 90 + 45] = 1;
    scene[30 * 90 + 52] = 0.5;
    const { planes } = await form(rig, [scene], QUICK);
    const sum = planes[0].reduce((total, value) => total + value, 0);
    expect(Math.abs(sum - 1.5) / 1.5).toBeLessThan(limit);
  });

  it('of a whole scene is kept by a real lens but for the border', async () => {
    const rig = rigOf(90, 70, {
      waves: { ...WAVES, W311: 0 },
      lens: { fullFieldMm: 4 },
      mount: { axisPx: [800, 500] },
    });
    const scene = random(3, 90 * 70).map((value, i) => {
      const [x, y] = [i % 90, Math.floor(i / 90)];
      return x < 25 || x >= 65 || y < 25 || y >= 45 ? 0 : value;
    });
    const total = (plane: Float32Array) => plane.reduce((sum, value) => sum + value, 0);
    const { planes } = await form(rig, [scene], QUICK);
    // coma moves the light of h = 1 by 3 um over 4 mm, which uniform light is evened out for: a part in a thousand
    expect(Math.abs(total(planes[0]) / total(scene) - 1)).toBeLessThan(0.003);
  });
});

describe('laws', () => {
  it('the picture is linear in the scene', async () => {
    const rig = rigOf(40, 31);
    const formed = async (scene: Float32Array) => (await form(rig, [scene], QUICK)).planes[0];
    await fc.assert(
      fc.asyncProperty(
        fc.integer({ min: 1, max: 1e6 }),
        fc.float({ min: 0, max: 1, noNaN: true }),
        fc.float({ min: 0, max: 1, noNaN: true }),
        async (seed, a, b) => {
          const first = random(seed, 40 * 31);
          const second = random(seed + 1, 40 * 31);
          const [f, s] = [await formed(first), await formed(second)];
          const both = await formed(first.map((value, i) => a * value + b * second[i]));
          expect(
            largestDifference(
              both,
              f.map((value, i) => a * value + b * s[i]),
            ),
          ).toBeLessThan(2 * ROUNDING);
        },
      ),
      { numRuns: 3, seed: 1 },
    );
  });

  const flip = (plane: Float32Array, width: number, inX: boolean, inY: boolean) => {
    const height = plane.length / width;
    return plane.map((_, i) => {
      const x = i % width;
      const y = Math.floor(i / width);
      return plane[(inY ? height - 1 - y : y) * width + (inX ? width - 1 - x : x)];
    });
  };

  it.each([
    [41, 30, 1],
    [40, 31, 2],
    [21, 20, 3],
  ])(
    'a mirrored scene gives the mirrored picture: %i x %i, %i samples a side',
    async (width, height, oversample) => {
      const rig = rigOf(width, height);
      const scene = random(9, width * height * oversample ** 2);
      const [straight] = (await form(rig, [scene], { ...QUICK, oversample })).planes;
      for (const [inX, inY] of [
        [true, false],
        [false, true],
        [true, true],
      ]) {
        const turned = flip(scene, width * oversample, inX, inY);
        const [mirrored] = (await form(rig, [turned], { ...QUICK, oversample })).planes;
        expect(largestDifference(flip(mirrored, width, inX, inY), straight)).toBeLessThan(ROUNDING);
      }
    },
  );

  it('a mirrored scene on the mirrored sensor gives the mirrored picture, tilt, shifted axis and all', async () => {
    const scene = random(9, 40 * 31);
    const mount = { sensorTiltDeg: [1, 2] as const, axisPx: [3, 22] as const };
    const [straight] = (await form(rigOf(40, 31, { mount }), [scene], QUICK)).planes;
    const inX = { sensorTiltDeg: [1, -2] as const, axisPx: [36, 22] as const };
    const [mirrored] = (await form(rigOf(40, 31, { mount: inX }), [flip(scene, 40, true, false)], QUICK))
      .planes;
    expect(largestDifference(flip(mirrored, 40, true, false), straight)).toBeLessThan(ROUNDING);
  });

  it('the way for any rig gives what the way for symmetric rigs gives', async () => {
    const scene = random(9, 41 * 30);
    const symmetric = await form(rigOf(41, 30), [scene], QUICK);
    const tilted = await form(rigOf(41, 30, { mount: { sensorTiltDeg: [1e-12, 0] } }), [scene], QUICK);
    const shifted = await form(rigOf(41, 30, { mount: { axisPx: [20, 14.5 + 1e-9] } }), [scene], QUICK);
    // the choice of tiles may differ, so each may be wrong by what it certifies
    const bound = (other: typeof tilted) =>
      symmetric.accuracy.blendBound + other.accuracy.blendBound + ROUNDING;
    expect(largestDifference(tilted.planes[0], symmetric.planes[0])).toBeLessThan(bound(tilted));
    expect(largestDifference(shifted.planes[0], symmetric.planes[0])).toBeLessThan(bound(shifted));
  });

  it('a part of the sensor gives that part of the picture', async () => {
    const scene = random(9, 100 * 80);
    const whole = await form(rigOf(100, 80, { waves: { ...WAVES, W311: 0 } }), [scene], QUICK);
    const part = scene.filter((_, i) => i % 100 >= 45 && Math.floor(i / 100) >= 30);
    const mount = { axisPx: [49.5 - 45, 39.5 - 30] as const };
    const rig = rigOf(55, 50, { waves: { ...WAVES, W311: 0 }, mount });
    const { planes, accuracy } = await form(rig, [part], QUICK);
    const reach = Math.ceil(accuracy.kernelPx / 2);
    const bound = whole.accuracy.blendBound + accuracy.blendBound + ROUNDING;
    for (let y = reach; y < 50; y++) {
      for (let x = reach; x < 55; x++) {
        expect(Math.abs(planes[0][y * 55 + x] - whole.planes[0][(y + 30) * 100 + x + 45])).toBeLessThan(
          bound,
        );
      }
    }
  });

  it('smooth scenes come out the same at any oversampling, to a hundredth of a pixel', async () => {
    const blob = (k: number) =>
      Float32Array.from({ length: 60 * 50 * k * k }, (_, i) => {
        const x = ((i % (60 * k)) - (k - 1) / 2) / k;
        const y = (Math.floor(i / (60 * k)) - (k - 1) / 2) / k;
        return Math.exp(-((x - 27.3) ** 2 + (y - 26.6) ** 2) / 32);
      });
    const rig = rigOf(60, 50, { waves: { W040: 0.5, W220: 0.4 } });
    const places = [];
    for (const oversample of [1, 2, 3, 4]) {
      const [plane] = (await form(rig, [blob(oversample)], { ...QUICK, oversample })).planes;
      const sums = { light: 0, x: 0, y: 0 };
      plane.forEach((value, i) => {
        sums.light += value;
        sums.x += value * (i % 60);
        sums.y += value * Math.floor(i / 60);
      });
      places.push([sums.x / sums.light, sums.y / sums.light]);
    }
    for (const [x, y] of places) {
      // symmetric PSFs move nothing, and a pixel is the mean of its samples
      expect(Math.abs(x - 27.3)).toBeLessThan(0.01);
      expect(Math.abs(y - 26.6)).toBeLessThan(0.01);
    }
  });
});

describe('threads and engines', () => {
  const COLOUR = rigOf(50, 37, {
    lens: {
      axialUm: [
        [450, 5],
        [650, -3],
      ],
      lateralUm: [
        [450, 2],
        [650, -1],
      ],
    },
    camera: {
      bands: [
        { name: 'red', lines: [{ nm: 620, weight: 1 }] },
        { name: 'green', lines: [{ nm: 540, weight: 1 }] },
        { name: 'blue', lines: [{ nm: 450, weight: 1 }] },
      ],
    },
  });
  const SCENES = [1, 2, 3].map((seed) => random(seed, 4 * 50 * 37));

  it.each([1, 3])('%i threads give the bytes that 2 give', async (threads) => {
    const other = new Crew(threads);
    try {
      const options = { ...QUICK, oversample: 2 };
      const here = await form(COLOUR, SCENES, options);
      const there = await formWith(other, COLOUR, SCENES, options);
      expect(there.planes).toEqual(here.planes);
      expect(there.accuracy).toEqual(here.accuracy);
    } finally {
      await other.close();
    }
  });

  it('the compiled kernels give what plain float64 gives', async () => {
    const reference = new Crew(2, 'reference');
    try {
      const scene = SCENES.map((plane) => plane.subarray(0, 50 * 37));
      const here = await form(COLOUR, scene, QUICK);
      const there = await formWith(reference, COLOUR, scene, QUICK);
      expect(there.accuracy.kernelPx).toBe(here.accuracy.kernelPx);
      expect(there.accuracy.cells).toEqual(here.accuracy.cells);
      expect(Math.abs(there.accuracy.blendBound - here.accuracy.blendBound)).toBeLessThan(1e-6);
      for (const [band, plane] of there.planes.entries()) {
        expect(largestDifference(plane, here.planes[band])).toBeLessThan(ROUNDING);
      }
    } finally {
      await reference.close();
    }
  });
});

describe('the certificate', () => {
  /** A scene that shows the worst: 0 or 1 at random. */
  const noise = (count: number) => random(4, count).map((value) => (value < 0.5 ? 0 : 1));

  it.each([0.02, 0.004, 0.001])(
    'at a tolerance of %f bounds every pixel against the PSF of each pixel',
    async (blend) => {
      // small enough to spread every sample with its own exact PSF
      const rig = rigOf(26, 20, {
        waves: { W040: 0.5, W131: 1.5, W222: 0.6, W220: -0.4 },
        lens: { fullFieldMm: 0.12 },
      });
      const scene = noise(26 * 20);
      const { planes, accuracy } = await form(rig, [scene], { ...QUICK, blend });
      expect(accuracy.blendBound).toBeLessThanOrEqual(blend);
      const exact = spreadOneByOne(rig, scene, accuracy.kernelPx);
      expect(largestDifference(planes[0], exact)).toBeLessThan(accuracy.blendBound + ROUNDING);
    },
  );

  it('bounds what a closer grid changes', async () => {
    const rig = rigOf(120, 90, { waves: { ...WAVES, W131: 2 } });
    const scene = noise(120 * 90);
    const coarse = await form(rig, [scene], { ...QUICK, blend: 0.02 });
    const fine = await form(rig, [scene], { ...QUICK, blend: 0.02 / 4 });
    expect(fine.accuracy.blendBound).toBeLessThan(coarse.accuracy.blendBound); // by smaller cells, or by a higher order
    const change = largestDifference(coarse.planes[0], fine.planes[0]);
    expect(change).toBeLessThan(coarse.accuracy.blendBound + fine.accuracy.blendBound);
    expect(change).toBeGreaterThan(0); // or nothing was compared
  });

  it('is kept in every band, and the record names the worst of each figure', async () => {
    const bands = [
      { name: 'red', lines: [{ nm: 700, weight: 1 }] },
      { name: 'blue', lines: [{ nm: 430, weight: 1 }] },
    ];
    const both = await form(rigOf(60, 40, { camera: { bands } }), [noise(2400), noise(2400)], QUICK);
    expect(both.accuracy.blendBound).toBeLessThanOrEqual(0.004);
    expect(both.accuracy.energyOutsideKernel).toBeLessThanOrEqual(0.03);
    expect(both.accuracy.kernelPx % 2).toBe(1);
  });

  function spreadOneByOne(rig: Rig, scene: Float32Array, kernelPx: number): Float64Array {
    const [width, height] = rig.camera.pixels;
    const maker = new KernelMaker(kernelSampling(rig, 1, kernelPx));
    const source = new KernelSource(rig, rig.camera.bands[0], 1, maker);
    const reach = (kernelPx - 1) / 2;
    const out = new Float64Array(width * height);
    const ones = new Float64Array(width * height);
    const clamp = (i: number, low: number, high: number) => Math.min(high, Math.max(low, i));
    const kernels = new Map<string, Float64Array>();
    for (let y = -reach; y < height + reach; y++) {
      for (let x = -reach; x < width + reach; x++) {
        const place = [clamp(x, -0.5, width - 0.5), clamp(y, -0.5, height - 0.5)] as const;
        const key = place.join();
        let kernel = kernels.get(key);
        if (kernel === undefined) {
          kernel = new Float64Array(kernelPx ** 2);
          source.kernelAt(...place, kernel);
          kernels.set(key, kernel);
        }
        const value = scene[clamp(y, 0, height - 1) * width + clamp(x, 0, width - 1)];
        for (let j = Math.max(0, y - reach); j <= Math.min(height - 1, y + reach); j++) {
          for (let i = Math.max(0, x - reach); i <= Math.min(width - 1, x + reach); i++) {
            const share = kernel[(j - y + reach) * kernelPx + (i - x + reach)];
            out[j * width + i] += value * share;
            ones[j * width + i] += share;
          }
        }
      }
    }
    return out.map((value, i) => value / ones[i]);
  }
});

describe('frames of every shape', () => {
  it.each([
    [1, 1],
    [1, 40],
    [40, 1],
    [2, 3],
    [7, 5],
    [33, 2],
  ])('%i x %i pixels', async (width, height) => {
    const scene = random(6, width * height);
    const { planes, accuracy } = await form(rigOf(width, height, { waves: { W040: 0.5 } }), [scene], QUICK);
    expect(accuracy.blendBound).toBeLessThanOrEqual(0.004);
    // W040 is the same everywhere: a plain convolution of the scene that goes on with its edge
    const rig = rigOf(width, height, { waves: { W040: 0.5 } });
    const { kernelPx } = accuracy;
    const kernel = new Float64Array(kernelPx ** 2);
    const maker = new KernelMaker(kernelSampling(rig, 1, kernelPx));
    new KernelSource(rig, rig.camera.bands[0], 1, maker).kernelAt(0, 0, kernel);
    const clamp = (i: number, size: number) => Math.min(size - 1, Math.max(0, i));
    const expected = scene.map((_, at) => {
      let sum = 0;
      for (let j = 0; j < kernelPx; j++) {
        for (let i = 0; i < kernelPx; i++) {
          const x = clamp((at % width) + i - (kernelPx - 1) / 2, width);
          const y = clamp(Math.floor(at / width) + j - (kernelPx - 1) / 2, height);
          sum += kernel[j * kernelPx + i] * scene[y * width + x];
        }
      }
      return sum;
    });
    expect(largestDifference(planes[0], expected)).toBeLessThan(ROUNDING);
  });
});

describe('refuseUnformable', () => {
  it('refuses distortion that folds over the sensor, and says what would not', () => {
    const rig = sampleRig({ waves: { W311: 4000 } });
    expect(() => refuseUnformable(rig, 1)).toThrow(InputError);
    try {
      refuseUnformable(rig, 1);
    } catch (error) {
      const [fault] = (error as InputError).faults;
      expect(fault.key).toBe('lens.waves.W311');
      expect(fault.found).toBe('4000 waves');
      const limit = Number(fault.allowed?.match(/less than about ([\d.e+]+) waves/)?.[1]);
      const at = (W311: number) => sampleRig({ waves: { W311 } });
      expect(() => refuseUnformable(at(0.99 * limit), 1)).not.toThrow();
      expect(() => refuseUnformable(at(1.01 * limit), 1)).toThrow(InputError);
    }
  });

  it('lets any pincushion pass', () => {
    expect(() => refuseUnformable(sampleRig({ waves: { W311: -4000 } }), 1)).not.toThrow();
  });

  it('refuses 300 waves in under a second, for every band and oversampling', () => {
    const bands = [450, 550, 650].map((nm) => ({ name: `${nm}`, lines: [{ nm, weight: 1 }] }));
    const rig = sampleRig({ waves: { W131: 300 }, lens: { fNumber: 2.8 }, camera: { bands } });
    for (const oversample of [1, 4]) {
      const start = performance.now();
      expect(() => refuseUnformable(rig, oversample)).toThrow(/W131 alone is .* waves/);
      expect(performance.now() - start).toBeLessThan(1000); // what is promised; 20 ms measured
    }
  });
});

describe('progress and interrupts', () => {
  it('tells of each stage in order, from the first task to the last', async () => {
    const heard: [string, number, number][] = [];
    const rig = rigOf(60, 40);
    const { arena } = crew();
    const mark = arena.mark();
    const watch = { onProgress: (...words: [string, number, number]) => heard.push(words) };
    const bands = await prepareBands(crew(), rig, 1, { blend: 0.004, kernel: 0.03 }, watch);
    const scene = arena.floats(arena.allocateFloats(2400), 2400);
    await formImage(crew(), rig, [scene], 1, bands, watch);
    arena.release(mark);
    const stages = heard.map(([stage]) => stage);
    expect([...new Set(stages)]).toEqual(['psf', 'warp', 'blur']);
    for (const [, done, total] of heard) expect(done).toBeLessThanOrEqual(total);
    const last = heard.filter(([stage]) => stage === 'blur').at(-1);
    expect(last?.[1]).toBe(last?.[2]);
  });

  it('ends soon when interrupted, in any stage, and the workers can go on', async () => {
    const rig = rigOf(200, 150);
    const { arena } = crew();
    for (const stage of ['psf', 'warp', 'blur']) {
      const mark = arena.mark();
      const stop = new AbortController();
      const watch = {
        signal: stop.signal,
        onProgress: (at: string) => {
          if (at === stage) stop.abort();
        },
      };
      const run = async () => {
        const bands = await prepareBands(crew(), rig, 1, { blend: 0.002, kernel: 0.03 }, watch);
        const scene = arena.floats(arena.allocateFloats(200 * 150), 200 * 150);
        return formImage(crew(), rig, [scene], 1, bands, watch);
      };
      await expect(run()).rejects.toThrow(InterruptedError);
      arena.release(mark);
    }
    const { planes } = await form(rigOf(20, 15), [new Float32Array(300).fill(0.5)], QUICK);
    expect(planes[0][150]).toBeCloseTo(0.5, 6);
  });

  it('does not begin when interrupted before', async () => {
    const signal = AbortSignal.abort();
    await expect(
      prepareBands(crew(), rigOf(20, 15), 1, { blend: 0.004, kernel: 0.03 }, { signal }),
    ).rejects.toThrow(InterruptedError);
  });
});
