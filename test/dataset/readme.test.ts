/** The recipe that the README shows works in the folder that `start` makes. */
import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { planDataset } from '../../src/dataset/plan.js';
import { dataset } from '../../src/jobs/dataset.js';

const at = (path: string) => fileURLToPath(new URL(`../../${path}`, import.meta.url));
let folder: string;
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'readme-'));
  cpSync(at('scenes/start'), folder, { recursive: true });
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

test('it is read, with all that it names', async () => {
  const readme = readFileSync(at('README.md'), 'utf8');
  const [recipe] = [...readme.matchAll(/```yaml\n([\s\S]*?)```/g)]
    .map(([, text]) => text)
    .filter((text) => text.includes('vary:'));
  writeFileSync(join(folder, 'readme.recipe.yaml'), recipe);
  const { scenes, recipe: read, warnings } = await planDataset(join(folder, 'readme.recipe.yaml'));
  expect(scenes.map(({ file }) => file)).toEqual(['apples-1.png', 'apples-2.png']);
  expect(read.vary).toHaveLength(3);
  expect(warnings).toEqual([]);
});

test('the recipe of `start` makes labelled pictures', { timeout: 60_000 }, async () => {
  const record = await dataset({
    recipe: join(folder, 'training.recipe.yaml'),
    out: join(folder, 'training'),
    limit: 1,
    threads: 1,
  });
  expect(record.counts?.labels).toBeGreaterThan(3);
});
