/** The part of a scene that a picture is formed from, at the samples of the sensor. */
import type { Raster } from '../imaging/raster.js';
import { type ResampleWeights, resamplePlane, resampleWeights } from '../numeric/resample.js';
import { type PixelRect, type ScenePose, sceneToSensor } from './view.js';

/** Lay a scene on the sensor's plane and cut out a sheet of it. Past its border the scene goes on with its edge.
 * @param scene       in linear light; not changed
 * @param oversample  samples a pixel on each side
 * @returns oversample x the sheet's pixels; the scene's own planes where that is all of them, as they are
 */
export function placeScene(scene: Raster, pose: ScenePose, sheet: PixelRect, oversample: number): Raster {
  const turned = turnedScene(scene, pose.quarterTurns);
  const scale = pose.scale * oversample;
  const width = sheet.width * oversample;
  const height = sheet.height * oversample;
  // sample P k + (k - 1) / 2 is the middle of pixel P
  const inSheet = (px: number, first: number) => (px - first) * oversample + (oversample - 1) / 2;
  const columns = resampleWeights(turned.width, width, scale, inSheet(pose.middleX, sheet.x));
  const rows = resampleWeights(turned.height, height, scale, inSheet(pose.middleY, sheet.y));
  const across = neededPart(columns, turned.width);
  const down = neededPart(rows, turned.height);
  return {
    width,
    height,
    planes: turned.planes.map((plane) => {
      const part = cutOut(plane, turned.width, across, down);
      if (columns.taps === 1 && rows.taps === 1) return copied(part, across, down, width, height);
      const out = new Float32Array(width * height);
      resamplePlane(part, across.length, down.length, across.weights, down.weights, out);
      return out;
    }),
  };
}

/** What of a line is looked at, and the weights counted from there. */
interface LinePart {
  start: number;
  length: number;
  weights: ResampleWeights;
}

function neededPart({ taps, first, weights }: ResampleWeights, length: number): LinePart {
  const within = (at: number) => Math.min(Math.max(at, 0), length - 1);
  const start = within(first[0]);
  const end = within(first[first.length - 1] + taps - 1) + 1;
  return { start, length: end - start, weights: { taps, first: first.map((at) => at - start), weights } };
}

function cutOut(plane: Float32Array, stride: number, across: LinePart, down: LinePart): Float32Array {
  if (across.length === stride && plane.length === stride * down.length) return plane;
  const out = new Float32Array(across.length * down.length);
  for (let row = 0; row < down.length; row++) {
    const from = (down.start + row) * stride + across.start;
    out.set(plane.subarray(from, from + across.length), row * across.length);
  }
  return out;
}

/** Pixel for pixel. */
function copied(
  part: Float32Array,
  across: LinePart,
  down: LinePart,
  width: number,
  height: number,
): Float32Array {
  if (across.length === width && down.length === height) return part;
  const out = new Float32Array(width * height);
  const { first: columns } = across.weights;
  const { first: rows } = down.weights;
  for (let y = 0; y < height; y++) {
    const from = Math.min(Math.max(rows[y], 0), down.length - 1) * across.length;
    for (let x = 0; x < width; x++) {
      out[y * width + x] = part[from + Math.min(Math.max(columns[x], 0), across.length - 1)];
    }
  }
  return out;
}

/** A scene turned clockwise. */
function turnedScene(scene: Raster, quarterTurns: number): Raster {
  if (quarterTurns === 0) return scene;
  const { width, height } = scene;
  const isUpright = quarterTurns === 2;
  const [newWidth, newHeight] = isUpright ? [width, height] : [height, width];
  const middle = { middleX: (newWidth - 1) / 2, middleY: (newHeight - 1) / 2 };
  const at = (x: number, y: number) => {
    const [u, v] = sceneToSensor({ width, height, quarterTurns, scale: 1, ...middle }, x, y);
    return v * newWidth + u;
  };
  const start = at(0, 0);
  const perColumn = at(1, 0) - start;
  const perRow = at(0, 1) - start;
  return {
    width: newWidth,
    height: newHeight,
    planes: scene.planes.map((plane) => {
      const out = new Float32Array(plane.length);
      for (let y = 0, from = 0; y < height; y++) {
        for (let x = 0, to = start + y * perRow; x < width; x++, from++, to += perColumn)
          out[to] = plane[from];
      }
      return out;
    }),
  };
}
