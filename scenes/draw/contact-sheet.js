// @ts-check
/** Pictures of data sets side by side, with their labels drawn on them. */
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import sharp from 'sharp';
import { text } from './stroke-font.js';

/** What records.jsonl says of a picture, so far as it is drawn.
 * @typedef {object} Entry
 * @property {string} file
 * @property {number} width
 * @property {number} height
 * @property {{ category_id: number, bbox: [number, number, number, number], segmentation?: number[][], keypoints?: number[] }[]} labels */

const COLUMNS = 10;
const CELL_WIDTH = 200;
const GAP = 6;
const HEAD = 30;
const PAGE = '#f6f5f1';
const INK = '#22262a';
/** A colour for each category, apart in hue and in lightness. */
const COLOURS = ['#ffd23f', '#2ec4b6', '#ff6b6b', '#b388eb', '#6fffe9', '#ff9f1c'];

/** @param {readonly string[]} folders  of data sets, whose pictures have one shape @returns {Promise<Buffer>} a PNG */
export async function contactSheet(folders) {
  const sets = await Promise.all(folders.map(readSet));
  const names = [...new Set(sets.flatMap(({ categories }) => categories.map(({ name }) => name)))];
  const used = new Set(
    sets.flatMap(({ entries, nameOf }) =>
      entries.flatMap(({ labels }) => labels.map(({ category_id }) => nameOf(category_id))),
    ),
  );
  const shownNames = names.filter((name) => used.has(name));
  const colourOf = (/** @type {string} */ name) => COLOURS[shownNames.indexOf(name) % COLOURS.length];
  const cells = await Promise.all(
    sets.flatMap(({ folder, entries, nameOf }) =>
      entries.map((entry) => cell(folder, entry, (category) => colourOf(nameOf(category)))),
    ),
  );
  const rows = Math.ceil(cells.length / COLUMNS);
  const cellHeight = cells[0].height;
  const width = GAP + COLUMNS * (CELL_WIDTH + GAP);
  const height = HEAD + rows * (cellHeight + GAP);
  const legend = shownNames.map((name, at) => {
    const x = GAP + at * 190;
    const label = text(name.replaceAll('_', ' ').toUpperCase(), {
      x: x + 24,
      y: HEAD - 9,
      capHeight: 11,
      weight: 0.15,
      ink: INK,
    });
    return `<rect x="${x}" y="${HEAD - 21}" width="16" height="12" fill="${colourOf(name)}" stroke="${INK}"/>${label}`;
  });
  return sharp({ create: { width, height, channels: 3, background: PAGE } })
    .composite([
      { input: svg(width, height, legend.join('')), left: 0, top: 0 },
      ...cells.map(({ data }, at) => ({
        input: data,
        left: GAP + (at % COLUMNS) * (CELL_WIDTH + GAP),
        top: HEAD + Math.floor(at / COLUMNS) * (cellHeight + GAP),
      })),
    ])
    .png({ compressionLevel: 9, palette: true, colours: 256, dither: 0.6, effort: 10 })
    .toBuffer();
}

/** @param {string} folder */
async function readSet(folder) {
  const lines = (await readFile(join(folder, 'records.jsonl'), 'utf8')).trim().split('\n');
  /** @type {Entry[]} */
  const entries = lines.map((line) => JSON.parse(line));
  const { splits } = JSON.parse(await readFile(join(folder, 'dataset.json'), 'utf8'));
  const file = splits === undefined ? 'labels.json' : `labels-${Object.keys(splits)[0]}.json`;
  /** @type {{ categories: { id: number, name: string }[] }} */
  const { categories } = JSON.parse(await readFile(join(folder, file), 'utf8'));
  const nameOf = (/** @type {number} */ id) => categories.find((category) => category.id === id)?.name ?? '';
  return { folder, entries, categories, nameOf };
}

/** @param {string} folder @param {Entry} entry @param {(category: number) => string} colourOf */
async function cell(folder, { file, width, height, labels }, colourOf) {
  const scale = CELL_WIDTH / width;
  const cellHeight = Math.round(height * scale);
  const shapes = labels.map(
    ({ category_id, bbox: [x, y, boxWidth, boxHeight], segmentation = [], keypoints = [] }) => {
      const colour = colourOf(category_id);
      const outlines = segmentation.map(
        (polygon) => `<polygon points="${polygon.join(' ')}" fill="${colour}" fill-opacity="0.12"/>`,
      );
      const points = [];
      for (let at = 0; at < keypoints.length; at += 3) {
        if (keypoints[at + 2] > 0)
          points.push(`<circle cx="${keypoints[at]}" cy="${keypoints[at + 1]}" r="7" fill="${colour}"/>`);
      }
      const box = `<rect x="${x}" y="${y}" width="${boxWidth}" height="${boxHeight}" stroke-dasharray="9 7" fill="none"/>`;
      return `<g stroke="${colour}" stroke-width="3">${outlines.join('')}${box}${points.join('')}</g>`;
    },
  );
  const overlay = svg(width, height, shapes.join(''));
  const marked = await sharp(join(folder, 'images', file))
    .toColourspace('srgb')
    .composite([{ input: overlay, left: 0, top: 0 }])
    .png()
    .toBuffer();
  return { height: cellHeight, data: await sharp(marked).resize(CELL_WIDTH, cellHeight).png().toBuffer() };
}

/** @param {number} width @param {number} height @param {string} body */
function svg(width, height, body) {
  return Buffer.from(
    `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height}">${body}</svg>`,
  );
}
