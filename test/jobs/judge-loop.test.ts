/** What judge says of a place, against a chart drawn there, sent through the lens and measured as a lab would. */
import { afterAll, describe, expect, it } from 'vitest';
import { parseRig } from '../../src/files/load-rig.js';
import { parseTask } from '../../src/files/load-task.js';
import { chart } from '../../src/jobs/chart.js';
import { judge } from '../../src/jobs/judge.js';
import { measure } from '../../src/jobs/measure.js';
import { Renderer } from '../../src/jobs/renderer.js';

const SLOW = { timeout: 60_000 };
const renderer = new Renderer({ threads: 2 });
afterAll(() => renderer.close());

const PITCH_MM = 0.00345;

/** A small sensor that looks at the part of the field around h. */
function rigAt(h: number) {
  return parseRig({
    lens: {
      focal_length_mm: 12,
      f_number: 2.8,
      full_field_mm: 4.6,
      wavelength_nm: 550,
      waves: { W040: 0.8, W131: 1.1, W222: 0.9, W220: 0.6, W311: 6, W020: -0.5 },
      relative_illumination: 'none',
    },
    camera: { pixels: [208, 192], pixel_pitch_um: 1000 * PITCH_MM, bands_nm: { mono: [550] } },
    mount: { axis_px: [103.5 - (h * 4.6) / PITCH_MM, 95.5] },
  });
}

describe('judge and the measured chart', () => {
  it.each([0.5, 1])(
    'agree on contrast and edge blur along and across the radius at h = %d',
    SLOW,
    async (h) => {
      const rig = rigAt(h);
      const { scene, truth } = await chart({ kind: 'edges', rig, grid: [1, 1], sizePx: 128 });
      const { picture } = await renderer.render({ rig, scene, oversample: 4, tolerance: 0.002 });
      const { edges } = await measure({ image: picture, truth, rig, cyclesPerPixel: [0.125, 0.25] });
      expect(edges).toHaveLength(4);
      for (const { field, azimuthDeg, direction, sfr, edgeWidthPx } of edges) {
        const task = parseTask({
          zones: [`${field}@${azimuthDeg}`],
          require: [
            { contrast: { feature_px: 4, at_least: 0.3 } },
            { contrast: { feature_px: 2, at_least: 0.3 } },
            { edge_blur: { at_most_px: 2 } },
          ],
        });
        const { rules } = await judge({ rig, task, threads: 1 });
        const [coarse, fine, blur] = rules.map(({ zones }) => zones[0][direction!]!);
        // the loop's own limit
        expect(Math.abs(sfr[0].value - coarse)).toBeLessThan(0.015);
        expect(Math.abs(sfr[1].value - fine)).toBeLessThan(0.015);
        // 4 %: the chart's own samples (a quarter of a pixel), the bins of the edge spread, and a PSF that changes along the edge
        expect(Math.abs(edgeWidthPx! / blur - 1)).toBeLessThan(0.04);
      }
    },
  );

  it('agree on placement within 0.03 pixels: distortion and the shift by coma', SLOW, async () => {
    const rig = rigAt(0.9);
    const { scene, truth } = await chart({ kind: 'dots', rig, grid: [3, 3], sizePx: 24 });
    const { picture } = await renderer.render({ rig, scene, oversample: 4, tolerance: 0.002 });
    const { dots } = await measure({ image: picture, truth, rig });
    expect(dots.length).toBeGreaterThanOrEqual(6);
    for (const { ideal, found, field, azimuthDeg } of dots) {
      const task = parseTask({
        zones: [`${field}@${azimuthDeg}`],
        require: [{ placement: { at_most_px: 1 } }],
      });
      const { value } = (await judge({ rig, task, threads: 1 })).rules[0].zones[0];
      expect(Math.abs(Math.hypot(found[0] - ideal[0], found[1] - ideal[1]) - value)).toBeLessThan(0.03);
      expect(value).toBeGreaterThan(3);
    }
  });
});
