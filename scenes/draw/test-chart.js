// @ts-check
/** A plain test chart: the same panel in every part of the frame, so that the corners can be held against the middle. */
import { grey } from './rasterise.js';
import { text } from './stroke-font.js';

/** One panel, in pixels; the panels stand side by side. */
const PANEL_X = 408;
const PANEL_Y = 2048 / 5;

const PAPER = grey(0.85);
const INK = grey(0.03);
/** The slanted square: light enough and dark enough that neither side is clipped. */
const SQUARE = grey(0.12);
const SLANT_DEG = 5;
/** Widths of the bars, in pixels: a bar and its gap are one period. */
const BARS = [6, 4, 3, 2];

/** @param {{ columns?: number, rows?: number }} [options]
 * @returns {import('./rasterise.js').Drawing} 408 pixels a column, 409.6 a row: choose a multiple of five rows */
export function testChart({ columns = 6, rows = 5 } = {}) {
  const width = columns * PANEL_X;
  const height = Math.round(rows * PANEL_Y);
  let body = `<rect width="${width}" height="${height}" fill="${PAPER}"/>`;
  for (let row = 0; row < rows; row++)
    for (let column = 0; column < columns; column++) {
      const name = `${String.fromCharCode(65 + row)}${column + 1}`;
      body += `<g transform="translate(${column * PANEL_X} ${Math.round(row * PANEL_Y)})">${panel(name)}</g>`;
    }
  return {
    width,
    height,
    colour: false,
    finer: 4,
    body: body + frameGrid(width, height, columns, rows),
    labels: [],
  };
}

/** What stands in a panel of 408 x 409.6. @param {string} name */
function panel(name) {
  return [
    slantedSquare(102, 104, 118),
    star(304, 104, 76),
    barGroups(22, 214),
    dots(228, 214),
    grid(228, 318),
    text(name, { x: 22, y: 394, capHeight: 30, weight: 0.15, ink: INK }),
    text('PACKING HALL 3', { x: 88, y: 377, capHeight: 11, weight: 0.14, ink: INK }),
    text('BELT 2 CAMERA 1', { x: 88, y: 394, capHeight: 8, weight: 0.14, ink: INK }),
  ].join('');
}

/** @param {number} cx @param {number} cy @param {number} side */
function slantedSquare(cx, cy, side) {
  const place = `translate(${cx} ${cy}) rotate(${SLANT_DEG})`;
  return `<rect transform="${place}" x="${-side / 2}" y="${-side / 2}" width="${side}" height="${side}" fill="${SQUARE}"/>`;
}

/** A star of 36 dark rays; at the hub, where they would be finer than a pixel, a dark dot.
 * @param {number} cx @param {number} cy @param {number} radius */
function star(cx, cy, radius) {
  const RAYS = 36;
  const hub = 8;
  let rays = '';
  for (let ray = 0; ray < RAYS; ray++) {
    const [from, to] = [ray - 0.25, ray + 0.25].map((turn) => (2 * Math.PI * turn) / RAYS);
    const [ax, ay] = [radius * Math.cos(from), radius * Math.sin(from)].map(hundredths);
    const [bx, by] = [radius * Math.cos(to), radius * Math.sin(to)].map(hundredths);
    rays += `M0 0L${ax} ${ay}A${radius} ${radius} 0 0 1 ${bx} ${by}Z`;
  }
  return (
    `<path transform="translate(${cx} ${cy})" d="${rays}" fill="${INK}"/>` +
    `<circle cx="${cx}" cy="${cy}" r="${hub}" fill="${INK}"/><circle cx="${cx}" cy="${cy}" r="${hub / 2}" fill="${PAPER}"/>`
  );
}

/** Five bars of each width, upright and lying. @param {number} x @param {number} y */
function barGroups(x, y) {
  let upright = '';
  let lying = '';
  let left = x;
  for (const bar of BARS) {
    for (let count = 0; count < 5; count++) {
      upright += `M${left + 2 * bar * count} ${y}h${bar}v56h${-bar}z`;
      lying += `M${left} ${y + 72 + 2 * bar * count}h${9 * bar}v${bar}h${-9 * bar}z`;
    }
    left += 9 * bar + 12;
  }
  return `<path d="${upright}${lying}" fill="${INK}"/>`;
}

/** Dots from large to small. @param {number} x @param {number} y */
function dots(x, y) {
  let drawn = '';
  [16, 12, 9, 6, 4, 3, 2].forEach((diameter, column) => {
    for (let row = 0; row < 4; row++)
      drawn += `<circle cx="${x + 10 + 24 * column}" cy="${y + 10 + 24 * row}" r="${diameter / 2}"/>`;
  });
  return `<g fill="${INK}">${drawn}</g>`;
}

/** A grid of lines 2 pixels wide. @param {number} x @param {number} y */
function grid(x, y) {
  let lines = '';
  for (let column = 0; column <= 10; column++) lines += `M${x + 16 * column} ${y}v76`;
  for (let row = 0; row <= 4; row++) lines += `M${x - 1} ${y + 1 + 18.5 * row}h162`;
  return `<path d="${lines}" stroke="${INK}" stroke-width="2" fill="none"/>`;
}

/** Lines between the panels across the whole frame: straight on the chart, bent in the picture by distortion.
 * @param {number} width @param {number} height @param {number} columns @param {number} rows */
function frameGrid(width, height, columns, rows) {
  let lines = '';
  for (let column = 0; column <= columns; column++) lines += `M${clamp(column * PANEL_X, width)} 0V${height}`;
  for (let row = 0; row <= rows; row++) lines += `M0 ${clamp(Math.round(row * PANEL_Y), height)}H${width}`;
  return `<path d="${lines}" stroke="${INK}" stroke-width="3" fill="none"/>`;
}

/** The outermost lines stand a little inside the frame. @param {number} at @param {number} side */
function clamp(at, side) {
  return Math.min(Math.max(at, 5.5), side - 5.5);
}

/** @param {number} value */
function hundredths(value) {
  return Math.round(value * 100) / 100;
}
