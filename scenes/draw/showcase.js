// @ts-check
/** One picture that shows what the lens does: the whole picture beside details of scene and picture, middle and corner. */
import sharp from 'sharp';
import { text } from './stroke-font.js';

/** A row of the showcase.
 * @typedef {object} Subject
 * @property {string} scene    picture files
 * @property {string} picture
 * @property {readonly [left: number, top: number]} middle  of the details, in pixels
 * @property {readonly [left: number, top: number]} corner
 * @property {string} [label]  over the whole picture
 */

/** Details of 190 x 160 pixels are shown at twice their size, each pixel as a block of four: what is soft is the picture. */
const DETAIL = { width: 190, height: 160 };
const ZOOM = 2;
const CELL = { width: DETAIL.width * ZOOM, height: DETAIL.height * ZOOM };
const GAP = 10;
const HEAD = 34;
const HEADINGS = ['PICTURE', 'MIDDLE: PICTURE', 'CORNER: SCENE', 'CORNER: PICTURE'];
const PAGE = '#f6f5f1';
const INK = '#22262a';
const FRAME = '#e0562f';

/** @param {readonly Subject[]} subjects @returns {Promise<Buffer>} a PNG */
export async function showcase(subjects) {
  const columnLeft = (/** @type {number} */ column) => GAP + column * (CELL.width + GAP);
  const rowTop = (/** @type {number} */ row) => HEAD + row * (CELL.height + GAP);
  const width = columnLeft(HEADINGS.length);
  const height = rowTop(subjects.length);
  const cells = await Promise.all(
    subjects.flatMap(({ scene, picture, middle, corner, label }, row) =>
      [
        overview(picture, [middle, corner], label),
        detail(picture, middle),
        detail(scene, corner),
        detail(picture, corner),
      ].map(async (input, column) => ({ input: await input, left: columnLeft(column), top: rowTop(row) })),
    ),
  );
  const headings = HEADINGS.map((heading, column) =>
    text(heading, { x: columnLeft(column) + 2, y: HEAD - 10, capHeight: 13, weight: 0.15, ink: INK }),
  );
  const page = { create: { width, height, channels: /** @type {const} */ (3), background: PAGE } };
  return sharp(page)
    .composite([{ input: svg(width, height, headings.join('')), left: 0, top: 0 }, ...cells])
    .png({ compressionLevel: 9, palette: true, colours: 256, dither: 0.6, effort: 10 })
    .toBuffer();
}

/** The whole picture, reduced, with a frame around each detail.
 * @param {string} file @param {readonly (readonly [number, number])[]} details @param {string} [label] */
async function overview(file, details, label) {
  const { width } = await sharp(file).metadata();
  const fitted = sharp(file).resize(CELL.width, CELL.height, { fit: 'contain', background: PAGE });
  const scale = CELL.width / width;
  const { height } = await sharp(file).metadata();
  const top = (CELL.height - height * scale) / 2;
  const frames = details.map(([x, y]) => {
    const place = `x="${x * scale}" y="${y * scale + top}"`;
    return `<rect ${place} width="${DETAIL.width * scale}" height="${DETAIL.height * scale}"/>`;
  });
  const marks = `<g fill="none" stroke="${FRAME}" stroke-width="2">${frames.join('')}</g>${label === undefined ? '' : tag(label)}`;
  return fitted
    .toColourspace('srgb')
    .composite([{ input: svg(CELL.width, CELL.height, marks), left: 0, top: 0 }])
    .png()
    .toBuffer();
}

/** A label on a strip of the page's colour. @param {string} label */
function tag(label) {
  const lettering = text(label, { x: 8, y: 20, capHeight: 11, weight: 0.15, ink: INK });
  return `<rect width="${CELL.width}" height="28" fill="${PAGE}" fill-opacity="0.9"/>${lettering}`;
}

/** @param {string} file @param {readonly [number, number]} corner  its left and top */
function detail(file, [left, top]) {
  return sharp(file)
    .extract({ left, top, ...DETAIL })
    .resize(CELL.width, CELL.height, { kernel: 'nearest' })
    .toColourspace('srgb')
    .png()
    .toBuffer();
}

/** @param {number} width @param {number} height @param {string} body */
function svg(width, height, body) {
  return Buffer.from(
    `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height}">${body}</svg>`,
  );
}
