/** From a place of a scene to its place in the picture, and back: turn and scale of the scene, the lens, the window of the sensor. */
import type { Recipe } from '../files/load-recipe.js';
import { DistortionMap, distortionMap } from '../optics/distortion.js';
import { pixelPitchMm, type Rig } from '../optics/rig.js';
import { largestSlope } from '../optics/sampling.js';
import { wavefrontAt } from '../optics/wavefront.js';
import type { Draw } from './draws.js';

/** A rectangle of whole pixels of the sensor: from pixel (x, y) on. */
export interface PixelRect {
  x: number;
  y: number;
  width: number;
  height: number;
}

/** How a scene lies on the sensor. Places are pixels, the middle of the first pixel at (0, 0). */
export interface ScenePose {
  /** Size of the scene in its own pixels, before it is turned. */
  width: number;
  height: number;
  /** Clockwise. */
  quarterTurns: number;
  /** Pixels of the sensor that one of the scene takes. */
  scale: number;
  /** Where the scene's middle lies ideally, on the sensor. */
  middleX: number;
  middleY: number;
}

/** A picture's geometry. */
export interface View {
  pose: ScenePose;
  /** What of the sensor the picture shows. */
  window: PixelRect;
  /** What of the sensor is formed for it: blur throws light into the window from beyond, though not from beyond the sensor. */
  frame: PixelRect;
  /** What of the scene is needed for the frame, as pixels of the sensor's plane: distortion throws light in from beyond, too. */
  sheet: PixelRect;
  lens: LensMap;
}

/** @throws nothing: the window has been checked against the sensor */
export function viewOf(
  recipe: Pick<Recipe, 'placement' | 'output'>,
  draw: Draw,
  rig: Rig,
  scene: { width: number; height: number },
): View {
  const window = windowOf(recipe.output, draw, rig);
  const pose = poseOf(recipe.placement, draw, rig, scene, window);
  const frame = frameOf(rig, window);
  return { pose, window, frame, sheet: sheetOf(rig, pose, frame), lens: new LensMap(rig) };
}

function windowOf({ size, window }: Recipe['output'], { windowShares }: Draw, rig: Rig): PixelRect {
  const { pixels, mosaic } = rig.camera;
  const [width, height] = size ?? pixels;
  const grain = mosaic === 'none' ? 1 : 2; // every picture begins with the same colour of the mosaic
  const first = (axis: 0 | 1, side: number): number => {
    const room = Math.floor((pixels[axis] - side) / grain);
    if (window === 'random') return grain * Math.floor(windowShares[axis] * (room + 1));
    if (window === 'middle') return grain * Math.floor(room / 2);
    return size === undefined ? 0 : window[axis];
  };
  return { x: first(0, width), y: first(1, height), width, height };
}

function poseOf(
  { cover, at }: Recipe['placement'],
  draw: Draw,
  rig: Rig,
  { width, height }: { width: number; height: number },
  window: PixelRect,
): ScenePose {
  const { quarterTurns, placeShares } = draw;
  const [turnedWidth, turnedHeight] = quarterTurns % 2 === 0 ? [width, height] : [height, width];
  const [sensorWidth, sensorHeight] = rig.camera.pixels;
  const covered: PixelRect =
    cover === 'picture' ? window : { x: 0, y: 0, width: sensorWidth, height: sensorHeight };
  const covering =
    cover === 'none' ? 1 : Math.max(covered.width / turnedWidth, covered.height / turnedHeight);
  const scale = covering * draw.scale;
  const middle = (first: number, side: number) => first + (side - 1) / 2;
  const pose = { width, height, quarterTurns, scale };
  if (at === 'middle') {
    return {
      ...pose,
      middleX: middle(covered.x, covered.width),
      middleY: middle(covered.y, covered.height),
    };
  }
  // the picture's first pixel lies so many pixels of the sensor inside the scene; less than none where the scene is the smaller
  const inside = (share: number, sceneSide: number, side: number) => {
    const room = scale * sceneSide - side;
    return scale === 1 ? Math.round(share * room) : share * room; // whole pixels of the scene stay whole
  };
  return {
    ...pose,
    middleX: middle(window.x - inside(placeShares[0], turnedWidth, window.width), scale * turnedWidth),
    middleY: middle(window.y - inside(placeShares[1], turnedHeight, window.height), scale * turnedHeight),
  };
}

/** A place of the scene on the sensor, as an ideal lens would show it. */
export function sceneToSensor(pose: ScenePose, x: number, y: number): [x: number, y: number] {
  const u = pose.scale * (x - (pose.width - 1) / 2);
  const v = pose.scale * (y - (pose.height - 1) / 2);
  switch (pose.quarterTurns) {
    case 0:
      return [pose.middleX + u, pose.middleY + v];
    case 1:
      return [pose.middleX - v, pose.middleY + u];
    case 2:
      return [pose.middleX - u, pose.middleY - v];
    default:
      return [pose.middleX + v, pose.middleY - u];
  }
}

/** The inverse of `sceneToSensor`. */
export function sensorToScene(pose: ScenePose, x: number, y: number): [x: number, y: number] {
  const a = (x - pose.middleX) / pose.scale;
  const b = (y - pose.middleY) / pose.scale;
  const [u, v] = (
    [
      [a, b],
      [b, -a],
      [-a, -b],
      [-b, a],
    ] as const
  )[pose.quarterTurns];
  return [u + (pose.width - 1) / 2, v + (pose.height - 1) / 2];
}

/** Where things land in the picture that the camera gives, as a mean over its bands: distortion, lateral colour, and the way that coma
 * throws the light. Coma moves the centroid of every PSF along the radius by -2 N lambda w31, the mean over the pupil of
 * eps = -2 N lambda dW/dm, which is linear in the field; whoever looks for an edge or a disc in the picture finds it there. */
export class LensMap {
  readonly #map: DistortionMap;
  readonly #axisX: number;
  readonly #axisY: number;
  readonly #pitchMm: number;
  /** Farther out the map would fold back; the picture ends before. */
  readonly #lastMm: number;

  constructor(rig: Rig) {
    const { lens, camera, mount } = rig;
    const maps = camera.bands.map((band) => distortionMap(lens, band));
    const mean = (part: (map: DistortionMap) => number) =>
      maps.reduce((sum, map) => sum + part(map), 0) / maps.length;
    this.#map = new DistortionMap(
      mean(({ a }) => a) + comaThrow(rig),
      mean(({ c }) => c),
    );
    [this.#axisX, this.#axisY] = mount.axisPx;
    this.#pitchMm = pixelPitchMm(camera);
    const { a, c } = this.#map;
    this.#lastMm = c < 0 ? Math.sqrt(a / (-3 * c)) : Number.POSITIVE_INFINITY;
  }

  /** Where the light of an ideal place of the sensor lands. */
  landed(x: number, y: number): [x: number, y: number] {
    const idealMm = this.#pitchMm * Math.hypot(x - this.#axisX, y - this.#axisY);
    const scale =
      idealMm === 0 ? this.#map.a : this.#map.distorted(Math.min(idealMm, this.#lastMm)) / idealMm;
    return [this.#axisX + scale * (x - this.#axisX), this.#axisY + scale * (y - this.#axisY)];
  }

  /** The ideal place whose light lands at a place of the sensor: the inverse of `landed`. NaN where nothing lands. */
  ideal(x: number, y: number): [x: number, y: number] {
    const landedMm = this.#pitchMm * Math.hypot(x - this.#axisX, y - this.#axisY);
    const scale = landedMm === 0 ? 1 / this.#map.a : this.#map.ideal(landedMm) / landedMm;
    return [this.#axisX + scale * (x - this.#axisX), this.#axisY + scale * (y - this.#axisY)];
  }

  /** How much an area about an ideal place grows: (r'/r) dr'/dr. */
  areaScale(x: number, y: number): number {
    const r2 = this.#pitchMm ** 2 * ((x - this.#axisX) ** 2 + (y - this.#axisY) ** 2);
    const { a, c } = this.#map;
    return Math.max(0, (a + c * r2) * (a + 3 * c * r2));
  }

  /** The ideal place as mm from the optical axis. */
  fieldMm(x: number, y: number): [xMm: number, yMm: number] {
    return [this.#pitchMm * (x - this.#axisX), this.#pitchMm * (y - this.#axisY)];
  }
}

/** The centroid's way for each mm of image height, a mean over bands and their lines. */
function comaThrow(rig: Rig): number {
  const { camera, lens, mount } = rig;
  const atEdge = camera.bands.map(({ lines }) =>
    lines.reduce((sum, { nm, weight }) => {
      const { w31 } = wavefrontAt(rig, lens.fullFieldMm, 0, nm);
      return sum - weight * 2 * mount.fNumber * nm * 1e-6 * w31;
    }, 0),
  );
  return atEdge.reduce((sum, mm) => sum + mm, 0) / (atEdge.length * lens.fullFieldMm);
}

/** The window and as much of the sensor about it as blur throws light from. */
function frameOf(rig: Rig, window: PixelRect): PixelRect {
  const [width, height] = rig.camera.pixels;
  const reach = blurReachPx(rig, window);
  const grain = rig.camera.mosaic === 'none' ? 1 : 2;
  const side = (from: number, length: number, sensor: number): [number, number] => {
    const first = Math.max(0, grain * Math.floor((from - reach) / grain));
    return [first, Math.min(sensor, from + length + reach) - first];
  };
  const [x, frameWidth] = side(window.x, window.width, width);
  const [y, frameHeight] = side(window.y, window.height, height);
  return { x, y, width: frameWidth, height: frameHeight };
}

/** The frame and what of the scene distortion throws into it from beyond. Beyond the scene there is nothing but its edge, which the
 * rendering continues by itself. */
function sheetOf(rig: Rig, pose: ScenePose, frame: PixelRect): PixelRect {
  const { left, top, right, bottom } = sourceBox(rig, frame);
  const scene = sceneBox(pose);
  const from = (need: number, edge: number, own: number) => Math.min(own, Math.floor(Math.max(need, edge)));
  const to = (need: number, edge: number, own: number) => Math.max(own, Math.ceil(Math.min(need, edge)));
  const x = from(left, scene.left, frame.x);
  const y = from(top, scene.top, frame.y);
  return {
    x,
    y,
    width: to(right, scene.right, frame.x + frame.width) - x,
    height: to(bottom, scene.bottom, frame.y + frame.height) - y,
  };
}

/** A rectangle of the sensor's plane by the numbers of its pixels' sides: pixel P lies between P and P + 1. */
interface Sides {
  left: number;
  top: number;
  right: number;
  bottom: number;
}

function sceneBox(pose: ScenePose): Sides {
  const [ax, ay] = sceneToSensor(pose, -0.5, -0.5);
  const [bx, by] = sceneToSensor(pose, pose.width - 0.5, pose.height - 0.5);
  const rounding = 1e-9;
  return {
    left: Math.min(ax, bx) + 0.5 + rounding,
    top: Math.min(ay, by) + 0.5 + rounding,
    right: Math.max(ax, bx) + 0.5 - rounding,
    bottom: Math.max(ay, by) + 0.5 - rounding,
  };
}

/** Steps along a side. The way of a side under a cubic map is smooth: a parabola through steps of a sixteenth is off by
 * less than a hundredth of its bend. */
const STEPS = 16;

function sourceBox(rig: Rig, { x, y, width, height }: PixelRect): Sides {
  const { bands } = rig.camera;
  const [axisX, axisY] = rig.mount.axisPx;
  const pitchMm = pixelPitchMm(rig.camera);
  const maps = bands.map((band) => distortionMap(rig.lens, band));
  const box = { left: x, top: y, right: x + width, bottom: y + height };
  const include = (px: number, py: number) => {
    const rMm = pitchMm * Math.hypot(px - axisX, py - axisY);
    for (const map of maps) {
      const idealMm = rMm === 0 ? 0 : map.ideal(rMm);
      if (Number.isNaN(idealMm)) continue; // folded: refused elsewhere
      const scale = rMm === 0 ? 1 : idealMm / rMm;
      box.left = Math.min(box.left, axisX + scale * (px - axisX) + 0.5);
      box.right = Math.max(box.right, axisX + scale * (px - axisX) + 0.5);
      box.top = Math.min(box.top, axisY + scale * (py - axisY) + 0.5);
      box.bottom = Math.max(box.bottom, axisY + scale * (py - axisY) + 0.5);
    }
  };
  for (let step = 0; step <= STEPS; step++) {
    const px = x - 0.5 + (step / STEPS) * width;
    const py = y - 0.5 + (step / STEPS) * height;
    include(px, y - 0.5);
    include(px, y + height - 0.5);
    include(x - 0.5, py);
    include(x + width - 0.5, py);
  }
  return {
    left: box.left - CUBIC_REACH,
    top: box.top - CUBIC_REACH,
    right: box.right + CUBIC_REACH,
    bottom: box.bottom + CUBIC_REACH,
  };
}

/** The warp looks at two samples on either side. */
const CUBIC_REACH = 2;

/** Farther than this the light of one point is too thin to be missed. */
const LONGEST_REACH_PX = 64;

/** How far light is thrown by blur, in pixels: the farthest ray from a corner or the middle of the window, and two Airy radii. */
function blurReachPx(rig: Rig, { x, y, width, height }: PixelRect): number {
  const { camera, mount } = rig;
  const [axisX, axisY] = mount.axisPx;
  const pitchUm = 1000 * pixelPitchMm(camera);
  let farthestUm = 0;
  for (const band of camera.bands) {
    for (const { nm } of band.lines) {
      const airyUm = 1.22 * (nm / 1000) * mount.fNumber;
      for (const [u, v] of CORNERS_AND_MIDDLE) {
        const xMm = (pitchUm / 1000) * (x + u * width - 0.5 - axisX);
        const yMm = (pitchUm / 1000) * (y + v * height - 0.5 - axisY);
        const slope = largestSlope(wavefrontAt(rig, xMm, yMm, nm, band));
        farthestUm = Math.max(farthestUm, 2 * mount.fNumber * (nm / 1000) * slope + 2 * airyUm);
      }
    }
  }
  return Math.min(LONGEST_REACH_PX, Math.ceil(farthestUm / pitchUm));
}

const CORNERS_AND_MIDDLE = [
  [0, 0],
  [1, 0],
  [0, 1],
  [1, 1],
  [0.5, 0.5],
] as const;

/** The rig that sees a frame of its sensor alone. */
export function rigOfFrame(rig: Rig, frame: PixelRect): Rig {
  const [axisX, axisY] = rig.mount.axisPx;
  return {
    ...rig,
    camera: { ...rig.camera, pixels: [frame.width, frame.height] },
    mount: { ...rig.mount, axisPx: [axisX - frame.x, axisY - frame.y] },
  };
}
