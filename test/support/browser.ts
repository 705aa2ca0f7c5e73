/** A real browser for tests of pages. A machine without one skips them and says so. */
import { existsSync } from 'node:fs';
import { createRequire } from 'node:module';
import { delimiter, join } from 'node:path';
import { type Browser, chromium, type Page } from 'playwright-core';

/** Names under which systems install it. */
const NAMES = ['chromium', 'chromium-browser', 'google-chrome'];

/** The program, if there is one: the one that the variable CHROMIUM names, or the first on the path. */
export function findBrowser(): string | undefined {
  const named = process.env.CHROMIUM;
  if (named !== undefined && named !== '') return named;
  const folders = (process.env.PATH ?? '').split(delimiter);
  return NAMES.flatMap((name) => folders.map((folder) => join(folder, name))).find(existsSync);
}

/** Nothing here goes out: no network protocol of its own, no component that it would fetch, no account. */
const ARGUMENTS = [
  '--headless',
  '--no-sandbox',
  '--disable-gpu',
  '--disable-quic',
  '--no-first-run',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
];

export function startBrowser(executablePath: string): Promise<Browser> {
  return chromium.launch({ executablePath, args: ARGUMENTS });
}

/** What a page said and asked for that it should not. */
export interface Complaints {
  console: string[];
  requests: string[];
}

export function listen(page: Page, own: string): Complaints {
  const complaints: Complaints = { console: [], requests: [] };
  page.on('console', (message) => complaints.console.push(message.text()));
  page.on('pageerror', (error) => complaints.console.push(error.message));
  page.on('request', (request) => {
    const url = request.url();
    if (url !== own && !url.startsWith('data:')) complaints.requests.push(url);
  });
  return complaints;
}

/** Parts of the page that stick out on the right, innermost last; those within an area that scrolls by itself are no fault.
 * Written as a text, since it runs in the browser. */
export const STICKING_OUT = `(() => {
  const scrolls = (element) => element && (['auto', 'scroll', 'hidden'].includes(getComputedStyle(element).overflowX) || scrolls(element.parentElement));
  const wide = [...document.body.querySelectorAll('*')].filter((element) => {
    if (element.closest('.sprite, .skip') || element.closest('svg svg, svg *')) return false;
    return element.getBoundingClientRect().right > innerWidth + 0.5 && !scrolls(element.parentElement);
  });
  const names = wide.map((element) => element.tagName + '.' + element.className + '#' + element.id);
  return document.documentElement.scrollWidth > innerWidth ? ['the page scrolls sideways', ...names] : names;
})()`;

const AXE = createRequire(import.meta.url).resolve('axe-core/axe.min.js');

/** Serious faults that the accessibility checker finds, contrast of text among them.
 * @param rules the only ones to look at; left out: all */
export async function accessibilityFaults(page: Page, rules?: readonly string[]): Promise<string[]> {
  const { readFile } = await import('node:fs/promises');
  if (!(await page.evaluate("'axe' in window"))) await page.evaluate(await readFile(AXE, 'utf8'));
  const runOnly = rules === undefined ? '' : `, runOnly: ${JSON.stringify(rules)}`;
  const run = `axe.run(document, { resultTypes: ['violations']${runOnly} })`;
  const { violations } = (await page.evaluate(run)) as {
    violations: { id: string; impact: string; help: string; nodes: { html: string }[] }[];
  };
  return violations
    .filter(({ impact }) => impact === 'serious' || impact === 'critical')
    .map(
      ({ id, help, nodes }) =>
        `${id}: ${help}: ${nodes
          .slice(0, 3)
          .map(({ html }) => html.slice(0, 160))
          .join(' | ')}`,
    );
}
