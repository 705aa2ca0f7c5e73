import { describe, expect, it } from 'vitest';
import type { MeasureReport } from '../../src/measure/figures.js';
import { CAUTION } from '../../src/report/caution.js';
import { chartSummary } from '../../src/report/chart-summary.js';
import { measureCsv } from '../../src/report/measure-csv.js';
import { measureTable } from '../../src/report/measure-table.js';
import { COLOURED } from '../../src/report/text.js';

const EMPTY: MeasureReport = {
  image: 'picture.png',
  encoding: 'linear',
  pixels: [1224, 1024],
  chart: null,
  edges: [],
  dots: [],
  distortion: [],
  lateralColour: [],
  radialFit: [],
  flats: [],
  skipped: [],
  warnings: [],
};

function edge(band: string, isPredicted: boolean, frequencies: number): MeasureReport['edges'][number] {
  return {
    x: 155.33,
    y: 1023.6,
    field: 0.791,
    azimuthDeg: 30,
    direction: 'tangential',
    offRadiusDeg: 4,
    band,
    normalDeg: 214.9,
    angleDeg: 34.9,
    lengthPx: 78.6,
    sfr: Array.from({ length: frequencies }, (_, i) => ({
      cyclesPerPixel: (i + 1) / 20,
      lpPerMm: (i + 1) / 20 / 0.00345,
      value: 0.91 - i / 20,
      predicted: isPredicted ? 0.9 - i / 20 : undefined,
    })),
    sfr50CyclesPerPixel: 0.1441,
    edgeWidthPx: 3.692,
    dark: 0.19,
    bright: 0.77,
    noise: 0.006,
  };
}

const EDGES: MeasureReport = {
  ...EMPTY,
  chart: 'edges',
  edges: ['red', 'green', 'blue'].map((band) => edge(band, true, 10)),
};

const DOTS: MeasureReport = {
  ...EMPTY,
  chart: 'dots',
  dots: [
    {
      ideal: [10, 20],
      found: [10.5, 20.25],
      expected: [10.51, 20.26],
      field: 0.5,
      azimuthDeg: 12,
      band: 'green',
    },
    { ideal: [30, 20], found: [30.5, 20.25], field: 0.7, azimuthDeg: 12, band: 'red' },
  ],
  distortion: Array.from({ length: 40 }, (_, i) => ({
    field: i / 40,
    band: 'green',
    percent: -i / 100,
    radialShiftPx: -i / 10,
    dots: 4,
  })),
  lateralColour: Array.from({ length: 40 }, (_, i) => ({
    field: i / 40,
    band: 'red',
    against: 'green',
    px: i / 1000,
    um: i / 300,
    dots: 4,
  })),
  radialFit: [
    { band: 'red', scale: 0.99882, cubicPerMm2: -0.01, rmsPx: 0.0181 },
    { band: 'green', scale: 0.9991, cubicPerMm2: -0.01, rmsPx: 0.0172 },
  ],
};

const FLATS: MeasureReport = {
  ...EMPTY,
  flats: [
    {
      region: { x: 1, y: 2, width: 30, height: 40 },
      band: 'mono',
      mean: 0.5,
      noise: 0.005,
      snr: 100,
      snrDb: 40,
      slope: { x: 0, y: 0 },
    },
    {
      region: { x: 5, y: 6, width: 70, height: 80 },
      band: 'mono',
      mean: 0.25,
      noise: 0,
      snr: null,
      snrDb: null,
      slope: { x: 0, y: 0 },
    },
  ],
};

describe('measureTable', () => {
  it('shows each figure of an edge in its place, the rig beside it', () => {
    const table = measureTable({ ...EDGES, edges: [edge('mono', true, 2)] });
    const row = table.split('\n').find((line) => /^ *155 /.test(line))!;
    expect(row.trim().split(/\s+/)).toEqual([
      '155',
      '1024',
      '0.79',
      'along',
      '0.144',
      '3.69',
      '0.910',
      '0.900',
      '0.860',
      '0.850',
    ]);
    expect(table).toContain('0.05 c/px 14.5/mm');
    expect(table).toContain('rig: MTF of lens and camera');
    expect(table).not.toContain(' band ');
    expect(measureTable({ ...EDGES, edges: [edge('mono', false, 2)] })).not.toContain('rig:');
  });

  it('shows three of many frequencies, and says where the others are', () => {
    const table = measureTable(EDGES);
    expect(table.match(/c\/px \d/g)).toHaveLength(3);
    expect(table).toContain('0.5 c/px');
    expect(table).toContain('all 10 frequencies: --json, --csv');
    expect(table.match(/^ *155 .*green/gm)!.length).toBeGreaterThanOrEqual(1);
  });

  it('shows distortion and lateral colour at a dozen fields', () => {
    const table = measureTable(DOTS);
    expect(table).toContain('Discs: distortion in green, and lateral colour');
    const rows = table.split('\n').filter((line) => /^0\.\d{3} /.test(line));
    expect(rows).toHaveLength(12);
    expect(rows.at(-1)!.split(/\s+/)).toEqual(['0.975', '-0.390', '-3.90', '0.13', '4']);
    expect(table).toContain('all 40 fields: --json; every disc: --csv');
    expect(table).toContain('green: scale 0.99910, 0.017 px RMS');
  });

  it('shows flat fields, and a dash where there is no noise', () => {
    const rows = measureTable(FLATS)
      .split('\n')
      .filter((line) => /^\d+,/.test(line));
    expect(rows.map((row) => row.trim().split(/\s+/))).toEqual([
      ['1,2,30,40', '0.5000', '0.00500', '100.0', '40.0'],
      ['5,6,70,80', '0.2500', '0.00000', '-', '-'],
    ]);
  });

  it.each([
    ['edges', EDGES],
    ['discs', DOTS],
    ['flat fields', FLATS],
    ['a long name', { ...EDGES, image: `${'a'.repeat(100)} ${'b'.repeat(30)}` }],
  ])(
    'fits 80 columns with %s, ends with the limits of the model, and says the same in colour',
    (_, report) => {
      const table = measureTable(report);
      const [head, ...lines] = table.split('\n');
      if (report.image!.length < 80) expect(head.length).toBeLessThanOrEqual(80);
      for (const line of lines) expect(line.length).toBeLessThanOrEqual(80);
      expect(table.trimEnd().split(/\s+/).join(' ').endsWith(CAUTION)).toBe(true);
      // biome-ignore lint/suspicious/noControlCharactersInRegex: the colours are what is taken out
      expect(measureTable(report, COLOURED).replace(/\x1b\[\d+m/g, '')).toBe(table);
    },
  );
});

describe('measureCsv', () => {
  const rows = (report: MeasureReport) =>
    measureCsv(report)
      .trimEnd()
      .split('\n')
      .map((line) => line.split(','));

  it('has a line for each edge and frequency, in the names of the JSON', () => {
    const [head, first, ...rest] = rows(EDGES);
    expect(rest).toHaveLength(29);
    const cell = (name: string) => first[head.indexOf(name)];
    expect([
      cell('x'),
      cell('band'),
      cell('cycles_per_pixel'),
      cell('value'),
      cell('predicted'),
      cell('edge_width_px'),
    ]).toEqual(['155.33', 'red', '0.05', '0.91', '0.9', '3.692']);
  });

  it('has the discs where there is no edge, else the flat fields; nothing stands for what is not known', () => {
    expect(rows(DOTS).slice(1)).toEqual([
      ['0.5', '12', 'green', '10', '20', '10.5', '20.25', '10.51', '20.26'],
      ['0.7', '12', 'red', '30', '20', '30.5', '20.25', '', ''],
    ]);
    expect(rows(FLATS)[2]).toEqual(['5', '6', '70', '80', 'mono', '0.25', '0', '', '']);
  });
});

describe('chartSummary', () => {
  const truth = {
    foreglass: '0.1.0',
    rig: 'a lens',
    pixels: [100, 80] as [number, number],
    pixelPitchUm: 5,
    axisPx: [49.5, 39.5] as [number, number],
    fullFieldMm: 2,
    oversample: 4,
    levels: { white: 0.8, dark: 0.04 },
  };
  const place = { x: 0, y: 0, field: 0, azimuthDeg: 0 };

  it.each([
    ['dots' as const, { dots: [{ ...place, radiusPx: 5 }] }, '1 disc,'],
    [
      'star' as const,
      {
        sectors: [0, 0, 1].map((star) => ({ ...place, star, fromDeg: 0, toDeg: 5, innerPx: 1, outerPx: 9 })),
      },
      '3 dark sectors of 2 stars,',
    ],
    ['checker' as const, { corners: [place, place] }, 'a board with 2 whole corners,'],
  ])('says what is on a chart of %s', (chart, parts, words) => {
    const text = chartSummary(
      { ...truth, chart, ...parts },
      { out: 's.png', truth: 's.truth.json' },
      'a.rig.yaml',
    );
    expect(text).toContain(`Wrote s.png: ${words}`);
    expect(text).toContain('400 x 320 samples');
    expect(text).toContain('foreglass render s.png --scene-linear --oversample 4');
  });
});
