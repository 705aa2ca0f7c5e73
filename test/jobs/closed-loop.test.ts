/** The loop: a chart through the lens, measured as a lab would, gives back the figures that went in. */
import { afterAll, describe, expect, it } from 'vitest';
import { parseRig } from '../../src/files/load-rig.js';
import { chart } from '../../src/jobs/chart.js';
import { type EdgeFigures, type MeasureReport, measure } from '../../src/jobs/measure.js';
import { Renderer } from '../../src/jobs/renderer.js';
import { zones } from '../../src/jobs/zones.js';
import { bandLateralColourUm } from '../../src/optics/colour.js';
import { distortionPercent } from '../../src/optics/distortion.js';
import type { Rig } from '../../src/optics/rig.js';

/** Pictures are formed; the machine may be busy with other tests. */
const SLOW = { timeout: 60_000 };

const renderer = new Renderer({ threads: 2 });
afterAll(() => renderer.close());

const PITCH_MM = 0.00345;
const FREQUENCIES = [0.05, 0.1, 0.15, 0.2, 0.25, 0.3, 0.35, 0.4];

/** A lens with strong aberrations, and a small sensor that looks at one part of its field: the patch in its
 * middle stands at h. The field changes over such a patch as it does over one on a sensor of 5 megapixels. */
function rigAt(h: number, azimuthDeg: number, hasNoise: boolean): Rig {
  const pixels = [208, 192];
  const radiusPx = (h * 4.6) / PITCH_MM;
  const azimuth = (azimuthDeg * Math.PI) / 180;
  return parseRig({
    lens: {
      name: 'strongly aberrated',
      focal_length_mm: 12,
      f_number: 2.8,
      full_field_mm: 4.6,
      wavelength_nm: 550,
      waves: { W040: 0.8, W131: 1.1, W222: 0.9, W220: 0.6, W311: 6, W020: -0.5 },
    },
    camera: {
      pixels,
      pixel_pitch_um: 1000 * PITCH_MM,
      bands_nm: { mono: [550] },
      // 12 500 electrons at 1, so 10 000 at the chart's white, 0.8: shot noise alone, SNR 100 there on the
      // axis; 16 bits add nothing
      sensor: hasNoise
        ? { white_e: 12_500, full_well_e: 20_000, dark_noise_e: 0, prnu_percent: 0, dsnu_e: 0, bit_depth: 16 }
        : undefined,
    },
    mount: {
      axis_px: [103.5 - radiusPx * Math.cos(azimuth), 95.5 - radiusPx * Math.sin(azimuth)],
    },
  });
}

async function edgesAt(h: number, azimuthDeg: number, hasNoise: boolean): Promise<[Rig, MeasureReport]> {
  const rig = rigAt(h, azimuthDeg, hasNoise);
  const { scene, truth } = await chart({ kind: 'edges', rig, grid: [1, 1], sizePx: 128 });
  const { picture } = await renderer.render({ rig, scene, oversample: 4, tolerance: 0.002 });
  return [rig, await measure({ image: picture, truth, rig, cyclesPerPixel: FREQUENCIES })];
}

/** Camera MTF by `zones` at the edge's own field point, in the edge's direction. */
function zoneMtf(rig: Rig, { field, azimuthDeg, direction }: EdgeFigures): number[] {
  const fields = [`${field}@${azimuthDeg}`];
  const [zone] = zones(rig, { fields, lpPerMm: FREQUENCIES.map((f) => f / PITCH_MM) }).zones;
  return zone.mtf.map(({ camera }) => camera[direction!]);
}

const PLACES = [
  ['the axis', 0, 0],
  ['h = 0.5', 0.5, 0],
  ['h = 0.85', 0.85, 20],
  ['h = 1', 1, 35],
] as const;

describe('slanted edges through a strongly aberrated lens', () => {
  it.each(PLACES)(
    'give back the camera MTF of zones along and across the radius at %s, and within 0.03 in noise of SNR 100',
    SLOW,
    async (_, h, azimuth) => {
      const [rig, { edges, skipped }] = await edgesAt(h, azimuth, false);
      expect(skipped).toEqual([]);
      expect(edges).toHaveLength(4);
      if (h > 0) {
        const ways = edges.map(({ direction }) => direction).sort();
        expect(ways).toEqual(['sagittal', 'sagittal', 'tangential', 'tangential']);
      }
      for (const edge of edges) {
        const zone = zoneMtf(rig, edge);
        for (const [i, { value, predicted }] of edge.sfr.entries()) {
          // 0.015 is asked for. Measured: 0.006 against the prediction, half of it the light outside of the
          // kernel that the blur gives back by normalising (0.003 with a kernel tolerance of 0.001). The
          // prediction is the mean along the edge in the direction of its normal; zones looks at the middle
          // of the edge and exactly along or across the radius, which is up to 0.003 more: the edge is
          // slanted.
          expect(Math.abs(value - predicted!)).toBeLessThan(0.009);
          expect(Math.abs(value - zone[i])).toBeLessThan(0.015);
        }
      }

      const [, noisy] = await edgesAt(h, azimuth, true);
      expect(noisy.edges).toHaveLength(4);
      for (const edge of noisy.edges) {
        // shot noise of both sides; some 3000 flat pixels tell it to 1.3 %, so these are four standard errors
        const shotNoise = Math.sqrt((edge.bright + edge.dark) / 2 / 12_500);
        expect(Math.abs(edge.noise / shotNoise - 1)).toBeLessThan(0.06);
        const zone = zoneMtf(rig, edge);
        for (const [i, { value }] of edge.sfr.entries()) expect(Math.abs(value - zone[i])).toBeLessThan(0.03);
      }
    },
  );
});

/** A colour camera on a lens with distortion and lateral colour whose whole field fits a small sensor. */
const COLOUR_RIG = parseRig({
  lens: {
    name: 'distorting',
    focal_length_mm: 6,
    f_number: 2.8,
    full_field_mm: 0.6,
    wavelength_nm: 550,
    waves: { W040: 0.6, W131: 1.1, W222: 0.6, W220: 0.4, W311: 6, W020: -0.5 },
    colour: { axial_um: { 450: 8, 650: -4 }, lateral_um: { 450: 1.4, 650: -0.8 } },
  },
  camera: {
    pixels: [240, 180],
    pixel_pitch_um: 3.45,
    bands_nm: { red: [620], green: [540], blue: [460] },
  },
});

describe('discs through a distorting lens with lateral colour', () => {
  it('give back distortion and lateral colour, whether the rig says where to look or not', SLOW, async () => {
    const rig = COLOUR_RIG;
    const { scene, truth } = await chart({ kind: 'dots', rig, sizePx: 20, grid: [4, 3], oversample: 3 });
    const { picture } = await renderer.render({ rig, scene, oversample: 3 });
    const known = await measure({ image: picture, truth, rig });
    expect(known.skipped).toEqual([]);
    expect(known.dots).toHaveLength(3 * 12);
    // 0.03 px are asked for; measured 0.009, and 0.014 where the kernels leave twice as much light outside
    for (const { found, expected } of known.dots)
      expect(Math.hypot(found[0] - expected![0], found[1] - expected![1])).toBeLessThan(0.015);
    const corner = Math.max(...known.distortion.map(({ radialShiftPx }) => Math.abs(radialShiftPx)));
    expect(corner).toBeGreaterThan(1); // so there was something to find
    const radiusPx = (field: number) => (field * 0.6) / PITCH_MM;
    for (const { field, percent } of known.distortion) {
      const errorPx = ((percent - distortionPercent(rig.lens, field)) / 100) * radiusPx(field);
      expect(Math.abs(errorPx)).toBeLessThan(0.005); // measured 0.001
    }
    const colourUm = (name: string) =>
      bandLateralColourUm(rig.lens, rig.camera.bands.find((band) => band.name === name)!);
    for (const { field, band, against, um } of known.lateralColour) {
      const expectedUm = field * (colourUm(band) - colourUm(against));
      expect(Math.abs(um - expectedUm) / 1000 / PITCH_MM).toBeLessThan(0.005); // in pixels; measured 0.002
    }

    const blind = await measure({ image: picture, truth });
    for (const [i, { found }] of blind.dots.entries())
      expect(Math.hypot(found[0] - known.dots[i].found[0], found[1] - known.dots[i].found[1])).toBeLessThan(
        0.001,
      );
  });
});

describe('edges through a distorting lens', () => {
  it('are found where distortion puts them, without being told', SLOW, async () => {
    const waves = { ...COLOUR_RIG.lens.waves, W311: 20 }; // 6 % barrel: 16 px in the corner
    const rig: Rig = {
      ...COLOUR_RIG,
      lens: { ...COLOUR_RIG.lens, waves },
      camera: { ...COLOUR_RIG.camera, bands: [COLOUR_RIG.camera.bands[1]] },
    };
    const { scene, truth } = await chart({ kind: 'edges', rig, sizePx: 50, oversample: 2 });
    const { picture } = await renderer.render({ rig, scene, oversample: 2 });
    const known = await measure({ image: picture, truth, rig });
    const blind = await measure({ image: picture, truth });
    expect(known.edges.length).toBeGreaterThanOrEqual(4);
    expect(known.skipped).toEqual([]);
    expect(blind.skipped).toEqual([]);
    for (const [i, edge] of blind.edges.entries()) {
      expect(Math.hypot(edge.x - known.edges[i].x, edge.y - known.edges[i].y)).toBeLessThan(1.5); // along the edge, where it does not matter
      expect(Math.abs(edge.sfr[4].value - known.edges[i].sfr[4].value)).toBeLessThan(0.01);
    }
  });
});
