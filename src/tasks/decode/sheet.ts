/** The symbols that are tried: what they say, how they lie, and the light that they send. */
import { CounterRandom } from '../../numeric/random.js';
import { distortionMap } from '../../optics/distortion.js';
import type { Rig } from '../../optics/rig.js';
import type { Place } from '../bench.js';
import type { ModuleMap } from './draw-symbol.js';
import type { SymbolKind, SymbolModules } from './library.js';

interface SymbolShape {
  /** Modules along a side of the largest symbol that the texts need. */
  width: number;
  height: number;
  /** Light modules around it. */
  quiet: number;
  /** How far it may be turned, in degrees to both sides. */
  turnDeg: number;
  letters: string;
}

const ALPHANUMERIC = '0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ';

/** 12 characters a symbol.
 *
 * Quiet zones: ISO/IEC 18004 asks for 4 modules, ISO/IEC 16022 for 1 (2 here), ISO/IEC 15417 for 10 at either end. A linear symbol is 0.3
 * as high as wide (ISO/IEC 15417 advises 0.15 at least), and is read along straight lines, which leave it when it is turned by 16 degrees;
 * so it is turned by 10 at most. The standards are cited from memory.
 */
export const SHAPES: Readonly<Record<SymbolKind, SymbolShape>> = {
  qr: { width: 21, height: 21, quiet: 4, turnDeg: 180, letters: ALPHANUMERIC },
  data_matrix: { width: 18, height: 18, quiet: 2, turnDeg: 180, letters: ALPHANUMERIC },
  code_128: { width: 101, height: 30, quiet: 10, turnDeg: 10, letters: '0123456789' },
};
const TEXT_LENGTH = 12;

/** Light that paper and ink send back, as scene values: matt white paper, black ink (common practice). */
export const PAPER = 0.85;
export const INK = 0.05;

/** What chance decides of a try. */
export interface Sheet {
  text: string;
  turnDeg: number;
  /** Place of the symbol's middle against the middle of the patch, in pixels: two pixels wide, so that every phase of a mosaic comes up. */
  x: number;
  y: number;
  seeds: { seed: number; cameraSeed: number };
}

const SHEET_STREAM = 3;

/** The sheet of a try: it depends on the seed and the number of the try alone. */
export function sheetOf(kind: SymbolKind, seed: number, trial: number): Sheet {
  const random = new CounterRandom(seed, SHEET_STREAM);
  random.start(trial);
  const { letters, turnDeg } = SHAPES[kind];
  const letter = () => letters[Math.floor(random.uniform() * letters.length)];
  const text = Array.from({ length: TEXT_LENGTH }, letter).join('');
  const wholeSeed = () => Math.floor(random.uniform52() * Number.MAX_SAFE_INTEGER);
  return {
    text,
    turnDeg: turnDeg * (2 * random.uniform() - 1),
    x: 2 * random.uniform() - 1,
    y: 2 * random.uniform() - 1,
    seeds: { seed: wholeSeed(), cameraSeed: wholeSeed() },
  };
}

/** Width and height of a patch that holds any symbol of a kind with its quiet zone, in pixels. */
export function patchPixels(kind: SymbolKind, modulePx: number): [width: number, height: number] {
  const { width, height, quiet, turnDeg } = SHAPES[kind];
  const [across, down] = [(width + 2 * quiet) * modulePx, (height + 2 * quiet) * modulePx];
  const turn = (Math.min(45, turnDeg) * Math.PI) / 180;
  const whole = (px: number) => Math.ceil(px) + 3; // the middle moves by a pixel to either side
  return [
    whole(across * Math.cos(turn) + down * Math.sin(turn)),
    whole(across * Math.sin(turn) + down * Math.cos(turn)),
  ];
}

/** How a symbol lies on the samples of its patch: turned, moved, and drawn together by the distortion of its place. */
export function moduleMap(
  rig: Rig,
  place: Place,
  { width, height }: SymbolModules,
  kind: SymbolKind,
  sheet: Sheet,
  modulePx: number,
  oversample: number,
): ModuleMap {
  const [patchWidth, patchHeight] = patchPixels(kind, modulePx);
  const [xx, xy, yy] = localScale(rig, place);
  const turn = (sheet.turnDeg * Math.PI) / 180;
  const [cos, sin] = [Math.cos(turn), Math.sin(turn)];
  const side = modulePx * oversample;
  const rise = height === 1 ? side * SHAPES[kind].height : side; // the one row of a linear symbol is stretched
  const map = {
    xu: side * (xx * cos + xy * sin),
    yu: side * (xy * cos + yy * sin),
    xv: rise * (xy * cos - xx * sin),
    yv: rise * (yy * cos - xy * sin),
  };
  const middleX = oversample * (patchWidth / 2 + sheet.x);
  const middleY = oversample * (patchHeight / 2 + sheet.y);
  return {
    ...map,
    x0: middleX - map.xu * (width / 2) - map.xv * (height / 2),
    y0: middleY - map.yu * (width / 2) - map.yv * (height / 2),
  };
}

/** The symmetric matrix [xx, xy, yy] by which the distortion scales a small thing at a place: dr'/dr along the radius, r'/r across it. */
function localScale(rig: Rig, { xMm, yMm }: Place): [xx: number, xy: number, yy: number] {
  const { a, c } = distortionMap(rig.lens);
  const radius2 = xMm * xMm + yMm * yMm;
  if (radius2 === 0) return [a, 0, a];
  const across = a + c * radius2;
  const extra = (2 * c * radius2) / radius2; // dr'/dr - r'/r, over r^2
  return [across + extra * xMm * xMm, extra * xMm * yMm, across + extra * yMm * yMm];
}
