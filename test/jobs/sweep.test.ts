import { describe, expect, it, vi } from 'vitest';
import { InputError } from '../../src/errors.js';
import { parseRig } from '../../src/files/load-rig.js';
import { parseTask, type Task } from '../../src/files/load-task.js';
import { resultData } from '../../src/files/result-data.js';
import { judge } from '../../src/jobs/judge.js';
import { type SweepOptions, sweep } from '../../src/jobs/sweep.js';
import { bestFocusUm } from '../../src/optics/focus.js';
import { bandLines } from '../../src/optics/otf.js';
import { benchFor } from '../../src/tasks/bench.js';
import { contrastAt } from '../../src/tasks/contrast.js';
import { withShift, withStop } from '../../src/tasks/lens-parts.js';
import { placeAt, type RigParts, SENSOR, taskRig } from '../tasks/rigs.js';

/** Symbols are drawn, blurred and read; the machine may be busy with other tests. */
vi.setConfig({ testTimeout: 60_000 });

const camera = { sensor: SENSOR };
const task = (require: object[], zones: (string | number)[] = [0, 0.6, 1]): Task =>
  parseTask({ name: 'test task', zones, require });
const swept = (parts: RigParts, options: Omit<SweepOptions, 'rig'>) =>
  sweep({ rig: taskRig({ camera, ...parts }), threads: 1, ...options });
const steps = (from: number, to: number, count: number) =>
  Array.from({ length: count }, (_, i) => from + ((to - from) * i) / (count - 1));

const CONTRAST = { contrast: { feature_px: 2.5, at_least: 0.3 } };
const DETECT = { detect: { feature_px: 6, contrast: 0.05 } };

/** um of sensor shift a wave of W020, at f/4 and 550 nm. */
const UM_PER_WAVE = 8 * 16 * 0.55;

describe('where theory puts the focus', () => {
  // Source: Born and Wolf, Principles of Optics, 9.3, and V. N. Mahajan, JOSA 73 (1983) 860, for the balanced aberrations (from memory)
  it.each([
    ['spherical aberration: W020 = -W040', { W040: 1 }, 0, -1],
    ['astigmatism: half way between the foci', { W222: 1 }, 1, -0.5],
    ['field curvature: on the Petzval surface', { W220: 0.7 }, 1, -0.7],
  ])('of the least RMS: %s', async (_, waves, h, w020) => {
    const { best, bestSampled } = await swept(
      { waves },
      { wavefrontRms: true, fields: [h], sensorShiftsUm: steps(-150, 40, 8) },
    );
    // the search stops at 2 % of the samples' distance
    expect(Math.abs(best!.values[0] - w020 * UM_PER_WAVE)).toBeLessThan(0.6);
    expect(best!.figure!).toBeLessThan(bestSampled!.figure!);
  });

  it('of the highest MTF of coarse detail under strong spherical aberration: the least r.m.s. blur, W020 = -4/3 W040', async () => {
    // Source: Born and Wolf, Principles of Optics, 5.3; W. T. Welford, Aberrations of Optical Systems (from memory). At low frequencies the
    // MTF falls with the second moment of the rays' blur, which is least there; 4 waves blur 18 um, one period is 500 um.
    const { best } = await swept(
      { waves: { W040: 4 } },
      { lpPerMm: 2, fields: [0], sensorShiftsUm: steps(-700, 0, 8) },
    );
    expect(Math.abs(best!.values[0] / (-(4 / 3) * 4 * UM_PER_WAVE) - 1)).toBeLessThan(0.01);
  });

  it.each([
    ['spherical aberration', { W040: 1 }, 0],
    ['coma and astigmatism', { W131: 0.5, W222: 0.6 }, 1],
  ])(
    'of the highest MTF at a middle frequency, where zones looks for it by another way: %s',
    async (_, waves, h) => {
      const rig = taskRig({ waves });
      const { best } = await swept(
        { waves },
        { lpPerMm: 50, fields: [h], sensorShiftsUm: steps(-130, 50, 10) },
      );
      if (h === 0) {
        const lines = bandLines(rig, 0, 0, rig.camera.bands[0]);
        expect(Math.abs(best!.values[0] - bestFocusUm(lines, 4, 50, 'tangential')!)).toBeLessThan(0.8);
      }
      let [highest, at] = [0, 0];
      for (let shift = -130; shift <= 50; shift += 1) {
        const rule = { kind: 'contrast', lpPerMm: 50, atLeast: 1 } as const;
        const { value } = contrastAt(benchFor(withShift(rig, shift)), placeAt(rig, h), rule);
        if (value > highest) [highest, at] = [value, shift];
      }
      expect(Math.abs(best!.values[0] - at)).toBeLessThan(1.2); // the scan's step, and the search's 0.4
    },
  );
});

describe('the best stop', () => {
  it.each([
    ['spherical aberration', { W040: 3 }, [0]],
    ['a lens with all of them', { W040: 1, W131: 2, W222: 1.5, W220: -1 }, [0, 0.6, 1]],
  ])(
    'balances diffraction and aberration where a dense scan does, within a tenth of a stop: %s',
    async (_, waves, fields) => {
      const rig = taskRig({ waves });
      const { best, bestSampled } = await swept(
        { waves },
        { lpPerMm: 60, fields, fNumbers: [4, 5.6, 8, 11, 16] },
      );
      let [highest, at] = [0, 0];
      for (let stops = 0; stops <= 4; stops += 0.04) {
        const stopped = benchFor(withStop(rig, 4 * 2 ** (stops / 2)));
        const rule = { kind: 'contrast', lpPerMm: 60, atLeast: 1 } as const;
        const lowest = Math.min(...fields.map((h) => contrastAt(stopped, placeAt(rig, h), rule).value));
        if (lowest > highest) [highest, at] = [lowest, 4 * 2 ** (stops / 2)];
      }
      expect(Math.abs(2 * Math.log2(best!.values[0] / at))).toBeLessThan(0.1);
      expect(best!.figure!).toBeGreaterThanOrEqual(highest - 1e-6);
      expect(best!.figure!).toBeGreaterThanOrEqual(bestSampled!.figure!);
    },
  );

  it('is found together with the focus, which moves with it', async () => {
    // the focus of W040 shifts as the stop closes: the two must be searched together
    const parts = { waves: { W040: 3, W220: 0.5 } };
    const rig = taskRig(parts);
    const options = {
      lpPerMm: 60,
      fields: [0, 1],
      fNumbers: [4, 5.6, 8, 11],
      sensorShiftsUm: steps(-250, 50, 7),
    };
    const { best, samples } = await swept(parts, options);
    expect(samples).toHaveLength(28);
    const rule = { kind: 'contrast', lpPerMm: 60, atLeast: 1 } as const;
    let highest = 0;
    for (let stops = 0; stops <= 3; stops += 0.2)
      for (let shift = -250; shift <= 50; shift += 6) {
        const there = benchFor(withShift(withStop(rig, 4 * 2 ** (stops / 2)), shift));
        const lowest = Math.min(...[0, 1].map((h) => contrastAt(there, placeAt(rig, h), rule).value));
        highest = Math.max(highest, lowest);
      }
    expect(best!.figure!).toBeGreaterThanOrEqual(highest - 1e-3);
  });

  it('costs light: stopping down by two stops leaves a quarter of the electrons, unless the light is kept', async () => {
    const two = { task: task([DETECT]), fNumbers: [4, 8] };
    const dimmed = await swept({}, two);
    expect(dimmed.lightFrom).toEqual({ fNumber: 4, whiteE: 8000 });
    expect(dimmed.samples.map(({ whiteE }) => whiteE)).toEqual([8000, 2000]);
    const kept = await swept({}, { ...two, keepLight: true });
    expect(kept.lightFrom).toBeNull();
    expect(kept.samples.map(({ whiteE }) => whiteE)).toEqual([8000, 8000]);
    // shot noise alone would leave half of the ratio; PRNU, which goes with the light, makes it 0.56
    const ratio = (report: typeof kept, at: number) => report.samples[at].figure! + 1;
    expect(ratio(dimmed, 1) / ratio(kept, 1)).toBeGreaterThan(0.5);
    expect(ratio(dimmed, 1) / ratio(kept, 1)).toBeLessThan(0.57);
    expect(ratio(dimmed, 0)).toBe(ratio(kept, 0));
  });

  it('reckons the light from the stop that the rig states, not from the lens', async () => {
    const { samples } = await swept(
      { mount: { f_number: 8 } },
      { task: task([DETECT]), fNumbers: [4, 8, 16] },
    );
    // a wider stop would overfill the well of 10000, so one exposes for a shorter time
    expect(samples.map(({ whiteE }) => whiteE)).toEqual([10000, 8000, 2000]);
  });
});

describe('a sweep of a task', () => {
  it('tells at each place what judge tells there', async () => {
    const waves = { W131: 1, W222: 1 };
    const rules = [CONTRAST, DETECT, { edge_blur: { at_most_px: 3 } }];
    const { samples } = await swept(
      { waves },
      { task: task(rules), fNumbers: [4, 5.6], sensorShiftsUm: [-20, 0] },
    );
    expect(samples.map(({ values }) => values)).toEqual([
      [4, -20],
      [4, 0],
      [5.6, -20],
      [5.6, 0],
    ]);
    for (const { values, figure, met, zones } of samples) {
      const rig = withShift(withStop(taskRig({ camera, waves }), values[0]), values[1]);
      const report = await judge({ rig, task: task(rules), threads: 1 });
      expect(figure).toBeCloseTo(report.margin, 9);
      expect(met).toBe(report.met);
      expect(Math.min(...zones!)).toBeCloseTo(report.margin, 9);
    }
  });

  it('varies any number of the rig by its path, of its file, too', async () => {
    const file = {
      lens: {
        focal_length_mm: 12,
        f_number: 4,
        full_field_mm: 2,
        wavelength_nm: 550,
        waves: { W131: 1, distortion_percent: -1 },
      },
      camera: { pixels: [640, 480], pixel_pitch_um: 5, bands_nm: { mono: [550] } },
    };
    const coma = await sweep({
      rig: parseRig(file),
      lpPerMm: 60,
      fields: [1],
      vary: [{ key: 'lens.waves.W131', values: [2, 0, 1] }],
      threads: 1,
    });
    expect(coma.axes).toEqual([{ key: 'lens.waves.W131', values: [0, 1, 2] }]);
    expect(coma.samples[0].figure!).toBeGreaterThan(coma.samples[1].figure!);
    expect(coma.best!.values).toEqual([0]);
    const distortion = await sweep({
      rig: file as never,
      task: task([{ placement: { at_most_px: 4 } }], [1]),
      vary: [{ key: 'lens.distortion_percent', values: [-1, 0, 1] }],
      threads: 1,
    });
    expect(distortion.samples[1].figure! - distortion.samples[0].figure!).toBeCloseTo(1, 9); // 1 % of 2 mm is 4 pixels
  });

  it('has zones, axes and samples in the names of the files', async () => {
    const report = await swept({}, { task: task([CONTRAST]), fNumbers: [4, 8] });
    expect(resultData(report)).toMatchObject({
      rig: 'test lens',
      model: 'third-order',
      figure: { kind: 'margin', task: 'test task' },
      light_from: { f_number: 4, white_e: 8000 },
      zones: [{ field: 0 }, { field: 0.6 }, { field: 1 }],
      axes: [{ key: 'mount.f_number', values: [4, 8] }],
      samples: [{ values: [4], figure: expect.any(Number), met: true, rule: 'contrast' }, {}],
      best: { values: [expect.any(Number)] },
      met: true,
    });
  });

  it('passes over places that cannot be computed, and refuses where none can', async () => {
    const far = { lpPerMm: 60, fields: [0], sensorShiftsUm: [-1, 0, 1e5] };
    const { samples } = await swept({}, far);
    expect(samples[2]).toMatchObject({ figure: null, refused: expect.stringContaining('too steep') });
    expect(samples[1].figure).toBeGreaterThan(0);
    await expect(swept({}, { ...far, sensorShiftsUm: [1e5] })).rejects.toThrow(/too steep/);
  });

  it('tries symbols where the other rules are met, and tells the lowest rate', async () => {
    const rules = [
      { edge_blur: { at_most_px: 4 } },
      { decode: { symbol: 'qr', module_px: 3, success_at_least: 0.9, trials: 6 } },
    ];
    const { samples, met } = await swept({}, { task: task(rules, [0, 1]), sensorShiftsUm: [-160, -110, 0] });
    const [farOut, out, inFocus] = samples;
    expect(farOut.decode).toBeUndefined(); // blurred past its limit
    expect(out).toMatchObject({
      met: false,
      rule: 'decode',
      decode: { value: expect.any(Number), met: false },
    });
    expect(inFocus).toMatchObject({ met: true, rule: 'edge_blur', decode: { value: 1, met: true } });
    expect(met).toBe(true);
  });

  it('finds the focus of symbols beside rules that do not feel it', async () => {
    const rules = [
      { placement: { at_most_px: 5 } },
      { decode: { symbol: 'data_matrix', module_px: 3, success_at_least: 0.9, trials: 6 } },
    ];
    const { best, samples } = await swept({}, { task: task(rules, [0]), sensorShiftsUm: [-260, -140, 130] });
    expect(samples.map(({ met }) => met)).toEqual([false, false, false]);
    expect(best!.met).toBe(true); // between the samples
    expect(Math.abs(best!.values[0])).toBeLessThan(40);
  });

  it('finds the focus of symbols alone', async () => {
    const rules = [{ decode: { symbol: 'data_matrix', module_px: 3, success_at_least: 0.9, trials: 6 } }];
    const { best, samples } = await swept({}, { task: task(rules, [0]), sensorShiftsUm: [-170, -50, 70] });
    expect(samples.map(({ met }) => met)).toEqual([false, true, true]);
    expect(Math.abs(best!.values[0])).toBeLessThan(10); // the sharpest edges, between two places at which all are read
    expect(best).toMatchObject({ met: true, rule: 'decode', figure: expect.closeTo(1 / 0.9 - 1, 9) });
  });
});

describe('the budget', () => {
  // Signed OTF of W020 = 0.5 at s = 0.2, Hopkins 1955 (from memory): 0.43481896. s = 0.2 is 0.2 / (550 nm x 4)
  const LP_PER_MM = 0.2 / (0.55e-3 * 4);
  const cycles = LP_PER_MM * 0.005;
  const PIXEL = Math.sin(Math.PI * cycles) / (Math.PI * cycles);
  const atHalfWave = task([{ contrast: { lp_per_mm: LP_PER_MM, at_least: 0.43481896 * PIXEL } }], [0]);

  it('ends where the known MTF of defocus falls to the limit, both ways', async () => {
    const { budget } = await swept({}, { task: atHalfWave, budget: true });
    const of = (name: string) => budget!.find(({ coefficient }) => coefficient === name)!;
    expect(of('W020').present).toBe(0);
    expect(of('W020').highest).toBeCloseTo(0.5, 3);
    expect(of('W020').lowest).toBeCloseTo(-0.5, 3);
    // on the axis the others blur nothing
    expect(of('W131')).toEqual({ coefficient: 'W131', present: 0, lowest: null, highest: null });
    expect(budget).toHaveLength(7);
  });

  it('of distortion is what the displacement allows', async () => {
    const { budget } = await swept(
      { waves: { W311: 2 } },
      { task: task([{ placement: { at_most_px: 6 } }], [1]), budget: true },
    );
    // 2 N lambda W311 = 30 um
    const limit = 30 / (2 * 4 * 0.55);
    const { lowest, highest } = budget!.find(({ coefficient }) => coefficient === 'W311')!;
    expect(Math.abs(highest! / limit - 1)).toBeLessThan(2e-3);
    expect(Math.abs(lowest! / limit + 1)).toBeLessThan(2e-3);
  });

  it('is nothing where the task is not met', async () => {
    const { budget, met } = await swept({ waves: { W020: 2 } }, { task: atHalfWave, budget: true });
    expect(met).toBe(false);
    for (const { present, lowest, highest } of budget!) expect([lowest, highest]).toEqual([present, present]);
  });

  it('is taken at the best place of a sweep', async () => {
    const { budget } = await swept(
      { waves: { W020: 2 } },
      { task: atHalfWave, sensorShiftsUm: steps(-200, 0, 9), budget: true },
    );
    const { lowest, highest } = budget!.find(({ coefficient }) => coefficient === 'W020')!;
    expect(Math.abs(highest! - 2.5)).toBeLessThan(0.02); // the search leaves the focus to 1 % of a wave
    expect(Math.abs(lowest! - 1.5)).toBeLessThan(0.02);
  });

  describe('and the depth', () => {
    it('is the diffraction-limited depth of focus over m^2 without a focal length', async () => {
      const rig = taskRig({ lens: { focal_length_mm: undefined } });
      const { depth } = await sweep({ rig, task: atHalfWave, depth: true, threads: 1 });
      const m = 0.005 / 0.1;
      expect(depth!.magnification).toBeCloseTo(m, 12);
      // half a wave is 35.2 um on either side of the sensor
      for (const end of [depth!.nearerMm, depth!.fartherMm!])
        expect(Math.abs(end / ((0.5 * UM_PER_WAVE) / 1000 / m ** 2) - 1)).toBeLessThan(3e-3);
      expect(depth!.objectDistanceMm).toBeUndefined();
    });

    it('follows the lens equation with a focal length', async () => {
      const { depth } = await swept({}, { task: atHalfWave, depth: true });
      const [f, m] = [12, 0.05];
      const image = f * (1 + m);
      const distance = (movedUm: number) => 1 / (1 / f - 1 / (image + movedUm / 1000));
      expect(depth!.objectDistanceMm).toBeCloseTo(f * (1 + 1 / m), 9);
      expect(Math.abs(depth!.nearestMm! / distance(0.5 * UM_PER_WAVE) - 1)).toBeLessThan(1e-3);
      expect(Math.abs(depth!.farthestMm! / distance(-0.5 * UM_PER_WAVE) - 1)).toBeLessThan(1e-3);
      expect(depth!.depthMm).toBeCloseTo(depth!.farthestMm! - depth!.nearestMm!, 9);
    });

    it('has no end where the far limit lies beyond infinity', async () => {
      // f = 12 mm at 0.001: infinity is 12 um away
      const { depth } = await swept({ mount: { object_pixel_mm: 5 } }, { task: atHalfWave, depth: true });
      expect(depth).toMatchObject({ farthestMm: null, fartherMm: null, depthMm: null });
      expect(depth!.nearestMm!).toBeLessThan(12 * 1001);
    });

    it('ends where features in mm grow too small with the distance', async () => {
      // 0.5 mm are 5 pixels in focus and 2.5 at twice the distance, where half a cycle a pixel is not far
      const inMm = task([{ contrast: { feature_mm: 0.5, at_least: 0.3 } }], [0]);
      const inPx = task([{ contrast: { feature_px: 5, at_least: 0.3 } }], [0]);
      const wide = { lens: { f_number: 16 } };
      const [scaled, fixed] = await Promise.all(
        [inMm, inPx].map((one) => swept(wide, { task: one, depth: true })),
      );
      expect(scaled.depth!.nearestMm!).toBeLessThanOrEqual(fixed.depth!.nearestMm!);
      expect(scaled.depth!.farthestMm!).toBeLessThan(fixed.depth!.farthestMm ?? Number.POSITIVE_INFINITY);
    });

    it('tries symbols at its ends, with or without other rules', async () => {
      const decode = { decode: { symbol: 'data_matrix', module_px: 2, success_at_least: 0.6, trials: 3 } };
      const wide = { edge_blur: { at_most_px: 6 } };
      const [alone, beside, withoutSymbols] = await Promise.all(
        [[decode], [wide, decode], [wide]].map((rules) => swept({}, { task: task(rules, [0]), depth: true })),
      );
      const reach = ({ depth }: typeof alone) => depth!.focusUm[1];
      // a disc as large as two modules is not read, one of half a module is: radius = focus / (2 N)
      expect(reach(alone)).toBeGreaterThan(2.5 * 8);
      expect(reach(alone)).toBeLessThan(10 * 8);
      // from inside one meets the first failure, from outside the last success: chance has its say between
      expect(Math.abs(reach(beside) / reach(alone) - 1)).toBeLessThan(0.4);
      expect(reach(withoutSymbols)).toBeGreaterThan(1.2 * reach(beside));
    });

    it('is none where the task is not met, and is refused without a scale', async () => {
      expect((await swept({ waves: { W020: 2 } }, { task: atHalfWave, depth: true })).depth).toBeNull();
      await expect(
        swept({ mount: { object_pixel_mm: undefined } }, { task: atHalfWave, depth: true }),
      ).rejects.toThrow(/mount\.object_pixel_mm.*depth needs the scale/);
    });
  });
});

describe('refusals', () => {
  const contrast = task([CONTRAST]);
  it.each<[string, Omit<SweepOptions, 'rig'>, RegExp]>([
    ['nothing to look at', { fNumbers: [4] }, /a task, at an MTF or at the RMS/],
    ['two things to look at', { task: contrast, lpPerMm: 20, fNumbers: [4] }, /one of the three/],
    ['nothing swept', { task: contrast }, /nothing is swept/],
    ['a budget of an MTF', { lpPerMm: 20, budget: true }, /where a task ends/],
    ['a frequency of 0', { lpPerMm: 0, fNumbers: [4] }, /0 is no frequency/],
    ['zones beside a task', { task: contrast, fields: [0], fNumbers: [4] }, /zones of its own/],
    [
      'a stop wider than the lens',
      { task: contrast, fNumbers: [2.8, 4] },
      /--f-number.*found 2\.8.*4 \(lens\.f_number\)/,
    ],
    [
      'no values',
      { task: contrast, fNumbers: [4], vary: [{ key: 'lens.waves.W131', values: [] }] },
      /has no values/,
    ],
    [
      'a value twice',
      { task: contrast, sensorShiftsUm: [1, 1] },
      /mount\.sensor_shift_um: has a value twice/,
    ],
    ['no number', { task: contrast, sensorShiftsUm: [Number.NaN] }, /no number/],
    [
      'an axis twice',
      { task: contrast, fNumbers: [4], vary: [{ key: 'mount.f_number', values: [5] }] },
      /swept twice/,
    ],
    [
      'no key',
      { task: contrast, vary: [{ key: 'lens.waves.W13', values: [1] }] },
      /Did you mean 'lens\.waves\.W131'/,
    ],
    [
      'a value that makes no rig',
      { task: contrast, vary: [{ key: 'camera.fill_factor', values: [0.5, 2] }] },
      /camera\.fill_factor/,
    ],
  ])('%s', async (_, options, words) => {
    await expect(swept({}, options)).rejects.toThrow(InputError);
    await expect(swept({}, options)).rejects.toThrow(words);
  });
});
