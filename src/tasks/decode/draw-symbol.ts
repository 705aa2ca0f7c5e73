/** A symbol onto a grid of samples, each the exact share of its square that is dark. */
import type { SymbolModules } from './library.js';

/** From modules (u to the right, v down, the symbol's upper left corner at 0, 0) to samples (the upper left corner of the first sample at
 * 0, 0): x = xu u + xv v + x0, y = yu u + yv v + y0. */
export interface ModuleMap {
  xu: number;
  xv: number;
  x0: number;
  yu: number;
  yv: number;
  y0: number;
}

/** Draw the dark modules.
 *
 * Each side between a dark and a light module adds the area to its right, exactly, to the samples that it crosses; the running sum along
 * each row turns these into coverage. So the result is right to rounding for any turn and size.
 * @param out  width x height samples, row-major; set to 0..1
 */
export function drawSymbol(
  { width: columns, height: rows, dark }: SymbolModules,
  map: ModuleMap,
  out: Float64Array,
  width: number,
  height: number,
): void {
  out.fill(0);
  const isDark = (column: number, row: number) =>
    column >= 0 && column < columns && row >= 0 && row < rows && dark[row * columns + column] === 1;
  const sign = map.xu * map.yv - map.xv * map.yu > 0 ? 1 : -1; // a mirrored map turns the sense of the outlines around
  const side = (u0: number, v0: number, u1: number, v1: number, turns: number) => {
    const { xu, xv, x0, yu, yv, y0 } = map;
    const from = [xu * u0 + xv * v0 + x0, yu * u0 + yv * v0 + y0];
    const to = [xu * u1 + xv * v1 + x0, yu * u1 + yv * v1 + y0];
    addSide(out, width, height, from[0], from[1], to[0], to[1], sign * turns);
  };
  for (let u = 0; u <= columns; u++) {
    for (let v = 0; v < rows; v++) {
      const change = Number(isDark(u, v)) - Number(isDark(u - 1, v));
      if (change !== 0) side(u, v, u, v + 1, change);
    }
  }
  for (let v = 0; v <= rows; v++) {
    for (let u = 0; u < columns; u++) {
      const change = Number(isDark(u, v)) - Number(isDark(u, v - 1));
      if (change !== 0) side(u, v, u + 1, v, -change);
    }
  }
  for (let row = 0; row < height; row++) {
    let sum = 0;
    for (let column = 0; column < width; column++) {
      sum += out[row * width + column];
      out[row * width + column] = Math.min(1, Math.max(0, sum));
    }
  }
}

/** Add a side, cut into pieces that each lie in one sample. A piece that falls by dy at the mean place x in its sample covers (1 - x) dy of
 * that sample and dy of every sample to the right. */
function addSide(
  out: Float64Array,
  width: number,
  height: number,
  x0: number,
  y0: number,
  x1: number,
  y1: number,
  weight: number,
): void {
  if (y0 === y1) return;
  const slope = (x1 - x0) / (y1 - y0);
  const turn = y1 > y0 ? weight : -weight;
  const [top, topX, bottom] = y1 > y0 ? [y0, x0, y1] : [y1, x1, y0];
  const lastRow = Math.min(height - 1, Math.ceil(bottom) - 1);
  for (let row = Math.max(0, Math.floor(top)); row <= lastRow; row++) {
    const from = Math.max(top, row);
    const to = Math.min(bottom, row + 1);
    addRowPiece(
      out,
      row * width,
      width,
      topX + (from - top) * slope,
      topX + (to - top) * slope,
      turn * (to - from),
    );
  }
}

/** A piece within one row, from x0 to x1, that falls by `fall` in all. */
function addRowPiece(
  out: Float64Array,
  start: number,
  width: number,
  x0: number,
  x1: number,
  fall: number,
): void {
  const left = Math.min(x0, x1);
  const right = Math.max(x0, x1);
  const first = Math.floor(left);
  const last = Math.floor(right);
  if (last === first) {
    addAt(out, start, width, first, 0.5 * (left + right) - first, fall);
    return;
  }
  for (let column = first; column <= last; column++) {
    const from = Math.max(left, column);
    const to = Math.min(right, column + 1);
    addAt(out, start, width, column, 0.5 * (from + to) - column, (fall * (to - from)) / (right - left));
  }
}

function addAt(
  out: Float64Array,
  start: number,
  width: number,
  column: number,
  place: number,
  fall: number,
): void {
  if (column >= width) return;
  if (column < 0) {
    out[start] += fall; // all of the row lies to its right
    return;
  }
  out[start + column] += fall * (1 - place);
  if (column + 1 < width) out[start + column + 1] += fall * place;
}
