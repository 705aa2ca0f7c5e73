/** Distortion and relative illumination: the ideal picture moved to where its light lands. */
import { relativeIllumination } from '../optics/illumination.js';
import type { Lens } from '../optics/rig.js';
import { cornerMm, type SensorFrame } from './sensor-frame.js';

/** Steps of the radial tables. The curves are smooth in r^2: linear interpolation is right to 1e-7 px at 5 % distortion. */
export const TABLE_STEPS = 8192;

/** Samples past the farthest corner that the tables still cover: look-ups of the kernels beyond the last sample. */
const LOOK_AHEAD = 64;

/** What happens to light by its distance from the axis, tabulated over the square of the landed radius in samples. */
export interface RadialTables {
  /** Table steps per squared sample. */
  stepsPerSquare: number;
  /** Ideal over landed radius. */
  scale: Float64Array;
  illumination: Float64Array;
  /** Whether every point lands where it should, so that no resampling is needed. */
  isIdentity: boolean;
  isFullyLit: boolean;
}

/** Tables for one band's frame; the last entry lies past the farthest corner. */
export function radialTables(lens: Lens, frame: SensorFrame): RadialTables {
  // the kernels look a few samples ahead of the corner
  const cornerSamples = cornerMm(frame) / frame.pitchMm + LOOK_AHEAD;
  const stepsPerSquare = (TABLE_STEPS - 2) / Math.max(1, cornerSamples ** 2);
  const scale = new Float64Array(TABLE_STEPS);
  const illumination = new Float64Array(TABLE_STEPS);
  const illuminationAt = relativeIllumination(lens);
  const lastMm = Math.min(cornerMm(frame) + LOOK_AHEAD * frame.pitchMm, 0.999999 * frame.map.foldMm);
  for (let i = 0; i < TABLE_STEPS; i++) {
    const landedMm = Math.min(lastMm, Math.sqrt(i / stepsPerSquare) * frame.pitchMm);
    const idealMm = frame.map.ideal(landedMm);
    scale[i] = i === 0 ? 1 / frame.map.a : idealMm / landedMm;
    illumination[i] = illuminationAt(idealMm);
  }
  return {
    stepsPerSquare,
    scale,
    illumination,
    isIdentity: frame.map.isIdentity,
    isFullyLit: lens.relativeIllumination === 'none',
  };
}

/** The planes of a scene against those of the picture. */
export interface SceneSheet {
  width: number;
  height: number;
  /** Samples of the scene before the picture's first one. */
  left: number;
  top: number;
}

/** Warp the rows `rowStart` up to `rowEnd` of a plane.
 *
 * Each sample takes the scene at the ideal place of the light that lands on it, by cubic convolution over 4 x 4 samples; past its
 * border the scene goes on with its edge. Then relative illumination.
 * Source: R. G. Keys, "Cubic convolution interpolation for digital image processing", IEEE Trans. ASSP 29 (1981) 1153, a = -1/2
 * (cited from memory).
 * @param scene  a plane of the sheet, row-major
 * @param out    width x height of the frame, row-major; must not be `scene`
 * @param sheet  default: the scene is as large as the picture
 */
export function warpRows(
  frame: SensorFrame,
  tables: RadialTables,
  scene: Float32Array,
  out: Float32Array,
  rowStart: number,
  rowEnd: number,
  sheet: SceneSheet = { width: frame.width, height: frame.height, left: 0, top: 0 },
): void {
  const { width, axisX, axisY } = frame;
  const { left, top } = sheet;
  const { stepsPerSquare, scale, illumination, isIdentity } = tables;
  for (let row = rowStart; row < rowEnd; row++) {
    const y = row - axisY;
    for (let column = 0; column < width; column++) {
      const x = column - axisX;
      const place = (x * x + y * y) * stepsPerSquare;
      const step = Math.floor(place);
      const part = place - step;
      const light = illumination[step] + part * (illumination[step + 1] - illumination[step]);
      const at = row * width + column;
      if (isIdentity) {
        out[at] = light * scene[(row + top) * sheet.width + column + left];
        continue;
      }
      const shrink = scale[step] + part * (scale[step + 1] - scale[step]);
      out[at] =
        light *
        cubicSample(scene, sheet.width, sheet.height, left + axisX + x * shrink, top + axisY + y * shrink);
    }
  }
}

/** A plane at (x, y) by cubic convolution; past its border its edge goes on. */
function cubicSample(plane: Float32Array, width: number, height: number, x: number, y: number): number {
  const left = Math.floor(x);
  const top = Math.floor(y);
  const u = x - left;
  const v = y - top;
  let sum = 0;
  for (let j = -1; j <= 2; j++) {
    const row = width * clampIndex(top + j, height);
    let line = 0;
    for (let i = -1; i <= 2; i++) line += keys(i - u) * plane[row + clampIndex(left + i, width)];
    sum += keys(j - v) * line;
  }
  return sum;
}

function clampIndex(i: number, size: number): number {
  return i < 0 ? 0 : i >= size ? size - 1 : i;
}

/** Keys's cubic, a = -1/2: 3/2 |t|^3 - 5/2 t^2 + 1 up to 1, -1/2 |t|^3 + 5/2 t^2 - 4 |t| + 2 up to 2. */
function keys(t: number): number {
  const d = Math.abs(t);
  return d <= 1 ? (1.5 * d - 2.5) * d * d + 1 : ((-0.5 * d + 2.5) * d - 4) * d + 2;
}
