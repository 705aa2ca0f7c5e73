import { describe, expect, it } from 'vitest';
import { CAUTION } from '../../src/report/caution.js';
import { COLOURED } from '../../src/report/text.js';
import { zoneName, zoneTable } from '../../src/report/zone-table.js';
import { madeUpReport } from './made-up-report.js';

const NINE = [
  'axis',
  'top',
  'bottom',
  'left',
  'right',
  'top_left',
  'top_right',
  'bottom_left',
  'bottom_right',
];
const COLOUR = ['red', 'green', 'blue'];

/** The cells of the rows that begin with a zone and a band, over all tables below one title. */
function rowsBelow(table: string, title: string): string[][] {
  const lines = table.split('\n');
  const from = lines.findIndex((line) => line.startsWith(title));
  const to = lines.indexOf('', from);
  return lines.slice(from + 3, to).map((line) => line.split(/\s+/));
}

describe('zoneTable', () => {
  it('shows each figure in its place, along before across', () => {
    const report = madeUpReport({ places: ['axis', null] });
    const table = zoneTable(report);
    const [, off] = report.zones;
    expect(rowsBelow(table, 'Contrast (MTF) of lens and camera')[1]).toEqual([
      '0.25@90',
      '1.15',
      'mono',
      ...off.mtf.flatMap(({ camera }) => [camera.tangential.toFixed(3), camera.sagittal.toFixed(3)]),
      off.mtf50LpPerMm.tangential.toFixed(1),
      off.mtf50LpPerMm.sagittal.toFixed(1),
    ]);
    expect(rowsBelow(table, 'Contrast (MTF) of the lens alone')[1]).toEqual([
      '0.25@90',
      'mono',
      ...off.mtf.flatMap(({ diffractionLimit, lens }) =>
        [diffractionLimit, lens.tangential, lens.sagittal].map((value) => value.toFixed(3)),
      ),
    ]);
    expect(rowsBelow(table, 'Wavefront')[1]).toEqual([
      '0.25@90',
      'mono',
      off.strehl.toFixed(3),
      off.wavefrontRmsWaves.toFixed(3),
      off.distortionPercent.toFixed(2),
      off.lateralColourUm.toFixed(2),
      off.relativeIllumination.toFixed(3),
      off.bestFocusUm.tangential?.toFixed(1),
      '-',
    ]);
  });

  it('has one row a zone in each section, and units in the head', () => {
    const table = zoneTable(madeUpReport({ places: NINE, bands: COLOUR }));
    expect(table.match(/^bottom_right .*blue/gm)).toHaveLength(3);
    expect(table).toContain('18.12 lp/mm');
    expect(table).toContain('MTF50, lp/mm');
    expect(table).toContain('best focus, um');
  });

  it.each([
    ['one band', {}],
    ['all places in three bands', { places: NINE, bands: COLOUR }],
    ['a large image', { places: [...NINE, ...NINE], bands: COLOUR }],
    [
      'many frequencies',
      { places: NINE, bands: COLOUR, lpPerMm: [5, 10, 20, 40, 80, 120, 160, 200, 1234.5678] },
    ],
  ])('fits 80 columns with %s', (_, shape) => {
    const table = zoneTable({
      ...madeUpReport(shape),
      rig: 'a name of a rig that goes on and on '.repeat(5),
    });
    for (const line of table.split('\n')) expect(line.length).toBeLessThanOrEqual(80);
  });

  it('keeps the three default frequencies in one table a section, at any place and in any band', () => {
    const table = zoneTable(madeUpReport({ places: NINE, bands: COLOUR }));
    expect(table.match(/^zone/gm)).toHaveLength(3);
  });

  it('ends with the limits of the model', () => {
    const words = zoneTable(madeUpReport()).trimEnd().split(/\s+/).join(' ');
    expect(words.endsWith(CAUTION)).toBe(true);
    expect(CAUTION).toMatch(/third order/);
    expect(CAUTION).toMatch(/no substitute for a measured sample/);
  });

  it('says the same with colours and without', () => {
    const report = madeUpReport();
    const coloured = zoneTable(report, COLOURED);
    expect(coloured).not.toBe(zoneTable(report));
    // biome-ignore lint/suspicious/noControlCharactersInRegex: the colours are what is taken out
    expect(coloured.replace(/\x1b\[\d+m/g, '')).toBe(zoneTable(report));
  });
});

describe('zoneName', () => {
  it.each([
    ['top_right', 0.98, 301, 'top_right'],
    [null, 0.7, 0, '0.7'],
    [null, 0.7, 90, '0.7@90'],
    [null, 1 / 3, 12.5, '0.3333@12.5'],
  ])('%s, h = %s at %s is %s', (place, field, azimuthDeg, name) => {
    expect(zoneName({ place, field, azimuthDeg })).toBe(name);
  });
});
