import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.js';
import { parseTask } from '../../src/files/load-task.js';
import { objectPixelMm } from '../../src/tasks/object-scale.js';
import { pixelRules } from '../../src/tasks/rules.js';
import { taskRig } from './rigs.js';

const scaled = (mount: object) => taskRig({ mount: { object_pixel_mm: undefined, ...mount } });
const rulesOf = (require: object[], mount: object = {}) =>
  pixelRules(scaled(mount), parseTask({ require }).rules);

describe('objectPixelMm', () => {
  it('takes each of the three ways to state it', () => {
    expect(objectPixelMm(scaled({ object_pixel_mm: 0.12 }))).toBe(0.12);
    expect(objectPixelMm(scaled({ magnification: 0.025 }))).toBeCloseTo(0.2, 12); // 5 um / 0.025
    // f = 12 mm at 492 mm: magnification 12 / 480
    expect(objectPixelMm(scaled({ object_distance_mm: 492 }))).toBeCloseTo(0.2, 12);
    expect(objectPixelMm(scaled({}))).toBeUndefined();
  });
});

describe('pixelRules', () => {
  it('brings sizes on the object to pixels: a line pair is two features', () => {
    const mount = { object_pixel_mm: 0.1 };
    const inMm = rulesOf(
      [
        { contrast: { feature_mm: 0.4, at_least: 0.3 } },
        { detect: { feature_mm: 0.8, contrast: 0.2 } },
        { decode: { symbol: 'qr', module_mm: 0.5, success_at_least: 0.9 } },
        { edge_blur: { at_most_mm: 0.2 } },
        { placement: { at_most_mm: 0.05, after: 'radial-model', model_order: 5 } },
      ],
      mount,
    );
    expect(inMm).toMatchObject([
      { lpPerMm: expect.closeTo(25, 9) }, // two bars of 4 pixels of 5 um
      { diameterPx: expect.closeTo(8, 12) },
      { modulePx: expect.closeTo(5, 12) },
      { limit: { atMost: 0.2, unit: 'mm', perPixel: 0.1 } },
      { limit: { atMost: 0.05, unit: 'mm', perPixel: 0.1 }, modelOrder: 5 },
    ]);
  });

  it('takes sizes in pixels and on the sensor without a scale', () => {
    const rules = rulesOf([
      { contrast: { feature_px: 4, at_least: 0.3 } },
      { contrast: { lp_per_mm: 40, at_least: 0.3 } },
      { detect: { feature_px: 8, contrast: 0.2 } },
      { decode: { symbol: 'qr', module_px: 5, success_at_least: 0.9 } },
      { edge_blur: { at_most_px: 2 } },
      { placement: { at_most_px: 1 } },
    ]);
    expect(rules).toMatchObject([
      { lpPerMm: expect.closeTo(25, 9) },
      { lpPerMm: 40 },
      { diameterPx: 8 },
      { modulePx: 5 },
      { limit: { atMost: 2, unit: 'px', perPixel: 1 } },
      { limit: { atMost: 1, unit: 'px', perPixel: 1 }, modelOrder: null },
    ]);
  });

  it('refuses every rule in mm where there is no scale, all at once', () => {
    const inMm = [
      { contrast: { feature_mm: 0.4, at_least: 0.3 } },
      { placement: { at_most_mm: 0.05 } },
      { edge_blur: { at_most_mm: 0.2 } },
      { detect: { feature_mm: 0.8, contrast: 0.2 } },
      { decode: { symbol: 'qr', module_mm: 0.5, success_at_least: 0.9 } },
      { edge_blur: { at_most_px: 2 } },
    ];
    try {
      rulesOf(inMm);
      expect.unreachable();
    } catch (error) {
      expect(error).toBeInstanceOf(InputError);
      expect((error as InputError).faults.map(({ key }) => key)).toEqual([
        'require[0].contrast.feature_mm',
        'require[1].placement.at_most_mm',
        'require[2].edge_blur.at_most_mm',
        'require[3].detect.feature_mm',
        'require[4].decode.module_mm',
      ]);
      expect((error as InputError).faults[0]).toMatchObject({
        found: '0.4',
        advice: expect.stringContaining('mount.object_pixel_mm'),
      });
    }
  });
});
