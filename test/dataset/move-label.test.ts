import { describe, expect, it, test } from 'vitest';
import { forEachRun, maskPixels } from '../../src/dataset/mask.js';
import { type MovedLabel, moveLabel } from '../../src/dataset/move-label.js';
import { boxAbout, type Point, ringsArea } from '../../src/dataset/outline.js';
import type { RunLengths, SceneLabel } from '../../src/files/load-labels.js';
import { rig, view } from './views.js';

const LABEL: SceneLabel = { categoryId: 4, isCrowd: false, others: {} };
const IDEAL = rig({ distortionPercent: 0 });

/** A lens that throws nothing aside: labels move as the scene does. */
const still = (options: Parameters<typeof view>[0] = {}) => view({ rig: IDEAL, ...options });

/** The mask of what a test says is inside, pixel by pixel. */
function maskOf(width: number, height: number, isInside: (x: number, y: number) => boolean): RunLengths {
  const counts: number[] = [0];
  let last = false;
  for (let x = 0; x < width; x++) {
    for (let y = 0; y < height; y++) {
      if (isInside(x, y) !== last) {
        counts.push(0);
        last = !last;
      }
      counts[counts.length - 1]++;
    }
  }
  return { width, height, counts, isCompressed: false };
}

const disc = (middleX: number, middleY: number, radius: number) => (x: number, y: number) =>
  Math.hypot(x + 0.5 - middleX, y + 0.5 - middleY) < radius;

function circle(middleX: number, middleY: number, radius: number): number[] {
  return Array.from({ length: 180 }, (_, i) => [
    middleX + radius * Math.cos((i * Math.PI) / 90),
    middleY + radius * Math.sin((i * Math.PI) / 90),
  ]).flat();
}

describe('a lens without distortion', () => {
  test('leaves a label as it is, with the keys of the user', () => {
    const label: SceneLabel = {
      ...LABEL,
      isCrowd: true,
      box: [10, 20, 30, 40],
      keypoints: [12, 22, 2, 15, 25, 1, 0, 0, 0],
      others: { text: '426' },
    };
    expect(moveLabel(label, still())).toEqual({
      categoryId: 4,
      isCrowd: true,
      box: [10, 20, 30, 40],
      area: 1200,
      left: 1,
      keypoints: [12, 22, 2, 15, 25, 1, 0, 0, 0],
      others: { text: '426' },
      idealMiddle: [24.5, 39.5],
    });
  });

  test('a window takes its corner off; what is outside is cut and counted', () => {
    const window = still({ output: { size: [100, 100], window: [30, 40] } });
    const moved = moveLabel(
      { ...LABEL, polygons: [[10, 20, 50, 20, 50, 80, 10, 80]], keypoints: [45, 50, 2, 12, 22, 2] },
      window,
    )!;
    expect(moved.box).toEqual([0, 0, 20, 40]);
    expect(moved.area).toBe(800);
    expect(moved.left).toBeCloseTo(800 / 2400, 12);
    expect(moved.keypoints).toEqual([15, 10, 2, 0, 0, 0]);
    expect(moveLabel({ ...LABEL, box: [0, 0, 29, 300] }, window)).toBeUndefined();
  });

  test('a scene twice as large, turned: by hand', () => {
    // 160 x 120 on the sensor of 320 x 240, pixel on two pixels, upside down
    const upside = still({ scene: { width: 160, height: 120 }, draw: { quarterTurns: 2 } });
    const { box } = moveLabel({ ...LABEL, box: [0, 0, 10, 5] }, upside)!;
    expect(box).toEqual([300, 230, 20, 10]);
  });

  test('an outline in two parts keeps both, and loses the one that is outside', () => {
    const both = { ...LABEL, polygons: [[10, 10, 20, 10, 20, 20, 10, 20], [100, 10, 120, 10, 120, 20, 100, 20]] }; // biome-ignore format: short
    expect(moveLabel(both, still())!.polygons).toHaveLength(2);
    const cut = moveLabel(both, still({ output: { size: [50, 50], window: [0, 0] } }))!;
    expect(cut.polygons).toHaveLength(1);
    expect(cut.left).toBeCloseTo(1 / 3, 12);
  });

  test('a mask stays what it is, to the pixel', () => {
    const mask = maskOf(320, 240, disc(100, 90, 30));
    const moved = moveLabel({ ...LABEL, mask }, still())!;
    expect(moved.mask).toEqual(mask);
    expect(moved.area).toBe(maskPixels(mask).reduce((sum, pixel) => sum + pixel, 0));
    expect(moved.box).toEqual([70, 60, 60, 60]);
    expect(moved.left).toBe(1);
  });

  test('a mask in a window is that part of it', () => {
    const inside = disc(100, 90, 30);
    const moved = moveLabel(
      { ...LABEL, mask: maskOf(320, 240, inside) },
      still({ output: { size: [50, 40], window: [80, 70] } }),
    )!;
    expect(moved.mask).toEqual(maskOf(50, 40, (x, y) => inside(x + 80, y + 70)));
  });

  test('key points alone: the box is about those that are left', () => {
    const moved = moveLabel(
      { ...LABEL, keypoints: [10, 20, 2, 40, 60, 1, 0, 0, 0, 300, 60, 2] },
      still({ output: { size: [100, 100], window: [0, 0] } }),
    )!;
    expect(moved.box).toEqual([10, 20, 30, 40]);
    expect(moved.left).toBeCloseTo(2 / 3, 12);
    expect(moved.keypoints).toEqual([10, 20, 2, 40, 60, 1, 0, 0, 0, 0, 0, 0]);
  });
});

describe.each([-10, 12])('a lens with %i percent of distortion', (distortionPercent) => {
  const bent = view({ rig: rig({ distortionPercent }), draw: { scale: 1.2 }, output: { size: [300, 230] } });
  const at: Point = [90, 75];
  const outlined = moveLabel({ ...LABEL, polygons: [circle(...at, 25)] }, bent)!;
  const masked = moveLabel({ ...LABEL, mask: maskOf(320, 240, disc(...at, 25)) }, bent)!;

  it('moves outline and mask alike', () => {
    const sides = (box: MovedLabel['box']) => [box[0], box[1], box[0] + box[2], box[1] + box[3]];
    for (const [side, value] of sides(outlined.box).entries()) {
      expect(Math.abs(value - sides(masked.box)[side])).toBeLessThan(1.5); // pixels of a scene that is 1.2 times enlarged
    }
    // a mask of 1963 pixels knows its area to about a quarter of its border's pixels
    expect(Math.abs(masked.area / outlined.area - 1)).toBeLessThan(0.02);
    expect(masked.left).toBeCloseTo(outlined.left, 1);
  });

  it('has the box of the moved circle, not that of the moved corners', () => {
    const corners = moveLabel({ ...LABEL, box: [65, 50, 50, 50] }, bent)!;
    expect(Math.abs(corners.box[2] - outlined.box[2])).toBeGreaterThan(1);
    expect(boxAbout(outlined.polygons!.flat())).toEqual(outlined.box);
    expect(ringsArea(outlined.polygons!)).toBe(outlined.area);
  });

  it('moves key points with the outline', () => {
    const [x, y] = at;
    const { keypoints } = moveLabel({ ...LABEL, box: [70, 55, 40, 40], keypoints: [x, y, 2] }, bent)!;
    const [left, top, width, height] = outlined.box;
    expect(Math.abs(keypoints![0] - (left + width / 2))).toBeLessThan(1.5); // the middle of a bent disc is not quite its centre
    expect(Math.abs(keypoints![1] - (top + height / 2))).toBeLessThan(1.5);
  });
});

test('the runs of a mask, piece by piece', () => {
  const pieces: number[][] = [];
  forEachRun([2, 3, 1, 6], 4, (...piece) => pieces.push(piece));
  expect(pieces).toEqual([
    [0, 2, 4],
    [1, 0, 1],
    [1, 2, 4],
    [2, 0, 4],
  ]);
});
