/** One label of a scene as it lies in the picture. */
import type { RunLengths, SceneLabel } from '../files/load-labels.js';
import { forEachRun, movedMask } from './mask.js';
import { boxAbout, clippedRing, movedRing, type Point, type Ring, ringsArea } from './outline.js';
import { sceneToSensor, sensorToScene, type View } from './view.js';

/** A label in a picture; places as in COCO files, from the top left corner, the first pixel covering 0 to 1. */
export interface MovedLabel {
  categoryId: number;
  isCrowd: boolean;
  /** x, y, width, height. */
  box: readonly [number, number, number, number];
  area: number;
  polygons?: Ring[];
  mask?: RunLengths;
  /** x, y, v of each point; three zeros for one that is not in the picture. */
  keypoints?: number[];
  others: Readonly<Record<string, unknown>>;
  /** Share of the label that is in the picture. */
  left: number;
  /** Ideal place on the sensor of the label's middle, in pixels: where its sharpness is judged. */
  idealMiddle: Point;
}

/** Move a label by turn, scale and lens and clip it to the picture.
 * @returns undefined where nothing of it is in the picture */
export function moveLabel(label: SceneLabel, view: View): MovedLabel | undefined {
  const mover = new Mover(view);
  const shape = movedShape(label, mover);
  const keypoints = label.keypoints && mover.keypoints(label.keypoints);
  const placed = shape ?? shapeOfPoints(label, keypoints);
  if (placed === undefined || placed.left === 0) return undefined;
  const { box } = placed;
  const moved: MovedLabel = {
    categoryId: label.categoryId,
    isCrowd: label.isCrowd,
    ...placed,
    others: label.others,
    idealMiddle: mover.idealOf(box[0] + box[2] / 2, box[1] + box[3] / 2),
  };
  if (keypoints !== undefined) moved.keypoints = keypoints;
  return moved;
}

type Shape = Pick<MovedLabel, 'box' | 'area' | 'left' | 'polygons' | 'mask'>;
const NOTHING_LEFT: Shape = { box: [0, 0, 0, 0], area: 0, left: 0 };

/** The outline if there is one, else the mask, else the box. */
function movedShape({ polygons, mask, box }: SceneLabel, mover: Mover): Shape | undefined {
  if (mask !== undefined) return mover.mask(mask);
  if (polygons !== undefined) {
    const { rings, ...shape } = mover.outline(polygons.map(ringOf));
    return shape.left === 0 ? NOTHING_LEFT : { ...shape, polygons: rings };
  }
  if (box === undefined) return undefined;
  const { rings: _moved, ...shape } = mover.outline([ringOfBox(box)]);
  return shape;
}

/** A label of key points alone: what is left of it is counted in points. */
function shapeOfPoints({ keypoints }: SceneLabel, moved: readonly number[] | undefined): Shape | undefined {
  if (keypoints === undefined || moved === undefined) return undefined;
  const there = pointsOf(moved);
  const box = boxAbout(there);
  if (box === undefined) return NOTHING_LEFT;
  return { box, area: box[2] * box[3], left: there.length / pointsOf(keypoints).length };
}

/** Points that are labelled. */
function pointsOf(keypoints: readonly number[]): Point[] {
  const points: Point[] = [];
  for (let at = 0; at < keypoints.length; at += 3) {
    if (keypoints[at + 2] > 0) points.push([keypoints[at], keypoints[at + 1]]);
  }
  return points;
}

function ringOf(polygon: readonly number[]): Ring {
  return Array.from({ length: polygon.length / 2 }, (_, at): Point => [polygon[2 * at], polygon[2 * at + 1]]);
}

function ringOfBox([x, y, width, height]: readonly [number, number, number, number]): Ring {
  return [
    [x, y],
    [x + width, y],
    [x + width, y + height],
    [x, y + height],
  ];
}

/** Moves places of COCO files, which lie half a pixel from those of the sensor. */
class Mover {
  readonly #view: View;

  constructor(view: View) {
    this.#view = view;
  }

  /** From the scene to the picture. */
  readonly move = (x: number, y: number): [x: number, y: number] => {
    const { pose, lens, window } = this.#view;
    const [landedX, landedY] = lens.landed(...sceneToSensor(pose, x - 0.5, y - 0.5));
    return [landedX - window.x + 0.5, landedY - window.y + 0.5];
  };

  /** The ideal place on the sensor, in pixels, of a place of the picture. */
  idealOf(x: number, y: number): Point {
    const { lens, window } = this.#view;
    return lens.ideal(x - 0.5 + window.x, y - 0.5 + window.y);
  }

  outline(rings: readonly Ring[]): Shape & { rings: Ring[] } {
    const { width, height } = this.#view.window;
    const moved = rings.map((ring) => movedRing(ring, this.move));
    const clipped = moved.flatMap((ring) => clippedRing(ring, width, height));
    const area = ringsArea(clipped);
    const box = boxAbout(clipped.flat());
    if (box === undefined || area === 0) return { ...NOTHING_LEFT, rings: [] };
    return { box, area, left: Math.min(1, area / ringsArea(moved)), rings: clipped };
  }

  mask(mask: RunLengths): Shape {
    const { pose, lens, window } = this.#view;
    const { width, height } = window;
    const edge = boxOfRuns(mask);
    if (edge === undefined) return NOTHING_LEFT;
    const around = boxAbout(movedRing(ringOfBox(edge), this.move))!;
    const region = [around[0], around[1], around[0] + around[2], around[1] + around[3]] as const;
    const moved = movedMask(mask, width, height, region, (x, y) =>
      sensorToScene(pose, ...lens.ideal(x + window.x, y + window.y)),
    );
    if (moved.box === undefined) return NOTHING_LEFT;
    return {
      box: moved.box,
      area: moved.area,
      left: Math.min(1, moved.area / this.#wholeArea(mask)),
      mask: { width, height, counts: moved.counts, isCompressed: mask.isCompressed },
    };
  }

  /** Key points in the picture; those outside of it are taken out. */
  keypoints(keypoints: readonly number[]): number[] {
    const { width, height } = this.#view.window;
    const moved: number[] = [];
    for (let at = 0; at < keypoints.length; at += 3) {
      const visibility = keypoints[at + 2];
      const [x, y] = this.move(keypoints[at], keypoints[at + 1]);
      const isThere = visibility > 0 && x >= 0 && y >= 0 && x <= width && y <= height;
      moved.push(...(isThere ? [x, y, visibility] : [0, 0, 0]));
    }
    return moved;
  }

  /** The area of a mask were the picture large enough: its pixels, each grown as the lens lets it. */
  #wholeArea({ counts, height }: RunLengths): number {
    const { pose, lens } = this.#view;
    let sum = 0;
    forEachRun(counts, height, (x, top, bottom) => {
      for (let y = top; y < bottom; y++) sum += lens.areaScale(...sceneToSensor(pose, x, y));
    });
    return sum * pose.scale ** 2;
  }
}

function boxOfRuns({ counts, height }: RunLengths): [number, number, number, number] | undefined {
  const corners: Point[] = [];
  forEachRun(counts, height, (x, top, bottom) => corners.push([x, top], [x + 1, bottom]));
  return boxAbout(corners);
}
