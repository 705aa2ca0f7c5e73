/** Labels of scenes, in the layout of COCO files. Keys that it does not know are let through: people add their own. */
import { z } from 'zod';

const finite = z.number({ error: 'a number' });
const length = z.number({ error: 'a number from 0 up' }).min(0);
const id = z.int({ error: 'a whole number' });
const side = z.int({ error: 'a whole number above 0' }).min(1);

const image = z.looseObject({
  id,
  file_name: z.string({ error: 'the name of a file' }).min(1),
  width: side,
  height: side,
});

const category = z.looseObject({
  id,
  name: z.string({ error: 'a name' }).min(1),
  keypoints: z.array(z.string({ error: 'a name' })).optional(),
});

const polygon = z.array(finite, { error: 'a list of numbers x, y, x, y, …' }).min(6);

const runLengths = z.looseObject({
  size: z.tuple([side, side], { error: 'a pair [height, width]' }),
  counts: z.union([z.array(z.int().min(0)), z.string()], {
    error: 'a list of whole numbers from 0 up, or the compressed text of one',
  }),
});

const annotation = z.looseObject({
  id,
  image_id: id,
  category_id: id,
  bbox: z.tuple([finite, finite, length, length], { error: 'four numbers [x, y, width, height]' }).optional(),
  segmentation: z
    .union([z.array(polygon), runLengths], { error: 'a list of polygons, or run lengths { size, counts }' })
    .optional(),
  keypoints: z.array(finite, { error: 'a list of numbers x, y, v, x, y, v, …' }).optional(),
  iscrowd: z.union([z.literal(0), z.literal(1)], { error: '0 or 1' }).optional(),
});

export const labelsFile = z
  .looseObject({
    images: z.array(image, { error: 'a list of pictures' }),
    categories: z.array(category, { error: 'a list of categories' }),
    annotations: z.array(annotation, { error: 'a list of labels' }),
  })
  .meta({ title: 'Labels', description: 'Labels of scenes, in the layout of COCO files.' });

export type LabelsFile = z.output<typeof labelsFile>;
export type CategoryFile = LabelsFile['categories'][number];
export type AnnotationFile = LabelsFile['annotations'][number];
