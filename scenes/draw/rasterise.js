// @ts-check
/** From a vector drawing to a picture with clean edges. */
import sharp from 'sharp';

/** Rows of the picture drawn at a time: keeps the fine picture small. */
const STRIP_ROWS = 256;

/** A drawing: what stands between <svg> and </svg>, in units of one pixel, with its labels.
 * @typedef {object} Drawing
 * @property {number} width    of the picture, in pixels
 * @property {number} height
 * @property {boolean} colour  false: only greys
 * @property {number} finer    each pixel is the mean of so many by so many finer ones: 4 for lettering and symbols, 2 where
 *   shaded areas would take long to draw
 * @property {string} body     SVG elements; opacity by fill-opacity and stroke-opacity, since each `opacity` lays a whole layer
 * @property {import('./labels.js').Label[]} labels
 */

/** Draw at a multiple of the size and average in linear light.
 *
 * The mean must be taken of light, not of sRGB numbers: a pixel half covered by white records half the light of white, and
 * its sRGB number is 188. Averaging the numbers gives 128, which is a fifth of the light: dark lines would come out too wide.
 *
 * @param {Drawing} drawing
 * @returns {Promise<Uint8Array>} 8-bit sRGB samples, row-major, 1 (grey) or 3 (colour) a pixel
 */
export async function rasterise(drawing) {
  const { width, height, colour, finer } = drawing;
  const channels = colour ? 3 : 1;
  const samples = new Uint8Array(width * height * channels);
  for (let top = 0; top < height; top += STRIP_ROWS) {
    const rows = Math.min(STRIP_ROWS, height - top);
    const fine = await drawStrip(drawing, top, rows);
    averageStrip(fine, finer, width, rows, channels, samples.subarray(top * width * channels));
  }
  return samples;
}

/** @param {Drawing} drawing @returns {Promise<Buffer>} the picture as a PNG, 8-bit grey or colour */
export async function toPng(drawing) {
  const { width, height, colour } = drawing;
  const raw = { width, height, channels: /** @type {1 | 3} */ (colour ? 3 : 1) };
  const picture = sharp(await rasterise(drawing), { raw });
  return (colour ? picture : picture.toColourspace('b-w'))
    .png({ compressionLevel: 6, adaptiveFiltering: colour })
    .toBuffer();
}

/** Rows `top` to `top + rows` of the drawing, `finer` times as fine, as sRGB samples.
 * @param {Drawing} drawing @param {number} top @param {number} rows */
async function drawStrip({ width, colour, finer, body }, top, rows) {
  const size = `width="${width * finer}" height="${rows * finer}" viewBox="0 ${top} ${width} ${rows}"`;
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" ${size}>${body}</svg>`;
  const picture = sharp(Buffer.from(svg), { unlimited: true }).removeAlpha();
  return (colour ? picture : picture.extractChannel(0)).raw().toBuffer();
}

/** @param {Uint8Array} fine @param {number} finer @param {number} width @param {number} rows @param {number} channels @param {Uint8Array} out */
function averageStrip(fine, finer, width, rows, channels, out) {
  const fineStride = width * finer * channels;
  for (let row = 0; row < rows; row++)
    for (let column = 0; column < width; column++)
      for (let channel = 0; channel < channels; channel++) {
        let sum = 0;
        for (let dy = 0; dy < finer; dy++) {
          let at = (row * finer + dy) * fineStride + column * finer * channels + channel;
          for (let dx = 0; dx < finer; dx++, at += channels) sum += LINEAR[fine[at]];
        }
        out[(row * width + column) * channels + channel] = encodeSrgb(sum / (finer * finer));
      }
}

/** Linear light of each 8-bit sRGB number. Source: IEC 61966-2-1:1999 (from memory). */
const LINEAR = Float64Array.from({ length: 256 }, (_, code) => {
  const value = code / 255;
  return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
});

/** Linear light where one 8-bit number gives way to the next. */
const STEPS = Float64Array.from({ length: 255 }, (_, code) => {
  const value = (code + 0.5) / 255;
  return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
});

/** The nearest 8-bit sRGB number, found in the table of steps: exact, and the same on every machine.
 * @param {number} linear 0..1 */
function encodeSrgb(linear) {
  let low = 0;
  let high = 255;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (linear >= STEPS[middle]) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** The sRGB colour, as `#rrggbb`, of a grey that reflects this share of the light.
 * @param {number} reflectance 0..1 */
export function grey(reflectance) {
  const hex = encodeSrgb(reflectance).toString(16).padStart(2, '0');
  return `#${hex}${hex}${hex}`;
}
