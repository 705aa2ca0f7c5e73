/** Pieces of scene and picture that show the same: at the axis, half-way out, at an edge and in a corner. */
import { distortionMap } from '../optics/distortion.js';
import { pixelPitchMm, type Rig } from '../optics/rig.js';
import type { Raster } from './raster.js';

export interface Crop {
  name: 'axis' | 'half field' | 'edge' | 'corner';
  /** The middle of the ideal crop, from the optical axis, + right and + down. */
  xMm: number;
  yMm: number;
  /** Image height over full field. */
  field: number;
  /** Top left pixel of the crop in the scene, and of the one in the picture: where the lens puts the same light. */
  ideal: Corner;
  recorded: Corner;
}

interface Corner {
  left: number;
  top: number;
}

export interface CropPlan {
  width: number;
  height: number;
  crops: Crop[];
}

const WIDTH = 160;
const HEIGHT = 120;

/** Where to look. Near each of the four places the crop moves to where the scene shows most: a blank piece tells nothing of sharpness.
 * @param scene the ideal image at `oversample` samples a pixel */
export function planCrops(rig: Rig, scene: Raster, oversample: number): CropPlan {
  const [frameWidth, frameHeight] = rig.camera.pixels;
  const width = Math.max(1, Math.min(WIDTH, frameWidth >> 1));
  const height = Math.max(1, Math.min(HEIGHT, frameHeight >> 1));
  const [axisX, axisY] = rig.mount.axisPx;
  const cornerX = axisX <= (frameWidth - 1) / 2 ? frameWidth - 1 : 0;
  const cornerY = axisY < (frameHeight - 1) / 2 ? frameHeight - 1 : 0;
  const goals = [
    ['axis', axisX, axisY],
    ['half field', (axisX + cornerX) / 2, (axisY + cornerY) / 2],
    ['edge', cornerX, axisY],
    ['corner', cornerX, cornerY],
  ] as const;
  const plan: CropPlan = { width, height, crops: [] };
  for (const [name, x, y] of goals) {
    const candidates = slides(x, y, width, height).map(([toX, toY]) => landing(rig, plan, name, toX, toY));
    const details = candidates.map(({ ideal }) => detail(cropOf(scene, ideal, plan, oversample)));
    let best = 0; // the first is the place itself
    for (let i = 1; i < candidates.length; i++) if (details[i] > WORTH_A_MOVE * details[best]) best = i;
    plan.crops.push(candidates[best]);
  }
  return plan;
}

/** A crop moves for this much more detail. */
const WORTH_A_MOVE = 1.15;

/** The place itself and those up to three quarters of a crop away. */
function slides(x: number, y: number, width: number, height: number): [number, number][] {
  const steps = [0, -0.375, 0.375, -0.75, 0.75];
  return steps.flatMap((down) =>
    steps.map((right): [number, number] => [x + right * width, y + down * height]),
  );
}

/** Where a piece of the scene lands: both crops inside of their frames, as near to (x, y) as that allows. */
function landing(rig: Rig, { width, height }: CropPlan, name: Crop['name'], x: number, y: number): Crop {
  const [frameWidth, frameHeight] = rig.camera.pixels;
  const [axisX, axisY] = rig.mount.axisPx;
  const pitchMm = pixelPitchMm(rig.camera);
  const map = distortionMap(rig.lens);
  const corner = (middleX: number, middleY: number): Corner => ({
    left: Math.round(clamp(middleX - (width - 1) / 2, 0, frameWidth - width)),
    top: Math.round(clamp(middleY - (height - 1) / 2, 0, frameHeight - height)),
  });
  const scaled = (of: (mm: number) => number, { left, top }: Corner): [number, number] => {
    const fromX = left + (width - 1) / 2 - axisX;
    const fromY = top + (height - 1) / 2 - axisY;
    const radius = Math.hypot(fromX, fromY) * pitchMm;
    const scale = radius === 0 ? 1 : of(radius) / radius;
    return [axisX + scale * fromX, axisY + scale * fromY];
  };
  let ideal = corner(x, y);
  const recorded = corner(...scaled((mm) => map.distorted(mm), ideal));
  // where pincushion throws the crop over the edge, the scene's crop follows the picture's
  ideal = corner(...scaled((mm) => map.ideal(mm), recorded));
  const xMm = (ideal.left + (width - 1) / 2 - axisX) * pitchMm;
  const yMm = (ideal.top + (height - 1) / 2 - axisY) * pitchMm;
  return { name, xMm, yMm, field: Math.hypot(xMm, yMm) / rig.lens.fullFieldMm, ideal, recorded };
}

/** A piece of a picture, the mean of `oversample` x `oversample` samples for each pixel. */
export function cropOf(
  picture: Raster,
  { left, top }: Corner,
  { width, height }: Pick<CropPlan, 'width' | 'height'>,
  oversample = 1,
): Raster {
  const planes = picture.planes.map((plane) => {
    const out = new Float32Array(width * height);
    const share = 1 / oversample ** 2;
    for (let row = 0; row < height * oversample; row++) {
      const from = (top * oversample + row) * picture.width + left * oversample;
      const to = Math.floor(row / oversample) * width;
      for (let column = 0; column < width * oversample; column++)
        out[to + Math.floor(column / oversample)] += share * plane[from + column];
    }
    return out;
  });
  return { width, height, planes };
}

/** How much a piece shows: the sum of the steps between neighbours. */
function detail({ width, height, planes }: Raster): number {
  let sum = 0;
  for (const plane of planes) {
    for (let row = 1; row < height; row++) {
      for (let column = 1; column < width; column++) {
        const at = row * width + column;
        sum += Math.abs(plane[at] - plane[at - 1]) + Math.abs(plane[at] - plane[at - width]);
      }
    }
  }
  return sum;
}

function clamp(value: number, low: number, high: number): number {
  return Math.min(high, Math.max(low, value));
}
