import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { HALL_LENS } from '../prescription/hall-lens.js';
import { CHILD_TIMEOUT_MS, runProgram } from './run-program.js';

/** The files of this project and of its packages that a command line makes Node load: its coverage report lists every script. */
async function filesLoadedBy(words: readonly string[]): Promise<string[]> {
  const folder = mkdtempSync(join(tmpdir(), 'startup-'));
  try {
    await runProgram(words, { env: { NODE_V8_COVERAGE: folder } });
    const reports = readdirSync(folder).map((name) => JSON.parse(readFileSync(join(folder, name), 'utf8')));
    const urls = reports.flatMap(({ result }) => result.map(({ url }: { url: string }) => url));
    return urls.flatMap((url) => /\/(node_modules\/[^/]+|dist\/\w+)/.exec(url)?.[1] ?? []);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

describe('start-up', { timeout: CHILD_TIMEOUT_MS }, () => {
  it('loads the command line alone for the help, so that it comes at once', async () => {
    const loaded = new Set(await filesLoadedBy(['render', '--help']));
    expect([...loaded].sort()).toEqual(['dist/cli', 'dist/errors', 'dist/version', 'node_modules/commander']);
  });

  it('loads what draws plots only where a plot is asked for', async () => {
    const folder = mkdtempSync(join(tmpdir(), 'startup-'));
    const words = ['derive', HALL_LENS, '--quiet', '--wavelengths', '550'];
    const plotting = ['node_modules/@observablehq', 'node_modules/linkedom'];
    const without = await filesLoadedBy(words);
    expect(without).toContain('dist/prescription');
    for (const name of [...plotting, 'node_modules/sharp', 'dist/imaging'])
      expect(without).not.toContain(name);
    const drawn = await filesLoadedBy([...words, '--plot', join(folder, 'bars.svg')]);
    for (const name of plotting) expect(drawn).toContain(name);
    rmSync(folder, { recursive: true, force: true });
  });
});
