/** The pages of judge, sweep, derive and measure: what they say, and how they behave in a browser. */
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { parseTask } from '../../../src/files/load-task.js';
import { deriveHtml, judgeHtml, measureHtml, sweepHtml } from '../../../src/jobs/html.js';
import { judge } from '../../../src/jobs/judge.js';
import { sweep } from '../../../src/jobs/sweep.js';
import type { MeasureReport } from '../../../src/measure/figures.js';
import { deriveLens } from '../../../src/prescription/derive.js';
import { deriveReport } from '../../../src/prescription/derive-report.js';
import { doublet } from '../../prescription/lenses.js';
import {
  accessibilityFaults,
  findBrowser,
  listen,
  STICKING_OUT,
  startBrowser,
} from '../../support/browser.js';
import { taskRig } from '../../tasks/rigs.js';

const NAME = '<i>sort</i> & "grade"';

const RIG = taskRig({ waves: { W040: 0.3, W131: 1.5, W222: 1.5, W220: 0.5, W311: 5 } });
const TASK = parseTask({
  name: NAME,
  zones: ['axis', '0.6', 'top_right'],
  require: [{ contrast: { lp_per_mm: 40, at_least: 0.5 } }, { edge_blur: { at_most_px: 3 } }],
});
const AXES = { fNumbers: [4, 5.6, 8], sensorShiftsUm: [-40, 0, 40] };

function measured(): MeasureReport {
  const edge = (field: number, direction: 'tangential' | 'sagittal', band: string) => ({
    x: 100 * field,
    y: 50,
    field,
    azimuthDeg: 0,
    direction,
    offRadiusDeg: 1,
    band,
    normalDeg: 5,
    angleDeg: 5,
    lengthPx: 60,
    sfr: [0.1, 0.3, 0.5].map((cyclesPerPixel) => ({
      cyclesPerPixel,
      lpPerMm: 290 * cyclesPerPixel,
      value: 1 - cyclesPerPixel - 0.2 * field,
      predicted: 1 - cyclesPerPixel - 0.21 * field,
    })),
    sfr50CyclesPerPixel: 0.4 - 0.1 * field,
    sfr50LpPerMm: 100,
    edgeWidthPx: 1.5,
    dark: 0.1,
    bright: 0.8,
    noise: 0.001,
  });
  const bands = ['red', 'blue'];
  return {
    image: '<script>alert(1)</script>.png',
    encoding: 'linear',
    pixels: [640, 480],
    chart: 'edges',
    edges: bands.flatMap((band) =>
      [0.1, 0.5, 0.9].flatMap((field) => [edge(field, 'tangential', band), edge(field, 'sagittal', band)]),
    ),
    dots: [{ ideal: [1, 2], found: [1, 2], field: 0.3, azimuthDeg: 0, band: 'red' }],
    distortion: [0.3, 0.6].map((field) => ({
      field,
      band: 'red',
      percent: field,
      radialShiftPx: 1,
      dots: 4,
    })),
    lateralColour: [{ field: 0.6, band: 'blue', against: 'red', px: 0.7, um: 2.4, dots: 4 }],
    radialFit: [{ band: 'red', scale: 1.001, cubicPerMm2: 0.001, rmsPx: 0.01 }],
    flats: [
      {
        region: { x: 1, y: 2, width: 30, height: 20 },
        band: 'red',
        mean: 0.5,
        noise: 0.01,
        snr: 50,
        snrDb: 34,
        slope: { x: 0, y: 0 },
      },
    ],
    skipped: [{ what: 'dot', x: 3, y: 4, band: 'red', reason: 'the disc is cut by the frame' }],
    warnings: ['a warning with <angles>'],
  };
}

const MAKE = {
  judge: async () => judgeHtml(RIG, await judge({ rig: RIG, task: TASK, threads: 1 })),
  'sweep over two axes': async () =>
    sweepHtml(RIG, await sweep({ rig: RIG, task: TASK, threads: 1, ...AXES, budget: true })),
  'sweep over one': async () =>
    sweepHtml(RIG, await sweep({ rig: RIG, lpPerMm: 60, threads: 1, sensorShiftsUm: [-40, -20, 0, 20, 40] })),
  derive: async () =>
    deriveHtml(deriveReport(deriveLens(doublet({ name: NAME }), { wavelengthsNm: [450, 550, 650] }))),
  measure: async () => measureHtml(measured(), RIG),
} as const;
type Kind = keyof typeof MAKE;
const KINDS = Object.keys(MAKE) as Kind[];

const made = new Map<Kind, string>();
beforeAll(async () => {
  for (const kind of KINDS) made.set(kind, await MAKE[kind]());
}, 60_000);

describe.each(KINDS)('the page of %s', (kind) => {
  it('is small, escapes what comes from files, and carries version and caution', () => {
    const text = made.get(kind)!;
    expect(text.length).toBeLessThan(1.5e6);
    expect(text).not.toMatch(/<i>|<script>alert|<angles>/);
    expect(text).toMatch(/Made by foreglass \d+\.\d+\.\d+/);
    expect(text).toContain('a preview is no substitute for a measured sample');
  });

  it('is the same bytes each time', async () => {
    expect(await MAKE[kind]()).toBe(made.get(kind));
  }, 60_000);
});

describe('pages of tasks', () => {
  it('say the verdict first, and the same as the report', async () => {
    const report = await judge({ rig: RIG, task: TASK, threads: 1 });
    const text = made.get('judge')!;
    const first = text.slice(text.indexOf('<main'));
    expect(first.indexOf('class="verdict')).toBeLessThan(first.indexOf('<svg'));
    expect(first).toContain(report.met ? '>Met in every zone<' : '>Not met<');
    for (const { zones } of report.rules)
      for (const { value, limit } of zones) {
        const decimals = limit === 0.5 ? 3 : 2;
        expect(text).toContain(`<td>${value.toFixed(decimals)}</td>`);
      }
  });

  it('show every sample of a sweep', async () => {
    const report = await sweep({ rig: RIG, lpPerMm: 60, threads: 1, sensorShiftsUm: [-40, -20, 0, 20, 40] });
    for (const { figure } of report.samples)
      expect(made.get('sweep over one')).toContain(`<td>${figure!.toFixed(3)}</td>`);
  });
});

const program = findBrowser();

describe.skipIf(program === undefined)('in a browser', () => {
  let browser: Browser;
  let folder: string;
  const urlOf = (kind: Kind) => pathToFileURL(join(folder, `${KINDS.indexOf(kind)}.html`)).href;

  beforeAll(async () => {
    folder = mkdtempSync(join(tmpdir(), 'pages-'));
    for (const [at, kind] of KINDS.entries()) writeFileSync(join(folder, `${at}.html`), made.get(kind)!);
    browser = await startBrowser(program!);
  }, 60_000);

  afterAll(async () => {
    await browser?.close();
    rmSync(folder, { recursive: true, force: true });
  });

  it.each(KINDS)(
    'the page of %s complains of nothing, asks for nothing and fits',
    async (kind) => {
      const page = await browser.newPage();
      const complaints = listen(page, urlOf(kind));
      await page.goto(urlOf(kind));
      await page.evaluate(
        "document.querySelectorAll('details').forEach((details) => { details.open = true; })",
      );
      for (const width of [360, 768, 1440]) {
        await page.setViewportSize({ width, height: 900 });
        expect(await page.evaluate(STICKING_OUT), `at ${width} px`).toEqual([]);
      }
      expect(complaints).toEqual({ console: [], requests: [] });
      await page.close();
    },
    60_000,
  );

  it.each(KINDS)(
    'the page of %s can be read by all in both themes',
    async (kind) => {
      const page = await browser.newPage({ colorScheme: 'light' });
      await page.goto(urlOf(kind));
      expect(await accessibilityFaults(page), 'light').toEqual([]);
      await page.emulateMedia({ colorScheme: 'dark' });
      expect(await accessibilityFaults(page, ['color-contrast']), 'dark').toEqual([]); // the rest is the same
      await page.close();
    },
    60_000,
  );
});
