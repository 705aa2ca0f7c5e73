import { describe, expect, test } from 'vitest';
import { formatFault } from '../../src/errors.js';
import { loadLabels } from '../../src/files/load-labels.js';
import { faultsOf, useFolder } from './packhouse.js';

const folder = useFolder();

/** One of everything; an entry of a test changes it. */
function coco() {
  return {
    info: { year: 2026 },
    images: [
      { id: 7, file_name: 'b.png', width: 5, height: 4 },
      { id: 3, file_name: 'a.png', width: 9, height: 9, licence: 2 },
    ],
    categories: [{ id: 1, name: 'apple', keypoints: ['stem'], supercategory: 'hall' }] as object[],
    annotations: [
      { id: 1, image_id: 7, category_id: 1, bbox: [1, 1, 2, 2], area: 4, iscrowd: 0, text: 'x' },
      {
        id: 2,
        image_id: 7,
        category_id: 1,
        segmentation: [[0, 0, 2, 0, 2, 2]],
        keypoints: [1, 1, 2],
        num_keypoints: 1,
      },
      { id: 3, image_id: 7, category_id: 1, segmentation: { size: [4, 5], counts: '5220003' }, iscrowd: 1 },
      { id: 4, image_id: 7, category_id: 1, segmentation: { size: [4, 5], counts: [5, 2, 2, 2, 2, 2, 5] } },
    ] as Record<string, unknown>[],
  };
}

const written = (data: unknown) => folder.write('labels.json', JSON.stringify(data));

test('every kind of label comes in', () => {
  const { categories, scenes } = loadLabels(written(coco()));
  const label = { categoryId: 1, isCrowd: false, others: {} };
  const mask = { width: 5, height: 4, counts: [5, 2, 2, 2, 2, 2, 5] };
  expect(categories).toEqual(coco().categories);
  expect(scenes).toEqual([
    {
      file: 'b.png',
      width: 5,
      height: 4,
      labels: [
        { ...label, box: [1, 1, 2, 2], others: { text: 'x' } },
        { ...label, polygons: [[0, 0, 2, 0, 2, 2]], keypoints: [1, 1, 2] },
        { ...label, isCrowd: true, mask: { ...mask, isCompressed: true } },
        { ...label, mask: { ...mask, isCompressed: false } },
      ],
    },
    { file: 'a.png', width: 9, height: 9, labels: [] },
  ]);
});

describe('refused', () => {
  // what is changed in the file, the faults
  test.each<[string, (file: ReturnType<typeof coco>) => void, string[]]>([
    [
      'ids twice',
      (file) => {
        file.images.push({ ...file.images[0], file_name: 'c.png' });
        file.annotations[1].id = 1;
      },
      ['images[2].id: stands twice, found 7.', 'annotations[1].id: stands twice, found 1.'],
    ],
    [
      'a picture twice',
      (file) => {
        file.images[1].file_name = 'b.png';
      },
      ['images[1].file_name: stands twice, found b.png.'],
    ],
    [
      'ids of nothing',
      (file) => {
        file.annotations[0].image_id = 9;
        file.annotations[1].category_id = 9;
      },
      [
        'annotations[0].image_id: is the id of no picture, found 9.',
        'annotations[1].category_id: is the id of no category, found 9.',
      ],
    ],
    [
      'key points that the category has not',
      (file) => {
        file.annotations[1].keypoints = [1, 1, 2, 3];
      },
      [
        "annotations[1].keypoints: has not three numbers for each key point of the category 'apple', found 4 numbers. Allowed: 3 numbers.",
      ],
    ],
    [
      'an odd outline',
      (file) => {
        file.annotations[1].segmentation = [[0, 0, 2, 0, 2, 2, 1]];
      },
      ['annotations[1].segmentation[0]: has an x without its y, found 7 numbers.'],
    ],
    [
      'an outline of two points',
      (file) => {
        file.annotations[1].segmentation = [[0, 0, 2, 0]];
      },
      [
        'annotations[1].segmentation[0]: has too few entries, found [0,0,2,0]. Allowed: a list of numbers x, y, x, y, ….',
      ],
    ],
    [
      'runs of another picture',
      (file) => {
        file.annotations[3].segmentation = { size: [5, 4], counts: [20] };
      },
      ['annotations[3].segmentation.size: is not the size of the picture, found [5, 4]. Allowed: [4, 5].'],
    ],
    [
      'runs that do not add up',
      (file) => {
        file.annotations[3].segmentation = { size: [4, 5], counts: [19] };
      },
      [
        'annotations[3].segmentation.counts: do not add up to the pixels of the picture, found 19. Allowed: 20.',
      ],
    ],
    [
      'a text that is none',
      (file) => {
        file.annotations[2].segmentation = { size: [4, 5], counts: 'x' };
      },
      [
        'annotations[2].segmentation.counts: do not add up to the pixels of the picture, found a text that is no run lengths. Allowed: 20.',
      ],
    ],
    [
      'a label without a place',
      (file) => {
        delete file.annotations[0].bbox;
      },
      ['annotations[0]: has no place. Allowed: bbox, segmentation or keypoints.'],
    ],
    [
      'a box that is none',
      (file) => {
        file.annotations[0].bbox = [1, 1, -2, 2];
      },
      ['annotations[0].bbox[2]: is too small, found -2. Allowed: a number from 0 up.'],
    ],
    [
      'a list that is missing',
      (file) => {
        file.categories = undefined as never;
      },
      ['categories: is missing. Allowed: a list of categories.'],
    ],
  ])('%s', (_name, change, faults) => {
    const file = coco();
    change(file);
    const path = written(file);
    expect(faultsOf(() => loadLabels(path)).map(formatFault)).toEqual(
      faults.map((fault) => `${path}: ${fault}`),
    );
  });

  test('no JSON, no file', () => {
    const path = folder.write('labels.json', '{ "images": ');
    expect(formatFault(faultsOf(() => loadLabels(path))[0])).toContain('is no JSON (');
    expect(formatFault(faultsOf(() => loadLabels(folder.path('label.json')))[0])).toContain(
      "there is no such file. Did you mean '",
    );
  });
});
