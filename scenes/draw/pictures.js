// @ts-check
/** Every scene of the packing hall by name, and how it gets into its file. */
import { mkdir, writeFile } from 'node:fs/promises';
import { basename, dirname, join } from 'node:path';
import { appleBelt } from './apple-belt.js';
import { crateTags } from './crate-tags.js';
import { cocoText, toCoco } from './labels.js';
import { toPng } from './rasterise.js';
import { testChart } from './test-chart.js';

/** A scene and where it goes, relative to a folder.
 * @typedef {object} Scene
 * @property {string} file
 * @property {() => import('./rasterise.js').Drawing} draw
 * @property {string} [labels]  file for the labels; scenes may share one
 */

/** The scenes of the demo, at the pixel counts of their rigs. @type {readonly Scene[]} */
export const DEMO_SCENES = [
  { file: 'scenes/tags/crate-tags.png', labels: 'scenes/tags-labels.json', draw: () => crateTags() },
  { file: 'scenes/belt/apple-belt.png', labels: 'scenes/belt-labels.json', draw: () => appleBelt() },
  { file: 'scenes/chart/test-chart.png', draw: () => testChart() },
];

/** Scenes for training pictures, of which each shows a part. @type {readonly Scene[]} */
export const TRAINING_SCENES = [
  ...[21, 22, 23, 24].map((seed, index) => ({
    file: `scenes/training/apples/apples-${index + 1}.png`,
    labels: 'scenes/training/apples.json',
    draw: () => appleBelt({ width: 1280, height: 800, seed }),
  })),
  ...[31, 32, 33].map((seed, index) => ({
    file: `scenes/training/tags/tags-${index + 1}.png`,
    labels: 'scenes/training/tags.json',
    draw: () => crateTags({ columns: 2, rows: 4, seed }),
  })),
];

/** The smaller scenes that `foreglass start` lays into a folder. @type {readonly Scene[]} */
export const START_SCENES = [
  { file: 'scenes/tags/crate-tags.png', draw: () => crateTags({ columns: 2, rows: 3 }) },
  ...[4, 11].map((seed, index) => ({
    file: `scenes/belt/apples-${index + 1}.png`,
    labels: 'belt-labels.json',
    draw: () => appleBelt({ width: 800, height: 500, seed }),
  })),
];

/** Draw scenes into a folder, with their labels.
 * @param {readonly Scene[]} scenes @param {string} folder  made where there is none
 * @returns {Promise<string[]>} the files written */
export async function writeScenes(scenes, folder) {
  const drawn = await Promise.all(
    scenes.map(async ({ file, draw, labels }) => {
      const drawing = draw();
      const { width, height } = drawing;
      const entry = { file: basename(file), width, height, labels: drawing.labels };
      return { file, labels, entry, png: await toPng(drawing) };
    }),
  );
  const written = [];
  for (const { file, png } of drawn) written.push(await write(join(folder, file), png));
  for (const file of new Set(drawn.flatMap(({ labels }) => labels ?? []))) {
    const entries = drawn.filter(({ labels }) => labels === file).map(({ entry }) => entry);
    written.push(await write(join(folder, file), cocoText(toCoco(entries))));
  }
  return written;
}

/** @param {string} path @param {string | Uint8Array} content */
async function write(path, content) {
  await mkdir(dirname(path), { recursive: true });
  await writeFile(path, content);
  return path;
}
