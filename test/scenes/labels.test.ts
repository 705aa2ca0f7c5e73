import { describe, expect, it } from 'vitest';
import { appleBelt } from '../../scenes/draw/apple-belt.js';
import { cocoText, rectangle, toCoco } from '../../scenes/draw/labels.js';
import { DEMO_SCENES } from '../../scenes/draw/pictures.js';
import { rasterise } from '../../scenes/draw/rasterise.js';

describe('the labels of the scenes', () => {
  const drawings = DEMO_SCENES.map(({ draw }) => draw());

  it('lie inside the picture', () => {
    for (const { width, height, labels } of drawings) {
      for (const [x, y] of labels.flatMap(({ outline }) => outline)) {
        expect(Math.min(x, y, width - x, height - y)).toBeGreaterThanOrEqual(0);
      }
    }
  });

  it('name apples, leaves and symbols all over the frame', () => {
    const count = (category: string) =>
      drawings.flatMap(({ labels }) => labels).filter((label) => label.category === category).length;
    expect(count('apple')).toBeGreaterThan(25);
    expect(count('leaf')).toBeGreaterThan(3);
    expect(count('qr')).toBe(24);
  });

  it('follow the edge of the thing: skin inside the outline, shadow of the belt outside', async () => {
    const drawing = appleBelt({ width: 320, height: 330, seed: 2 });
    const samples = await rasterise(drawing);
    const apples = drawing.labels.filter(({ category }) => category === 'apple');
    expect(apples.length).toBeGreaterThan(0);
    let probed = 0;
    for (const { outline } of apples) {
      const middle = [0, 1].map((axis) => mean(outline.map((point) => point[axis])));
      for (const [x, y] of outline) {
        // step 4 pixels in and out along the radius; up and left, where the skin is lit
        if (x > middle[0] || y > middle[1] || x < 8 || y < 70) continue;
        const radius = Math.hypot(x - middle[0], y - middle[1]);
        const at = (step: number) =>
          [x, y].map((value, axis) => Math.floor(value + ((value - middle[axis]) * step) / radius)) as [
            number,
            number,
          ];
        expect(redLessBlue(samples, drawing.width, at(-4)), `inside ${x},${y}`).toBeGreaterThan(0);
        expect(redLessBlue(samples, drawing.width, at(4)), `outside ${x},${y}`).toBeLessThan(0);
        probed++;
      }
    }
    expect(probed).toBeGreaterThan(5);
  });
});

describe('toCoco', () => {
  const labels = [
    { category: 'apple', outline: rectangle(10, 20, 30, 40), keypoints: [[12.345, 25] as const] },
    { category: 'apple', outline: rectangle(0, 0, 4, 2), keypoints: [undefined] },
    { category: 'qr', outline: rectangle(1, 1, 5, 5), text: 'CRATE 20401' },
  ];
  const coco = toCoco([{ file: 'a.png', width: 100, height: 80, labels }]);

  it('gives box, polygon, area, key points and text', () => {
    expect(coco.annotations[0]).toEqual({
      id: 1,
      image_id: 1,
      category_id: 1,
      bbox: [10, 20, 30, 40],
      segmentation: [[10, 20, 40, 20, 40, 60, 10, 60]],
      area: 1200,
      iscrowd: 0,
      keypoints: [12.35, 25, 2],
      num_keypoints: 1,
    });
    expect(coco.annotations[1]).toMatchObject({ keypoints: [0, 0, 0], num_keypoints: 0 });
    expect(coco.annotations[2]).toMatchObject({ text: 'CRATE 20401' });
  });

  it('points every annotation at an image and a category that are there', () => {
    const images = coco.images.map(({ id }) => id);
    const categories = coco.categories.map(({ id }) => id);
    for (const { image_id, category_id } of coco.annotations) {
      expect(images).toContain(image_id);
      expect(categories).toContain(category_id);
    }
  });

  it('comes as JSON that reads back', () => {
    expect(JSON.parse(cocoText(coco))).toEqual(coco);
  });
});

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

/** Apples are red, yellow or green, the belt is blue-green: red less blue tells them apart. */
function redLessBlue(samples: Uint8Array, width: number, [x, y]: [number, number]): number {
  const at = 3 * (y * width + x);
  return samples[at] - samples[at + 2];
}
