/** Labels that are written, and those that the scenes bring, against a JSON Schema of the COCO format and against what the format means. */
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { Ajv } from 'ajv';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { dataset } from '../../src/jobs/dataset.js';
import { type Site, smallSite } from '../jobs/small-dataset.js';

const schema = JSON.parse(
  readFileSync(fileURLToPath(new URL('./coco.schema.json', import.meta.url)), 'utf8'),
);
const isCoco = new Ajv({ allErrors: true, allowUnionTypes: true }).compile(schema);

interface Annotation {
  id: number;
  image_id: number;
  category_id: number;
  bbox: number[];
  area: number;
  segmentation?: number[][] | { size: number[]; counts: number[] };
  keypoints?: number[];
  num_keypoints?: number;
}

let site: Site;
let labels: {
  images: { id: number; width: number; height: number }[];
  categories: { id: number; keypoints?: string[] }[];
  annotations: Annotation[];
};
beforeAll(async () => {
  site = await smallSite();
  await dataset({ recipe: site.path('a.recipe.yaml'), out: site.path('out'), threads: 2 });
  labels = JSON.parse(readFileSync(site.path('out/labels.json'), 'utf8'));
}, 60_000);
afterAll(() => site.remove());

test('the file is as the schema says', () => {
  expect(isCoco(labels) || isCoco.errors).toBe(true);
  expect(labels.annotations.length).toBeGreaterThan(10);
});

test('the schema is no mere formality', () => {
  const [first, ...others] = labels.annotations;
  expect(isCoco({ ...labels, annotations: [{ ...first, bbox: [1, 2, 3] }, ...others] })).toBe(false);
  expect(isCoco({ ...labels, images: undefined })).toBe(false);
});

test('ids are unique and lead to what there is', () => {
  const { images, categories, annotations } = labels;
  expect(new Set(annotations.map(({ id }) => id)).size).toBe(annotations.length);
  for (const { image_id, category_id } of annotations) {
    expect(images.some(({ id }) => id === image_id)).toBe(true);
    expect(categories.some(({ id }) => id === category_id)).toBe(true);
  }
});

test('boxes lie in the picture and about the outlines, areas are those of the outlines, masks add up', () => {
  for (const {
    image_id,
    bbox: [x, y, width, height],
    area,
    segmentation,
  } of labels.annotations) {
    const image = labels.images.find(({ id }) => id === image_id)!;
    expect(x + width).toBeLessThanOrEqual(image.width + 0.01); // written to hundredths
    expect(y + height).toBeLessThanOrEqual(image.height + 0.01);
    expect(area).toBeLessThanOrEqual(width * height * (1 + 0.02));
    if (Array.isArray(segmentation)) {
      const xs = segmentation.flatMap((polygon) => polygon.filter((_, at) => at % 2 === 0));
      expect(Math.min(...xs)).toBeCloseTo(x, 2);
      expect(Math.max(...xs)).toBeCloseTo(x + width, 1);
    } else if (segmentation !== undefined) {
      expect(segmentation.size).toEqual([image.height, image.width]);
      expect(segmentation.counts.reduce((sum, count) => sum + count, 0)).toBe(image.width * image.height);
      expect(segmentation.counts.reduce((sum, count, at) => sum + (at % 2) * count, 0)).toBe(area);
    }
  }
});

test('key points come in threes, one for each of the category, and those that are there are counted', () => {
  const pointed = labels.annotations.filter(({ keypoints }) => keypoints !== undefined);
  expect(pointed.length).toBeGreaterThan(0);
  for (const { category_id, keypoints, num_keypoints } of pointed) {
    const { keypoints: names } = labels.categories.find(({ id }) => id === category_id)!;
    expect(keypoints).toHaveLength(3 * names!.length);
    expect(keypoints!.filter((value, at) => at % 3 === 2 && value > 0)).toHaveLength(num_keypoints!);
  }
});
