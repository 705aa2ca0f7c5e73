import { describe, expect, it, vi } from 'vitest';
import { InputError } from '../../src/errors.js';
import { parseTask, type Task } from '../../src/files/load-task.js';
import { resultData } from '../../src/files/result-data.js';
import { type JudgeOptions, judge } from '../../src/jobs/judge.js';
import type { Rig } from '../../src/optics/rig.js';
import { zonesOf } from '../../src/optics/zones.js';
import { COLOUR, type RigParts, SENSOR, taskRig } from '../tasks/rigs.js';

/** Symbols are drawn, blurred and read; the machine may be busy with other tests. */
vi.setConfig({ testTimeout: 60_000 });

const camera = { sensor: SENSOR };
const task = (require: object[], zones: (string | number)[] = ['axis', 0.5, 'top_right']): Task =>
  parseTask({ name: 'test task', zones, require });
const judged = (parts: RigParts, require: object[], more: Partial<JudgeOptions> = {}) =>
  judge({ rig: taskRig({ camera, ...parts }), task: task(require), threads: 1, ...more });

const CONTRAST = { contrast: { feature_px: 4, at_least: 0.5 } };
const BLUR = { edge_blur: { at_most_px: 2.5 } };
const PLACEMENT = { placement: { at_most_px: 2 } };
const DETECT = { detect: { feature_px: 6, contrast: 0.1 } };
const DECODE = { decode: { symbol: 'qr', module_px: 3, success_at_least: 0.9, trials: 10 } };
const FIELD_ERRORS = { W131: 1, W222: 0.8, W220: 0.6, W311: 4 };

describe('the verdict', () => {
  it('has the keys of the interface', async () => {
    const report = resultData(await judged({ waves: FIELD_ERRORS }, [CONTRAST, BLUR, PLACEMENT, DETECT]));
    expect(report).toMatchObject({
      task: 'test task',
      rig: 'test lens',
      f_number: 4,
      model: 'third-order',
      met: expect.any(Boolean),
      largest_field: expect.any(Number),
      warnings: [],
    });
    const { rules, limits } = report as { rules: { rule: string; zones: object[] }[]; limits: object[] };
    expect(rules.map(({ rule }) => rule)).toEqual(['contrast', 'edge_blur', 'placement', 'detect']);
    for (const { zones } of rules) {
      expect(zones).toHaveLength(3);
      for (const zone of zones)
        expect(zone).toMatchObject({
          field: expect.any(Number),
          value: expect.any(Number),
          limit: expect.any(Number),
          margin: expect.any(Number),
          met: expect.any(Boolean),
        });
    }
    expect(limits[0]).toMatchObject({ coefficient: expect.any(String), gain: expect.any(Number) });
  });

  it('tells margins in shares of the limit, more being better either way', async () => {
    const { rules, margin, met } = await judged({ waves: FIELD_ERRORS }, [CONTRAST, BLUR, PLACEMENT, DETECT]);
    for (const { rule, zones } of rules)
      for (const { value, limit, margin: own, met: isMet } of zones) {
        const isAtLeast = rule === 'contrast' || rule === 'detect';
        expect(own).toBeCloseTo(isAtLeast ? (value - limit) / limit : (limit - value) / limit, 12);
        expect(isMet).toBe(isAtLeast ? value >= limit : value <= limit);
      }
    expect(margin).toBe(Math.min(...rules.flatMap(({ zones }) => zones.map((zone) => zone.margin))));
    expect(met).toBe(margin >= 0);
    expect(rules.map((rule) => rule.margin)).toEqual(
      rules.map(({ zones }) => Math.min(...zones.map((zone) => zone.margin))),
    );
  });

  it('agrees with zones', async () => {
    const rig = taskRig({ waves: FIELD_ERRORS });
    const { zones } = zonesOf(rig, { fields: ['axis', 0.5, 'top_right'], lpPerMm: [25] });
    const report = await judge({ rig, task: task([CONTRAST, PLACEMENT]), threads: 1 });
    for (const [at, zone] of zones.entries()) {
      expect(report.rules[0].zones[at]).toMatchObject({
        field: zone.field,
        imageHeightMm: zone.imageHeightMm,
        tangential: zone.mtf[0].camera.tangential,
        sagittal: zone.mtf[0].camera.sagittal,
      });
      // 4 pixels are 20 um: distortion in percent of the height, and coma's -2 N lambda W131 h
      const coma = 2 * 4 * 0.55 * 1 * zone.field;
      const distortion = (-zone.distortionPercent / 100) * zone.imageHeightMm * 1000;
      expect(report.rules[1].zones[at].value).toBeCloseTo((coma + distortion) / 5, 9);
    }
  });

  it('takes the usual zones where the task names none, all nine of a tilted rig', async () => {
    const rig = taskRig();
    const open: Task = { ...task([CONTRAST]), zones: undefined };
    const places = async (of: Rig) =>
      (await judge({ rig: of, task: open, threads: 1 })).rules[0].zones.map(({ place }) => place);
    expect(await places(rig)).toEqual(['axis', 'top', 'right', 'top_right']);
    expect(await places(taskRig({ mount: { sensor_tilt_deg: [0.5, 0] } }))).toHaveLength(9);
  });

  it('warns of detail finer than the pixels, of a full well, of symbols that do not fit and of figures past h = 1', async () => {
    const { warnings } = await judged(
      { lens: { full_field_mm: 1 }, camera: { sensor: { ...SENSOR, white_e: 20000 } } },
      [
        { contrast: { feature_px: 0.5, at_least: 0.1 } },
        DETECT,
        { decode: { symbol: 'code_128', module_px: 6, success_at_least: 0.5, trials: 1 } },
      ],
    );
    expect(warnings).toEqual([
      expect.stringContaining('past full_field_mm = 1'),
      expect.stringMatching(/^contrast: 200\.0 lp\/mm is above half a cycle a pixel/),
      expect.stringMatching(/^detect: white_e \(20000\) fills the well/),
      expect.stringMatching(/^decode: a symbol with its quiet zone/),
    ]);
  });

  it('refuses a seed and threads that are none', async () => {
    await expect(judged({}, [CONTRAST], { seed: -1 })).rejects.toThrow(InputError);
    await expect(judged({}, [CONTRAST], { threads: 0 })).rejects.toThrow(/threads/);
  });

  it('refuses a lens that folds the picture over, and one too steep to be computed', async () => {
    await expect(judged({ waves: { W311: 200 } }, [CONTRAST])).rejects.toThrow(
      /folds the picture over itself/,
    );
    await expect(judged({ waves: { W040: 9000 } }, [CONTRAST])).rejects.toThrow(/too steep/);
  });
});

describe('the largest field', () => {
  it.each([
    ['blur', { W131: 1, W222: 1.5, W220: 1 }, [BLUR]],
    ['several rules', { W131: 2, W220: 2, W311: 6 }, [CONTRAST, BLUR, PLACEMENT, DETECT]],
  ])('is where a dense scan finds the end: %s', async (_, waves, require) => {
    const rig = taskRig({ camera, waves });
    const { largestField } = await judged({ waves }, require);
    let end = 0;
    for (let h = 0; h <= 1; h += 0.02) {
      const report = await judge({ rig, task: { ...task(require), zones: [h] }, threads: 1 });
      if (!report.met) break;
      end = h;
    }
    // the scan knows it to 0.01; a rough figure is right to 1 % of the blur
    expect(largestField).toBeGreaterThan(end - 0.012);
    expect(largestField).toBeLessThan(end + 0.032);
  });

  it('is the corner where everything is met, and 0 where nothing is', async () => {
    const all = await judged({}, [CONTRAST]);
    expect(all.largestField).toBe(all.cornerField);
    expect(all.cornerField).toBeCloseTo((0.0025 * Math.hypot(639, 479)) / 2, 9);
    expect((await judged({ waves: { W020: 5 } }, [CONTRAST])).largestField).toBe(0);
  });

  it('looks at all four diagonals of a rig that is not symmetric', async () => {
    const { largestField } = await judged({ mount: { sensor_tilt_deg: [0, 4] } }, [BLUR]);
    const end = async (azimuth: number, h: number) => {
      const there = { ...task([BLUR]), zones: [`${h}@${azimuth}`] };
      return (
        await judge({
          rig: taskRig({ camera, mount: { sensor_tilt_deg: [0, 4] } }),
          task: there,
          threads: 1,
        })
      ).met;
    };
    const azimuth = (Math.atan2(479, 639) * 180) / Math.PI;
    const all = [azimuth, 180 - azimuth, 180 + azimuth, 360 - azimuth];
    expect(largestField).toBeLessThan(0.99);
    expect(await Promise.all(all.map((angle) => end(angle, largestField * 0.97)))).not.toContain(false);
    expect(await Promise.all(all.map((angle) => end(angle, largestField * 1.03)))).toContain(false);
  });
});

describe('what limits it', () => {
  it('is what the least margin gains without each error, the largest first', async () => {
    const { limits, margin } = await judged({ waves: FIELD_ERRORS }, [CONTRAST, BLUR]);
    expect(limits.map(({ gain }) => gain)).toEqual(limits.map(({ gain }) => gain).toSorted((a, b) => b - a));
    expect(limits.map(({ coefficient }) => coefficient).toSorted()).toEqual(['W131', 'W220', 'W222', 'W311']);
    for (const { coefficient, gain } of limits) {
      const without = await judged({ waves: { ...FIELD_ERRORS, [coefficient]: 0 } }, [CONTRAST, BLUR]);
      // searches see edges to 1 %, of a margin up to 2 here
      expect(Math.abs(without.margin - margin - gain)).toBeLessThan(0.03);
    }
    expect(limits.find(({ coefficient }) => coefficient === 'W311')?.gain).toBe(0); // it blurs nothing
  });

  it('counts colours, shift and tilt, and nothing that is not there', async () => {
    const colour = {
      camera: COLOUR,
      lens: { colour: { axial_um: { 460: 60, 620: 0 }, lateral_um: { 460: 3, 620: 0 } } },
    };
    const { limits } = await judged({ ...colour, mount: { sensor_shift_um: 5, sensor_tilt_deg: [0.1, 0] } }, [
      BLUR,
    ]);
    expect(limits.map(({ coefficient }) => coefficient).toSorted()).toEqual([
      'axial_colour',
      'lateral_colour',
      'sensor_shift',
      'sensor_tilt',
    ]);
    expect(limits[0].coefficient).toBe('axial_colour');
    expect((await judged({}, [BLUR])).limits).toEqual([]);
  });
});

describe('what to change', () => {
  it('is the focus, where the sensor stands out of it', async () => {
    // W020 = 1 is 8 N^2 lambda = 70.4 um behind the focus
    const { advice, met } = await judged({ mount: { sensor_shift_um: 70.4 } }, [BLUR]);
    expect(met).toBe(false);
    expect(advice[0]).toMatchObject({ change: 'focus', met: true });
    expect(Math.abs((advice[0] as { sensorShiftUm: number }).sensorShiftUm)).toBeLessThan(20); // a third of the depth of focus
  });

  it('is the stop, where the aberrations of the field blur both ways', async () => {
    const { advice } = await judged({ waves: { W131: 2.5, W222: 0.5 } }, [BLUR, DETECT]);
    const stop = advice.find(({ change }) => change === 'stop');
    expect(stop).toMatchObject({ met: true });
    if (stop?.change !== 'stop') throw new Error('no stop');
    expect(stop.whiteE).toBeCloseTo(8000 * (4 / stop.fNumber) ** 2, 6);
    const stopped = taskRig({ camera, waves: { W131: 2.5, W222: 0.5 }, mount: { f_number: stop.fNumber } });
    expect((await judge({ rig: stopped, task: task([BLUR]), threads: 1 })).met).toBe(true);
  });

  it('is the lens, named by what it should have less of, where nothing else helps as much', async () => {
    const { advice } = await judged({ waves: { W311: 20 } }, [PLACEMENT]);
    expect(advice).toEqual([{ change: 'lens', coefficient: 'W311', met: true, margin: 1 }]);
  });

  it('is the task or the camera, where even a lens without error is not enough', async () => {
    const { advice } = await judged({ waves: { W131: 1 } }, [{ edge_blur: { at_most_px: 0.7 } }]);
    expect(advice[0]).toMatchObject({ change: 'task', rule: 'edge_blur', met: false });
    const dim = await judged({}, [{ detect: { feature_px: 3, contrast: 0.02 } }]);
    expect(dim.advice[0]).toMatchObject({ change: 'task', rule: 'detect' });
  });

  it('is nothing where everything is met', async () => {
    expect((await judged({}, [CONTRAST])).advice).toEqual([]);
  });
});

describe('with symbols', () => {
  const blurred = { waves: { W131: 1.2, W222: 2.4, W220: 1.2 } };

  it('tells rate, tries, misreads and interval, and how far from the axis symbols are read', async () => {
    const { rules, largestField, met } = await judged(blurred, [DECODE]);
    const [axis, , corner] = rules[0].zones;
    expect(axis).toMatchObject({ value: 1, read: 9, trials: 9, misread: 0, met: true, limit: 0.9 });
    expect(axis.interval?.[1]).toBe(1);
    expect(corner).toMatchObject({ met: false, trials: 2 }); // two failures of ten decide
    expect(met).toBe(false);
    expect(largestField).toBeGreaterThan(0.3);
    expect(largestField).toBeLessThan(1);
  });

  it('says what limits reading, and what to change', async () => {
    const { limits, advice } = await judged(blurred, [DECODE]);
    expect(limits[0].gain).toBeGreaterThan(0.5);
    expect(['W222', 'W220']).toContain(limits[0].coefficient);
    expect(advice[0].met).toBe(true);
  });

  it('finds the focus of symbols beside rules that do not feel it', async () => {
    const { advice } = await judged({ mount: { sensor_shift_um: 150 } }, [PLACEMENT, DECODE]);
    expect(advice[0]).toMatchObject({ change: 'focus', met: true });
  });

  it('says where no lens helps: modules finer than the pixels', async () => {
    const fine = { decode: { symbol: 'qr', module_px: 0.9, success_at_least: 0.9, trials: 10 } };
    const { advice } = await judged({ waves: { W131: 1 } }, [fine]);
    expect(advice[0]).toMatchObject({ change: 'task', rule: 'decode', met: false });
  });

  it('gives the same report for the same seed, whatever the number of threads', async () => {
    const one = await judged(blurred, [CONTRAST, DECODE], { seed: 7 });
    expect(await judged(blurred, [CONTRAST, DECODE], { seed: 7, threads: 2 })).toEqual(one);
  });
});
