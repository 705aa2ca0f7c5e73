import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { zones } from '../../../src/jobs/zones.js';
import { zonesHtml } from '../../../src/jobs/zones-html.js';
import type { Rig } from '../../../src/optics/rig.js';
import { sampleRig } from '../../optics/samples.js';
import {
  accessibilityFaults,
  findBrowser,
  listen,
  STICKING_OUT,
  startBrowser,
} from '../../support/browser.js';

const NAME = 'a <b>"bold"</b> & \'bent\' lens';
const BANDS = ['red', 'green', 'blue'].map((name, i) => ({
  name,
  lines: [{ nm: 620 - 80 * i, weight: 1 }],
}));

const RIGS: Record<string, Rig> = {
  colour: sampleRig({
    waves: { W040: 0.3, W131: 1.2, W222: 1, W220: 0.4, W311: 6 },
    lens: {
      name: NAME,
      lateralUm: [
        [460, 4],
        [620, -3],
      ],
    },
    camera: { bands: BANDS },
  }),
  tilted: sampleRig({ waves: { W040: 0.3, W222: 1 }, mount: { sensorTiltDeg: [0.1, 0.2] } }),
};

const pageOf = (rig: Rig) => zonesHtml(rig, zones(rig));

describe('the page of zones', () => {
  it('is one small file, the same bytes each time, that names what it was made from', async () => {
    const text = await pageOf(RIGS.colour);
    expect(await pageOf(RIGS.colour)).toBe(text);
    expect(text.length).toBeLessThan(1.5e6);
    expect(text).toContain('a &lt;b&gt;&quot;bold&quot;&lt;/b&gt; &amp; &#39;bent&#39; lens');
    expect(text).not.toContain('<b>');
    expect(text).toContain('a preview is no substitute for a measured sample');
    expect(text).toMatch(/Made by foreglass \d+\.\d+\.\d+/);
  });

  it('states the figures of the report', async () => {
    const rig = RIGS.tilted;
    const report = zones(rig);
    const text = await zonesHtml(rig, report);
    for (const zone of report.zones) {
      expect(text).toContain(`<td>${zone.mtf50LpPerMm.tangential.toFixed(1)}</td>`);
      expect(text).toContain(`<td>${zone.strehl.toFixed(3)}</td>`);
    }
  });
});

const program = findBrowser();
if (program === undefined)
  console.warn(
    'No browser here: the tests that open pages in one are skipped. Install chromium to run them.',
  );

describe.skipIf(program === undefined)('the page of zones in a browser', () => {
  let browser: Browser;
  let folder: string;
  const urls: Record<string, string> = {};

  beforeAll(async () => {
    folder = mkdtempSync(join(tmpdir(), 'pages-'));
    browser = await startBrowser(program!);
    for (const [name, rig] of Object.entries(RIGS)) {
      const file = join(folder, `${name}.html`);
      writeFileSync(file, await pageOf(rig));
      urls[name] = pathToFileURL(file).href;
    }
  }, 60_000);

  afterAll(async () => {
    await browser?.close();
    rmSync(folder, { recursive: true, force: true });
  });

  async function open(name: string, options: Parameters<Browser['newPage']>[0] = {}): Promise<Page> {
    const page = await browser.newPage({ viewport: { width: 1280, height: 900 }, ...options });
    await page.goto(urls[name]);
    return page;
  }

  it('complains of nothing and asks for nothing', async () => {
    const page = await browser.newPage();
    const complaints = listen(page, urls.colour);
    await page.goto(urls.colour, { waitUntil: 'networkidle' });
    await page.hover('#frame-map td');
    expect(complaints).toEqual({ console: [], requests: [] });
    await page.close();
  }, 60_000);

  it('shows the figures and the PSF of the cell that is pointed at', async () => {
    const page = await open('colour');
    const card = () =>
      page.evaluate(`[
        document.getElementById('zone-where').textContent,
        document.querySelector('#zone-psf use').getAttribute('href'),
        document.querySelector('#zone-psf g').getAttribute('transform'),
        document.querySelector('#zone-figures td.figure').textContent,
        document.querySelector('#frame-map [aria-selected]').cellIndex,
      ]`) as Promise<string[]>;
    const axis = await card();
    expect(axis[0]).toBe('x 0.00 mm, y 0.00 mm (h = 0.00)');
    await page.hover('#frame-map tbody tr:last-child td:last-child');
    // half of 2000 x 1500 pixels of 3.45 um, to the middle of the last one
    await expect.poll(async () => (await card())[0]).toBe('x 3.45 mm, y 2.59 mm (h = 1.08)');
    const corner = await card();
    expect(corner[1]).toBe('#psf-0'); // the first cell's, turned over
    expect(corner[2]).toBe('scale(-1 -1)');
    const report = zones(RIGS.colour, { fields: ['bottom_right'] });
    expect(corner[3]).toBe(report.zones[0].mtf[0].camera.tangential.toFixed(3));
    await page.focus('#frame-map [aria-selected]');
    await page.keyboard.press('ArrowLeft');
    await expect.poll(async () => (await card())[4]).toBe(8); // one to the left of the ninth, after the row's head
    await page.close();
  }, 60_000);

  it('colours the map anew for another frequency, band and direction', async () => {
    const page = await open('colour');
    const shown = () =>
      page.evaluate(`(() => {
        const td = document.querySelector('#frame-map td');
        return { text: td.textContent, colour: td.style.background, what: document.getElementById('map-what').textContent };
      })()`) as Promise<{ text: string; colour: string; what: string }>;
    const corner = zones(RIGS.colour, { fields: ['top_left'] }).zones;
    const lower = ({ tangential, sagittal }: { tangential: number; sagittal: number }) =>
      Math.min(tangential, sagittal).toFixed(2);
    const before = await shown();
    expect(before.text).toBe(lower(corner[0].mtf[1].camera));
    await page.selectOption('#pick-frequency', '0');
    const coarse = await shown();
    expect(coarse.text).toBe(lower(corner[0].mtf[0].camera));
    expect(coarse.colour).not.toBe(before.colour);
    await page.selectOption('#pick-band', '2');
    expect((await shown()).text).toBe(lower(corner[2].mtf[0].camera));
    await page.selectOption('#pick-direction', '2');
    expect((await shown()).text).toBe(corner[2].mtf[0].camera.sagittal.toFixed(2));
    expect((await shown()).what).toBe('across the radius (sagittal) at 36.23 lp/mm, band blue');
    await page.close();
  }, 60_000);

  it('is whole without its script', async () => {
    const page = await open('tilted', { javaScriptEnabled: false });
    expect(await page.locator('#frame-choices').isVisible()).toBe(false);
    expect(await page.locator('#frame-map td').count()).toBe(63);
    expect(await page.locator('figure svg').count()).toBeGreaterThan(20);
    await page.close();
  }, 60_000);

  it.each([360, 768, 1440])(
    'has nothing that sticks out at %i px',
    async (width) => {
      for (const name of Object.keys(RIGS)) {
        const page = await open(name, { viewport: { width, height: 900 } });
        await page.evaluate(
          "document.querySelectorAll('details').forEach((details) => { details.open = true; })",
        );
        expect(await page.evaluate(STICKING_OUT)).toEqual([]);
        await page.close();
      }
    },
    60_000,
  );

  it('can be read by all in both themes', async () => {
    const page = await open('colour', { colorScheme: 'light' });
    expect(await accessibilityFaults(page), 'light').toEqual([]);
    await page.emulateMedia({ colorScheme: 'dark' });
    expect(await accessibilityFaults(page, ['color-contrast']), 'dark').toEqual([]); // the rest is the same
    await page.close();
  }, 60_000);
});
