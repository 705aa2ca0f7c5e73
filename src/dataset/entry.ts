/** One line of records.jsonl: what a picture is, how it came about, and the truth about its labels. The keys are those of the file. */
import type { SceneLabel } from '../files/load-labels.js';
import { encodeRunLengths } from '../files/run-lengths.js';
import type { Rig } from '../optics/rig.js';
import type { Draw } from './draws.js';
import { type MovedLabel, moveLabel } from './move-label.js';
import type { DatasetPlan } from './plan.js';
import { rounded } from './rounding.js';
import { type Sharpness, sharpnessAt } from './sharpness.js';
import type { View } from './view.js';

/** A label in the picture, as in COCO files but for its ids, and how sharp the picture is there. */
export interface LabelEntry {
  category_id: number;
  bbox: number[];
  area: number;
  segmentation?: number[][] | { size: [number, number]; counts: number[] | string };
  keypoints?: number[];
  num_keypoints?: number;
  iscrowd: 0 | 1;
  truth: Sharpness & { share_left: number };
  [others: string]: unknown;
}

/** What a picture's line says before the picture is there. */
export interface PictureTruth {
  /** Number of the picture, from 1. */
  picture: number;
  /** Name in the folder of images. */
  file: string;
  split?: string;
  scene: string;
  rig: string;
  seed: number;
  camera_seed: number;
  /** How often the values were drawn anew, because those before made no rig that works. */
  redrawn: number;
  values: Record<string, number>;
  /** First pixel of the sensor in the picture. */
  window: [number, number];
  placement: { scale: number; quarter_turns: number; middle_px: [number, number] };
  labels: LabelEntry[];
  /** Labels of the scene of which too little is in the picture, or nothing. */
  dropped: { cut: number; outside: number };
}

/** The whole line. */
export interface PictureEntry extends PictureTruth {
  width: number;
  height: number;
  bytes: number;
  sha256: string;
  accuracy: { blend_bound: number; energy_outside_kernel: number };
  raw_levels?: { black_level: number; white_level: number; scene_white: number; gain_dn_per_e: number };
  warnings: string[];
}

const EXTENSIONS = { png: 'png', jpeg: 'jpg', webp: 'webp', tiff: 'tif' } as const;

/** `0000001.png` for the first picture. */
export function pictureName(picture: number, format: keyof typeof EXTENSIONS): string {
  return `${String(picture + 1).padStart(7, '0')}.${EXTENSIONS[format]}`;
}

/** All of a picture's line that does not need the picture.
 * @param picture  from 0 */
export function truthOf(
  plan: DatasetPlan,
  picture: number,
  { draw, redrawn, rig, view }: { draw: Draw; redrawn: number; rig: Rig; view: View },
): PictureTruth {
  const { recipe, scenes, madeFrom } = plan;
  const labels: LabelEntry[] = [];
  const dropped = { cut: 0, outside: 0 };
  const sceneLabels: readonly SceneLabel[] = recipe.output.labels === 'none' ? [] : scenes[draw.scene].labels;
  for (const label of sceneLabels) {
    const moved = moveLabel(label, view);
    if (moved === undefined) dropped.outside++;
    else if (moved.left < recipe.output.leastLeft) dropped.cut++;
    else labels.push(labelEntry(moved, rig, view));
  }
  return {
    picture: picture + 1,
    file: pictureName(picture, recipe.output.format),
    split: draw.split,
    scene: madeFrom.scenes[draw.scene].file,
    rig: madeFrom.rigs[draw.rig].file,
    seed: draw.seed,
    camera_seed: draw.cameraSeed,
    redrawn,
    values: Object.fromEntries(draw.values.map(({ key, value }) => [key, value])),
    window: [view.window.x, view.window.y],
    placement: {
      scale: view.pose.scale,
      quarter_turns: view.pose.quarterTurns,
      middle_px: [view.pose.middleX, view.pose.middleY],
    },
    labels,
    dropped,
  };
}

function labelEntry(moved: MovedLabel, rig: Rig, view: View): LabelEntry {
  const { categoryId, isCrowd, box, area, polygons, mask, keypoints, others, left, idealMiddle } = moved;
  const entry: LabelEntry = {
    ...others,
    category_id: categoryId,
    bbox: box.map(hundredths),
    area: hundredths(area),
    iscrowd: isCrowd ? 1 : 0,
    truth: { share_left: rounded(left, 4), ...sharpnessAt(rig, view, idealMiddle) },
  };
  if (polygons !== undefined) entry.segmentation = polygons.map((ring) => ring.flat().map(hundredths));
  if (mask !== undefined) {
    entry.segmentation = {
      size: [mask.height, mask.width],
      counts: mask.isCompressed ? encodeRunLengths(mask.counts) : [...mask.counts],
    };
  }
  if (keypoints !== undefined) {
    entry.keypoints = keypoints.map(hundredths);
    entry.num_keypoints = keypoints.filter((value, at) => at % 3 === 2 && value > 0).length;
  }
  return entry;
}

function hundredths(value: number): number {
  return rounded(value, 2);
}
