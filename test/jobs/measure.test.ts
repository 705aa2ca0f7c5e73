import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { InputError, InterruptedError } from '../../src/errors.js';
import { parseRig } from '../../src/files/load-rig.js';
import { encodePicture } from '../../src/files/pictures/index.js';
import { type ChartTruth, chart } from '../../src/jobs/chart.js';
import { type MeasureOptions, measure } from '../../src/jobs/measure.js';
import { render } from '../../src/jobs/render.js';
import type { Rig } from '../../src/optics/rig.js';
import { edgePicture } from '../measure/edge-pictures.js';

const folder = mkdtempSync(join(tmpdir(), 'measure-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));
const at = (name: string) => join(folder, name);

function rig(camera: object = {}): Rig {
  return parseRig({
    lens: {
      name: 'small lens',
      focal_length_mm: 12,
      f_number: 4,
      full_field_mm: 2,
      wavelength_nm: 550,
      waves: { W040: 0.2, W131: 0.3 },
    },
    camera: { pixels: [120, 100], pixel_pitch_um: 5, bands_nm: { mono: [550] }, ...camera },
  });
}

const SENSOR = {
  white_e: 1e6,
  full_well_e: 1.2e6,
  dark_noise_e: 0,
  prnu_percent: 0,
  dsnu_e: 0,
  bit_depth: 14,
};

/** A slanted edge in 120 x 100 pixels. */
const EDGE = (() => {
  const { samples, ...size } = edgePicture({ width: 120, height: 100, normalDeg: 5, sigmaPx: 0.6 });
  return { ...size, planes: [samples] };
})();
const REGION = { x: 20, y: 10, width: 80, height: 80 };

/** SFR at a quarter of a cycle a pixel. */
async function quarter(options: MeasureOptions): Promise<number> {
  const { edges } = await measure({ regions: [REGION], cyclesPerPixel: [0.25], ...options });
  return edges[0].sfr[0].value;
}

describe('measure, on any picture', () => {
  it('measures regions without knowing anything else', async () => {
    const report = await measure({ image: EDGE, regions: [REGION] });
    expect(report).toMatchObject({
      image: null,
      encoding: 'linear',
      pixels: [120, 100],
      chart: null,
      dots: [],
      distortion: [],
      flats: [],
      skipped: [],
      warnings: [],
    });
    const [edge] = report.edges;
    expect(edge).toMatchObject({
      field: null,
      azimuthDeg: null,
      direction: null,
      offRadiusDeg: null,
      band: 'mono',
      angleDeg: expect.closeTo(5, 1),
      normalDeg: expect.closeTo(5, 1),
      sfr50LpPerMm: undefined,
    });
    expect(edge.sfr.map(({ cyclesPerPixel }) => cyclesPerPixel)).toEqual(
      Array.from({ length: 10 }, (_, i) => (i + 1) / 20),
    );
    expect(edge.sfr[0]).toEqual({
      cyclesPerPixel: 0.05,
      lpPerMm: undefined,
      predicted: undefined,
      value: expect.any(Number),
    });
    // the frequency of 50 % lies where the response passes a half
    const [value] = (
      await measure({ image: EDGE, regions: [REGION], cyclesPerPixel: [edge.sfr50CyclesPerPixel!] })
    ).edges[0].sfr;
    expect(value.value).toBeCloseTo(0.5, 3);
  });

  it('takes line pairs a mm, field and direction from a rig', async () => {
    const { edges } = await measure({ image: EDGE, regions: [REGION], rig: rig(), lpPerMm: [40, 20] });
    const [edge] = edges;
    expect(edge.sfr.map(({ cyclesPerPixel, lpPerMm }) => [cyclesPerPixel, lpPerMm])).toEqual([
      [0.1, 20],
      [0.2, 40],
    ]);
    for (const { predicted } of edge.sfr) expect(predicted).toBeGreaterThan(0);
    expect(edge.field).toBeCloseTo((0.005 * Math.hypot(edge.x - 59.5, edge.y - 49.5)) / 2, 9);
    expect(['tangential', 'sagittal']).toContain(edge.direction);
    expect(edge.sfr50LpPerMm).toBeCloseTo(edge.sfr50CyclesPerPixel! / 0.005, 9);
  });

  it('measures every band of a colour picture, and flat fields', async () => {
    const planes = [0.4, 0.6, 0.8].map(
      (sigmaPx) => edgePicture({ width: 120, height: 100, normalDeg: 5, sigmaPx }).samples,
    );
    const flat = { x: 2, y: 5, width: 12, height: 90 };
    const { edges, flats } = await measure({ image: { ...EDGE, planes }, regions: [REGION], flats: [flat] });
    expect(edges.map(({ band }) => band)).toEqual(['red', 'green', 'blue']);
    const [red, green, blue] = edges.map(({ sfr }) => sfr[4].value);
    expect(red).toBeGreaterThan(green);
    expect(green).toBeGreaterThan(blue);
    expect(flats.map(({ band, mean, region }) => [band, mean, region])).toEqual(
      ['red', 'green', 'blue'].map((band) => [band, expect.closeTo(0.2, 6), flat]),
    );
  });
});

describe('how the numbers of a picture stand for light', () => {
  let linear: number;
  beforeAll(async () => {
    linear = await quarter({ image: EDGE });
    writeFileSync(at('srgb.png'), await encodePicture(EDGE, 'png'));
    writeFileSync(at('linear.png'), await encodePicture(EDGE, 'png', { linear: true }));
    writeFileSync(at('linear.tif'), await encodePicture(EDGE, 'tiff', { linear: true }));
  });

  it('is sRGB for 8 bits, decoded before anything is measured', async () => {
    expect(Math.abs((await quarter({ image: at('srgb.png') })) - linear)).toBeLessThan(0.01); // 8-bit steps
    const decoded = await measure({ image: at('srgb.png'), regions: [REGION] });
    expect(decoded.encoding).toBe('srgb');
    expect(decoded.edges[0]).toMatchObject({ dark: expect.closeTo(0.2, 2), bright: expect.closeTo(0.8, 2) });
    const taken = await measure({ image: at('srgb.png'), regions: [REGION], linear: true });
    // sRGB of 0.2 and 0.8
    expect(taken.edges[0]).toMatchObject({
      dark: expect.closeTo(0.485, 2),
      bright: expect.closeTo(0.906, 2),
    });
  });

  it('is told by the tags of a PNG file, or by --linear', async () => {
    expect(await quarter({ image: at('linear.png') })).toBeCloseTo(linear, 3);
    expect(await quarter({ image: at('linear.tif'), linear: true })).toBeCloseTo(linear, 3);
    const untold = await measure({ image: at('linear.tif'), regions: [REGION] });
    expect(untold.encoding).toBe('srgb');
    expect(untold.warnings).toEqual([
      expect.stringMatching(/linear\.tif: 16 bits without a word on their encoding.*--linear/),
    ]);
  });

  it('is told by the record of the rendering: sRGB, linear light or raw numbers', async () => {
    const camera = { sensor: SENSOR };
    const { scene, truth } = await chart({
      kind: 'edges',
      rig: rig(camera),
      grid: [1, 1],
      sizePx: 60,
      oversample: 2,
    });
    const written = async (name: string, linearOut: boolean) => {
      const files = { out: at(`${name}.tif`), raw: at(`${name}-raw.png`), recordFile: at(`${name}.json`) };
      await render({ rig: rig(camera), scene, oversample: 2, threads: 1, linear: linearOut, ...files });
      return files;
    };
    const values = [];
    for (const [name, isLinear] of [
      ['a', false],
      ['b', true],
    ] as const) {
      const { out, raw, recordFile } = await written(name, isLinear);
      const report = await measure({ image: out, truth, recordFile });
      expect(report.encoding).toBe(isLinear ? 'linear' : 'srgb');
      const fromRaw = await measure({ image: raw, truth, recordFile });
      expect(fromRaw.encoding).toBe('raw');
      values.push(report.edges[0], fromRaw.edges[0]);
      // the record brings the rig
      expect(report.edges[0].sfr[0].predicted).toBeGreaterThan(0);
    }
    for (const edge of values) {
      expect(edge.bright).toBeCloseTo(0.8, 1);
      expect(Math.abs(edge.sfr[4].value - values[1].sfr[4].value)).toBeLessThan(0.01);
    }
    writeFileSync(at('other.tif'), await encodePicture(EDGE, 'tiff'));
    await expect(measure({ image: at('other.tif'), truth, recordFile: at('a.json') })).rejects.toThrow(
      /a\.json: --record: the record is not that of .*other\.tif, found a record of a\.tif and a-raw\.png/,
    );
  });

  it('refuses the raw numbers of a mosaic', async () => {
    const camera = { bands_nm: { red: [620], green: [550], blue: [460] }, mosaic: 'rggb', sensor: SENSOR };
    const files = { out: at('m.png'), raw: at('m-raw.png'), recordFile: at('m.json') };
    await render({ rig: rig(camera), scene: EDGE, threads: 1, ...files });
    await expect(
      measure({ image: files.raw, regions: [REGION], recordFile: files.recordFile }),
    ).rejects.toThrow(/m-raw\.png: holds the raw numbers of a mosaic.*found mosaic: rggb/);
    const { edges } = await measure({ image: files.out, regions: [REGION], recordFile: files.recordFile });
    expect(edges.map(({ band }) => band)).toEqual(['red', 'green', 'blue']);
  });

  it('sees clipped raw numbers for what they are', async () => {
    const camera = { sensor: { ...SENSOR, full_well_e: 5e5 } };
    const files = { raw: at('clipped.png'), recordFile: at('clipped.json') };
    await render({ rig: rig(camera), scene: EDGE, threads: 1, ...files });
    await expect(
      measure({ image: files.raw, regions: [REGION], recordFile: files.recordFile }),
    ).rejects.toThrow(/clipped at black or white/);
  });
});

describe('what is refused', () => {
  const check = async (options: Partial<MeasureOptions>, message: RegExp) => {
    const attempt = measure({ image: EDGE, ...options });
    await expect(attempt).rejects.toThrow(InputError);
    await expect(attempt).rejects.toThrow(message);
  };
  let edges: ChartTruth;
  let star: ChartTruth;
  beforeAll(async () => {
    edges = (await chart({ kind: 'edges', rig: rig(), grid: [1, 1], sizePx: 50, oversample: 1 })).truth;
    star = (await chart({ kind: 'star', rig: rig(), oversample: 1 })).truth;
  });

  it('nothing to measure', async () => {
    await check({}, /--truth: nothing says what to measure. Name the chart's truth file/);
    await check(
      { truth: star },
      /--truth: this kind of chart is for looking at: nothing of it is measured, found star. Allowed: edges, dots/,
    );
  });

  it('sizes that do not fit, both at once', async () => {
    const small = { width: 60, height: 50, planes: [new Float32Array(3000).fill(0.5)] };
    await check(
      { image: small, truth: edges, rig: rig() },
      /--truth: the picture has not the size of the chart's sensor, found 60 x 50. Allowed: 120 x 100.\n--rig: the picture has not the size of the rig's sensor/,
    );
  });

  it('regions outside of the picture or without an edge, all of them, each once', async () => {
    const even = new Float32Array(12_000).fill(0.5);
    const image = { ...EDGE, planes: [even, even, even] };
    const regions = [
      { x: 100, y: 0, width: 40, height: 20 },
      { x: 0, y: 0, width: 40, height: 40 },
    ];
    const flats = [{ x: 0, y: 0, width: 5, height: 5 }];
    try {
      await measure({ image, regions, flats });
      expect.unreachable();
    } catch (error) {
      expect((error as InputError).faults.map(({ key, message }) => [key, message])).toEqual([
        ['--region 100,0,40,20', 'the region is not a part of the picture'],
        ['--region 0,0,40,40', 'shows no edge, or several that cross'],
        ['--flat 0,0,5,5', 'the flat region is too small'],
      ]);
    }
  });

  it('frequencies out of range, or without a pitch', async () => {
    await check(
      { regions: [REGION], cyclesPerPixel: [0.1, 1.5] },
      /--cycles-per-pixel: a frequency is out of range, found 1.5 cycles a pixel/,
    );
    await check(
      { regions: [REGION], rig: rig(), lpPerMm: [300] },
      /--lp-per-mm: a frequency is out of range, found 1.5 cycles a pixel/,
    );
    await check({ regions: [REGION], lpPerMm: [30] }, /--lp-per-mm: the pitch of the pixels is not known/);
  });

  it('a chart of which nothing can be measured, with the reasons', async () => {
    const image = { ...EDGE, planes: [new Float32Array(12_000).fill(0.5)] };
    await check({ image, truth: edges }, /--truth: no part of the chart can be measured: shows no edge/);
  });

  it('files that are no truth or record', async () => {
    writeFileSync(at('not.json'), '{ "a": 1 }');
    await check({ truth: at('not.json') }, /not\.json: is not the truth file of a chart/);
    await check(
      { regions: [REGION], recordFile: at('not.json') },
      /not\.json: is not the record of a picture/,
    );
    await check({ truth: at('no.json') }, /no\.json: there is no such file/);
  });

  it('a picture that is stopped on the way', async () => {
    const controller = new AbortController();
    controller.abort();
    await expect(measure({ image: EDGE, regions: [REGION], signal: controller.signal })).rejects.toThrow(
      InterruptedError,
    );
  });
});

describe('what is passed over', () => {
  it('parts of a chart that cannot be measured, told in the report and in one warning', async () => {
    const { scene, truth } = await chart({
      kind: 'edges',
      rig: rig(),
      grid: [1, 1],
      sizePx: 60,
      oversample: 1,
    });
    const hidden = scene.planes[0].map((value, i) => (i % 120 < 40 ? 0.3 : value)); // a shutter over the left side of the square
    const report = await measure({ image: { ...EDGE, planes: [hidden] }, truth });
    expect(report.edges.length).toBeGreaterThan(0);
    expect(report.skipped.length).toBeGreaterThan(0);
    expect(report.edges.length + report.skipped.length).toBe(4);
    expect(report.skipped[0]).toMatchObject({
      what: 'edge',
      band: 'mono',
      reason: expect.stringContaining('Allowed'),
    });
    expect(report.warnings).toEqual([
      expect.stringMatching(/^\d of 4 parts of the chart could not be measured; the first, at \(/),
    ]);
  });

  it('another chart, which has its edges elsewhere', async () => {
    const { scene } = await chart({ kind: 'edges', rig: rig(), grid: [1, 1], sizePx: 60, oversample: 1 });
    const { truth } = await chart({
      kind: 'edges',
      rig: rig(),
      grid: [1, 1],
      sizePx: 60,
      oversample: 1,
      angleDeg: 35,
    });
    await expect(measure({ image: { ...EDGE, planes: scene.planes }, truth })).rejects.toThrow(
      /no part of the chart can be measured/,
    );
  });

  it('figures of the rig for bands that it lacks', async () => {
    const image = { ...EDGE, planes: [0, 1, 2].map(() => EDGE.planes[0]) };
    const { edges, warnings } = await measure({ image, regions: [REGION], rig: rig() });
    expect(edges).toHaveLength(3);
    expect(edges[0].sfr[0].predicted).toBeUndefined();
    expect(warnings).toEqual([expect.stringMatching(/the picture has 3 bands and the rig 1/)]);
  });
});

// Source: libvips 8.18 through sharp 0.35 as another reader of the file
it('reads a picture that another program wrote', async () => {
  const codes = Uint8Array.from(EDGE.planes[0], (value) => Math.round(255 * value));
  await sharp(codes, { raw: { width: 120, height: 100, channels: 1 } })
    .toColourspace('b-w')
    .png()
    .toFile(at('other.png'));
  const own = await quarter({ image: EDGE });
  expect(Math.abs((await quarter({ image: at('other.png'), linear: true })) - own)).toBeLessThan(0.01);
});
