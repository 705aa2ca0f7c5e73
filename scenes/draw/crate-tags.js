// @ts-check
/** A sheet of crate tags: each with a QR code, a Data Matrix, a Code 128 and lettering in several sizes, up to the corners. */
import { rectangle } from './labels.js';
import { randomStream } from './random.js';
import { grey } from './rasterise.js';
import { text } from './stroke-font.js';
import { code128, dataMatrix, drawSymbol, qrCode } from './symbols.js';

/** One tag with its margin, in pixels: four columns and six rows make 2448 x 2048. */
const PITCH_X = 612;
const PITCH_Y = 2048 / 6;
const MARGIN = 12;
const TAG_WIDTH = PITCH_X - 2 * MARGIN;
const TAG_HEIGHT = 317;
const HEADER = 58;

/** Sides of a module, in pixels. */
const QR_MODULE = 5;
const DATA_MATRIX_MODULE = 4;
const BAR_MODULE = 3;

/** Shares of the light that card, ink and the sheet below reflect. */
const CARD = grey(0.86);
const INK = grey(0.03);
const SHEET = grey(0.42);
const CUT = grey(0.2);

/** Apples of this packing hall, all invented. */
const VARIETIES = ['TAMBREL', 'OSKERRY', 'FENWILLOW', 'QUILLAM', 'LUMARET', 'DUNBARROW'];
const SIZES = ['60-65', '65-70', '70-75', '75-80'];

/** @param {{ columns?: number, rows?: number, seed?: number }} [options]
 * @returns {import('./rasterise.js').Drawing} 612 pixels a column, 341 1/3 a row: choose a multiple of three rows */
export function crateTags({ columns = 4, rows = 6, seed = 1 } = {}) {
  const width = columns * PITCH_X;
  const height = Math.round(rows * PITCH_Y);
  const random = randomStream(seed);
  /** @type {import('./labels.js').Label[]} */
  const labels = [];
  let body = `<rect width="${width}" height="${height}" fill="${SHEET}"/>`;
  for (let row = 0; row < rows; row++)
    for (let column = 0; column < columns; column++) {
      const x = column * PITCH_X + MARGIN;
      const y = Math.round(row * PITCH_Y) + MARGIN;
      const crate = 20401 + row * columns + column;
      body += tag(x, y, contents(crate, random), labels);
    }
  for (let row = 1; row < rows; row++)
    for (let column = 1; column < columns; column++)
      body += cutMark(column * PITCH_X, Math.round(row * PITCH_Y));
  return { width, height, colour: false, finer: 4, body, labels };
}

/** What one tag says.
 * @param {number} crate @param {ReturnType<typeof randomStream>} random */
function contents(crate, random) {
  const row = random.whole(1, 48).toString().padStart(2, '0');
  const weight = (random.whole(164, 212) / 10).toFixed(1);
  return {
    crate,
    row,
    weight,
    variety: VARIETIES[crate % VARIETIES.length],
    size: random.pick(SIZES),
    picked: `09-${random.whole(3, 27).toString().padStart(2, '0')}`,
    grade: random.pick(['A', 'A', 'B', 'C']),
    line: random.whole(1, 4),
  };
}

/** @param {number} x @param {number} y  top left corner  @param {ReturnType<typeof contents>} says
 * @param {import('./labels.js').Label[]} labels  takes the tag's symbols */
function tag(x, y, says, labels) {
  const { crate, row, weight, variety, size, picked, grade, line } = says;
  const right = x + TAG_WIDTH;
  const bottom = y + TAG_HEIGHT;

  /** @param {string} category @param {import('./symbols.js').MachineSymbol} symbol @param {string} says
   * @param {number} left @param {number} top @param {number} module @param {number} [barHeight] */
  const put = (category, symbol, says, left, top, module, barHeight = module * symbol.height) => {
    labels.push({
      category,
      outline: rectangle(left, top, symbol.width * module, barHeight),
      text: says,
    });
    return drawSymbol(symbol, { x: left, y: top, module, barHeight, ink: INK });
  };

  const qrText = `CRATE ${crate};ROW ${row};${variety};${weight} kg`;
  const matrixText = `${crate}/${row}/${grade}`;
  const barText = `${crate}-${row}`;
  const matrix = dataMatrix(matrixText);
  const bars = code128(barText);
  const matrixLeft = right - 26 - matrix.width * DATA_MATRIX_MODULE;
  const barsLeft = right - 30 - bars.width * BAR_MODULE;
  const words = x + 204;

  return [
    `<path d="${roundedBox(x, y, TAG_WIDTH, TAG_HEIGHT, 14)}" fill="${CARD}"/>`,
    `<path d="${roundedTop(x, y, TAG_WIDTH, HEADER, 14)}" fill="${INK}"/>`,
    `<circle cx="${x + 34}" cy="${y + HEADER / 2}" r="13" fill="${SHEET}"/>`,
    text(`CRATE ${crate}`, { x: x + 68, y: y + 43, capHeight: 28, weight: 0.16, ink: CARD }),
    text(`ROW ${row}`, { x: right - 26, y: y + 43, capHeight: 28, weight: 0.16, ink: CARD, anchor: 'end' }),

    put('qr', qrCode(qrText), qrText, x + 28, y + 80, QR_MODULE),
    put('data_matrix', matrix, matrixText, matrixLeft, y + 80, DATA_MATRIX_MODULE),
    put('code_128', bars, barText, barsLeft, bottom - 75, BAR_MODULE, 46),

    text(variety, { x: words, y: y + 110, capHeight: 28, weight: 0.17, ink: INK }),
    text(`NET ${weight} kg`, { x: words, y: y + 150, capHeight: 22, weight: 0.13, ink: INK }),
    text(`SIZE ${size} mm`, { x: words, y: y + 182, capHeight: 16, weight: 0.13, ink: INK }),
    text(`PICKED ${picked}`, { x: words, y: y + 208, capHeight: 12, weight: 0.13, ink: INK }),
    text(`LINE ${line}  BAY ${row}-${line}`, {
      x: words + 150,
      y: y + 208,
      capHeight: 12,
      weight: 0.13,
      ink: INK,
    }),
    text(matrixText, { x: right - 26, y: y + 168, capHeight: 10, weight: 0.14, ink: INK, anchor: 'end' }),

    text(`GRADE ${grade}`, { x: x + 28, y: bottom - 46, capHeight: 18, weight: 0.16, ink: INK }),
    text('KEEP AT 2-4 C . STACK 5 HIGH', { x: x + 28, y: bottom - 15, capHeight: 8, weight: 0.15, ink: INK }),
    text(barText, { x: right - 30, y: bottom - 13, capHeight: 10, weight: 0.14, ink: INK, anchor: 'end' }),
  ].join('');
}

/** A cross where the sheet is cut. @param {number} x @param {number} y */
function cutMark(x, y) {
  return `<path d="M${x - 9} ${y}h18M${x} ${y - 9}v18" stroke="${CUT}" stroke-width="1.6" fill="none"/>`;
}

/** @param {number} x @param {number} y @param {number} width @param {number} height @param {number} r */
function roundedBox(x, y, width, height, r) {
  const [across, down] = [width - 2 * r, height - 2 * r];
  return (
    `M${x + r} ${y}h${across}a${r} ${r} 0 0 1 ${r} ${r}v${down}a${r} ${r} 0 0 1 ${-r} ${r}` +
    `h${-across}a${r} ${r} 0 0 1 ${-r} ${-r}v${-down}a${r} ${r} 0 0 1 ${r} ${-r}z`
  );
}

/** The same with a square foot. @param {number} x @param {number} y @param {number} width @param {number} height @param {number} r */
function roundedTop(x, y, width, height, r) {
  return (
    `M${x + r} ${y}h${width - 2 * r}a${r} ${r} 0 0 1 ${r} ${r}v${height - r}h${-width}v${r - height}` +
    `a${r} ${r} 0 0 1 ${r} ${-r}z`
  );
}
