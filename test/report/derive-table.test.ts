import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { derive } from '../../src/jobs/derive.js';
import { SEIDEL_SUMS } from '../../src/prescription/seidel.js';
import { CAUTION } from '../../src/report/caution.js';
import { deriveTable } from '../../src/report/derive-table.js';
import { surfacesCsv } from '../../src/report/surfaces-csv.js';
import { COLOURED } from '../../src/report/text.js';
import { packhouseLens, singlet, sixSurfaceLens } from '../prescription/lenses.js';

const { report } = derive(packhouseLens(), { wavelengthsNm: [450, 650] });

/** The cells of the rows of a section. */
function rowsBelow(table: string, title: string, headLines: number): string[][] {
  const lines = table.split('\n');
  const from = lines.findIndex((line) => line.startsWith(title));
  expect(from, title).toBeGreaterThanOrEqual(0);
  const to = lines.indexOf('', from);
  return lines.slice(from + 1 + headLines, to).map((line) => line.trim().split(/\s+/));
}

describe('deriveTable', () => {
  const table = deriveTable(report);

  it('shows what each surface contributes, in um, and the total', () => {
    const rows = rowsBelow(table, 'What each surface contributes', 2);
    expect(rows).toHaveLength(8);
    rows.slice(0, 7).forEach((row, i) => {
      const cells = SEIDEL_SUMS.map((name) =>
        (1000 * report.surfaces[i][name]).toFixed(2).replace('-0.00', '0.00'),
      );
      expect(row).toEqual(i === 4 ? ['5', 'stop', ...cells] : [String(i + 1), ...cells]);
    });
    expect(rows[7]).toEqual([
      'total',
      ...SEIDEL_SUMS.map((name) => (1000 * report.seidelMm[name]).toFixed(2)),
    ]);
  });

  it('shows the coefficients and the colour at each wavelength', () => {
    const rows = rowsBelow(table, 'Coefficients at each wavelength, in waves of 550 nm', 2);
    expect(rows.map(([nm]) => nm)).toEqual(['450', '550', '650']);
    const { waves, axialUm, lateralUm } = report.wavelengths[0];
    expect(rows[0].slice(1)).toEqual([
      ...[waves.W040, waves.W131, waves.W222, waves.W220, waves.W311].map((value) => value.toFixed(3)),
      axialUm.toFixed(2),
      lateralUm.toFixed(2),
    ]);
  });

  it('shows defocus where there is some', () => {
    const fit = derive(packhouseLens(), { bestFit: true, wavelengthsNm: [] }).report;
    const head = deriveTable(fit)
      .split('\n')
      .find((line) => line.includes('W040'));
    expect(head?.split(/\s+/).filter(Boolean)).toEqual('nm W040 W131 W222 W220 W311 W020 um um'.split(' '));
    expect(deriveTable(fit)).toMatch(/; the five terms\s+fitted to the exact wavefront/);
  });

  it('shows what the terms make of the exact wavefront, zone by zone', () => {
    const rows = rowsBelow(table, 'The exact wavefront at 550 nm', 2);
    expect(rows.map(([field]) => field)).toEqual(['0', '0.3', '0.5', '0.7', '0.8', '0.9', '1']);
    const corner = report.explained[6];
    expect(rows[6]).toEqual([
      '1',
      '4.60',
      corner.rmsWaves?.toFixed(3),
      corner.rmsLeftWaves?.toFixed(3),
      (100 * (corner.share ?? 0)).toFixed(1),
      corner.distortionPercent.toFixed(2),
      corner.distortionOfTermsPercent.toFixed(2),
      corner.openShare.toFixed(3),
      corner.relativeIllumination.toFixed(3),
    ]);
  });

  it('shows the first-order properties, those at infinity in words', () => {
    expect(table).toMatch(/^focal length +12 +back focus +6\.61296$/m);
    expect(table).toMatch(/^its diameter +3 +its diameter +2\.54143$/m);
    const dark = { ...report, focalLengthMm: null, paraxial: { ...report.paraxial, exitPupilMm: null } };
    expect(deriveTable(dark)).toMatch(/^focal length +infinite/m);
    expect(deriveTable(dark)).toMatch(/ exit pupil +at infinity$/m);
    expect(deriveTable(dark).split('\n')[0]).toContain('afocal');
  });

  it('has dashes where no light gets through', () => {
    const [zone] = report.explained;
    const dark = { ...zone, share: null, rmsWaves: null, rmsLeftWaves: null };
    expect(rowsBelow(deriveTable({ ...report, explained: [dark] }), 'The exact', 2)[0].slice(2, 5)).toEqual([
      '-',
      '-',
      '-',
    ]);
  });

  it('keeps to 80 columns, says what the model is worth, and paints nothing else', () => {
    for (const lens of [packhouseLens(), singlet(), sixSurfaceLens({ field: { halfAngleDeg: 12 } })]) {
      const text = deriveTable(derive(lens).report);
      for (const line of text.split('\n')) expect(line.length).toBeLessThanOrEqual(80);
      expect(text.replaceAll(/\s+/g, ' ')).toContain(CAUTION);
    }
    // biome-ignore lint/suspicious/noControlCharactersInRegex: they are what is looked for
    expect(deriveTable(report, COLOURED).replaceAll(/\x1b\[\d+m/g, '')).toBe(table);
  });
});

it('the README shows what the program prints', () => {
  const at = (path: string) => fileURLToPath(new URL(`../../${path}`, import.meta.url));
  const section =
    /## From a prescription\n[\s\S]*?\n## /.exec(readFileSync(at('README.md'), 'utf8'))?.[0] ?? '';
  const shown = /\n```\n(What each surface[\s\S]*?)\n```/.exec(section)?.[1].split('\n') ?? [];
  const printed = deriveTable(derive(at('scenes/start/three-element.lens.yaml')).report).split('\n');
  expect(shown.length).toBeGreaterThan(10);
  for (const line of shown.filter((text) => text !== '...')) expect(printed).toContain(line);
});

it('surfacesCsv has a line for each surface, in mm', () => {
  const lines = surfacesCsv(report).trimEnd().split('\n');
  expect(lines[0]).toBe('surface,S_I_mm,S_II_mm,S_III_mm,S_IV_mm,S_V_mm,C_I_mm,C_II_mm');
  expect(lines.slice(1).map((line) => line.split(',').map(Number))).toEqual(
    report.surfaces.map((surface) => [surface.surface, ...SEIDEL_SUMS.map((name) => surface[name] + 0)]), // + 0: CSV has no -0
  );
});
