// @ts-check
/** Machine-readable symbols as SVG paths, module for module: QR code, Data Matrix and Code 128. */
import bwipjs from 'bwip-js';

/** A symbol without its quiet zone, in modules.
 * @typedef {object} MachineSymbol
 * @property {number} width   in modules
 * @property {number} height  in modules; 1 for a linear symbol, to be stretched
 * @property {string} path    the dark modules, one unit a module
 */

/** @param {string} text @returns {MachineSymbol} with error correction level M (about 15 % of the code words) */
export function qrCode(text) {
  return matrixSymbol({ bcid: 'qrcode', text, eclevel: 'M' });
}

/** @param {string} text @returns {MachineSymbol} square, ECC 200 */
export function dataMatrix(text) {
  return matrixSymbol({ bcid: 'datamatrix', text });
}

/** @param {string} text @returns {MachineSymbol} */
export function code128(text) {
  const [{ sbs }] = /** @type {any} */ (bwipjs.raw({ bcid: 'code128', text }));
  let x = 0;
  let path = '';
  sbs.forEach((/** @type {number} */ wide, /** @type {number} */ index) => {
    if (index % 2 === 0) path += `M${x} 0h${wide}v1h${-wide}z`; // bars and spaces take turns, a bar first
    x += wide;
  });
  return { width: x, height: 1, path };
}

/** A symbol drawn at a place.
 * @param {MachineSymbol} symbol
 * @param {object} place
 * @param {number} place.x       left side of the symbol
 * @param {number} place.y       its top
 * @param {number} place.module  side of a module
 * @param {number} [place.barHeight]  height of the bars of a linear symbol
 * @param {string} [place.ink]
 */
export function drawSymbol(symbol, { x, y, module, barHeight = module, ink = '#000' }) {
  const rise = symbol.height === 1 ? barHeight : module;
  return `<path transform="translate(${x} ${y}) scale(${module} ${rise})" fill="${ink}" d="${symbol.path}"/>`;
}

/** @param {import('bwip-js').RenderOptions & { eclevel?: string }} options @returns {MachineSymbol} */
function matrixSymbol(options) {
  const [{ pixs, pixx, pixy }] = /** @type {any} */ (bwipjs.raw(options));
  let path = '';
  for (let row = 0; row < pixy; row++)
    for (let column = 0; column < pixx; ) {
      let run = 0; // a run of dark modules is one rectangle, so that no hairline shows between neighbours
      while (column + run < pixx && pixs[row * pixx + column + run] === 1) run++;
      if (run > 0) path += `M${column} ${row}h${run}v1h${-run}z`;
      column += Math.max(run, 1);
    }
  return { width: pixx, height: pixy, path };
}
