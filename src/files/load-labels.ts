/** Labels of scenes from a COCO file. */
import fs from 'node:fs';
import { type Fault, InputError } from '../errors.js';
import { checkSchema } from './check-schema.js';
import { unreadableFault } from './input-text.js';
import { decodeRunLengths } from './run-lengths.js';
import { type AnnotationFile, type CategoryFile, labelsFile } from './schemas/labels.js';
import { keyPath, type Path, type Source } from './source.js';

/** A mask as the lengths of its runs down the columns, first those of nothing. */
export interface RunLengths {
  width: number;
  height: number;
  counts: readonly number[];
  /** Whether the file holds the counts as a compressed text. */
  isCompressed: boolean;
}

/** One label of a scene. Places are the file's: in pixels from the top left corner, the first pixel covers 0 to 1. */
export interface SceneLabel {
  categoryId: number;
  isCrowd: boolean;
  /** x, y, width, height. */
  box?: readonly [number, number, number, number];
  /** Parts of the outline, each x, y, x, y, …. */
  polygons?: readonly (readonly number[])[];
  mask?: RunLengths;
  /** x, y, v of each point: v is 0 where it is not labelled, 1 where it is hidden, 2 where it shows. */
  keypoints?: readonly number[];
  /** Keys of the user's own. */
  others: Readonly<Record<string, unknown>>;
}

export interface LabelledScene {
  file: string;
  width: number;
  height: number;
  labels: readonly SceneLabel[];
}

export interface SceneLabels {
  /** As the file has them. */
  categories: readonly CategoryFile[];
  /** In the order of the file. */
  scenes: readonly LabelledScene[];
}

/** Reads a COCO file and checks that its parts fit each other.
 * @throws {InputError} every fault of the file, by key
 */
export function loadLabels(path: string): SceneLabels {
  const file = checkSchema(labelsFile, jsonSource(path));
  const faults: Fault[] = [];
  const fault = (at: Path, words: Omit<Fault, 'file' | 'key'>) =>
    faults.push({ file: path, key: keyPath(at), ...words });
  const images = byId(file.images, 'images', fault);
  const categories = byId(file.categories, 'categories', fault);
  byId(file.annotations, 'annotations', fault);
  const names = new Set<string>();
  const labels = new Map<number, SceneLabel[]>();
  for (const [index, image] of file.images.entries()) {
    if (names.has(image.file_name))
      fault(['images', index, 'file_name'], { message: 'stands twice', found: image.file_name });
    names.add(image.file_name);
    labels.set(image.id, []);
  }
  for (const [index, annotation] of file.annotations.entries()) {
    const at: Path = ['annotations', index];
    const image = images.get(annotation.image_id);
    const category = categories.get(annotation.category_id);
    if (image === undefined)
      fault([...at, 'image_id'], { message: 'is the id of no picture', found: String(annotation.image_id) });
    if (category === undefined)
      fault([...at, 'category_id'], {
        message: 'is the id of no category',
        found: String(annotation.category_id),
      });
    if (image === undefined || category === undefined) continue;
    checkKeypoints(annotation, category, at, fault);
    labels.get(image.id)!.push(labelFromFile(annotation, image, at, fault));
  }
  if (faults.length > 0) throw new InputError(faults);
  const scenes = file.images.map(({ id, file_name, width, height }) => ({
    file: file_name,
    width,
    height,
    labels: labels.get(id)!,
  }));
  return { categories: file.categories, scenes };
}

type AddFault = (at: Path, words: Omit<Fault, 'file' | 'key'>) => void;

/** JSON of any size, without lines: label files are written by programs. */
function jsonSource(path: string): Source {
  let value: unknown;
  try {
    value = JSON.parse(fs.readFileSync(path, 'utf8'));
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw new InputError(unreadableFault(path, error));
    throw new InputError({ file: path, message: `is no JSON (${error.message})` });
  }
  return { file: path, value, faults: [], place: (at) => ({ file: path, key: keyPath(at) }) };
}

function byId<Entry extends { id: number }>(
  entries: readonly Entry[],
  key: string,
  fault: AddFault,
): Map<number, Entry> {
  const found = new Map<number, Entry>();
  for (const [index, entry] of entries.entries()) {
    if (found.has(entry.id)) fault([key, index, 'id'], { message: 'stands twice', found: String(entry.id) });
    found.set(entry.id, entry);
  }
  return found;
}

function checkKeypoints(
  { keypoints }: AnnotationFile,
  category: CategoryFile,
  at: Path,
  fault: AddFault,
): void {
  if (keypoints === undefined) return;
  const expected = 3 * (category.keypoints?.length ?? 0);
  if (keypoints.length === expected) return;
  fault([...at, 'keypoints'], {
    message: `has not three numbers for each key point of the category '${category.name}'`,
    found: `${keypoints.length} numbers`,
    allowed: `${expected} numbers`,
  });
}

function labelFromFile(
  annotation: AnnotationFile,
  image: { width: number; height: number },
  at: Path,
  fault: AddFault,
): SceneLabel {
  const {
    id,
    image_id,
    category_id,
    bbox,
    segmentation,
    keypoints,
    iscrowd,
    area,
    num_keypoints,
    ...others
  } = annotation;
  const label: SceneLabel = { categoryId: category_id, isCrowd: iscrowd === 1, others };
  if (bbox !== undefined) label.box = bbox;
  if (keypoints !== undefined) label.keypoints = keypoints;
  if (Array.isArray(segmentation)) {
    for (const [part, polygon] of segmentation.entries()) {
      if (polygon.length % 2 === 0) continue;
      const key = [...at, 'segmentation', part];
      fault(key, { message: 'has an x without its y', found: `${polygon.length} numbers` });
    }
    if (segmentation.length > 0) label.polygons = segmentation;
  } else if (segmentation !== undefined) {
    const mask = maskFromFile(segmentation, image, [...at, 'segmentation'], fault);
    if (mask !== undefined) label.mask = mask;
  }
  if (bbox === undefined && segmentation === undefined && keypoints === undefined)
    fault(at, { message: 'has no place', allowed: 'bbox, segmentation or keypoints' });
  return label;
}

function maskFromFile(
  { size: [height, width], counts }: { size: [number, number]; counts: number[] | string },
  image: { width: number; height: number },
  at: Path,
  fault: AddFault,
): RunLengths | undefined {
  if (height !== image.height || width !== image.width) {
    fault([...at, 'size'], {
      message: 'is not the size of the picture',
      found: `[${height}, ${width}]`,
      allowed: `[${image.height}, ${image.width}]`,
    });
    return undefined;
  }
  const isCompressed = typeof counts === 'string';
  const runs = isCompressed ? decodeRunLengths(counts) : counts;
  const pixels = runs?.reduce((sum, count) => sum + count, 0);
  if (runs === undefined || pixels !== width * height) {
    fault([...at, 'counts'], {
      message: 'do not add up to the pixels of the picture',
      found: pixels === undefined ? 'a text that is no run lengths' : String(pixels),
      allowed: String(width * height),
    });
    return undefined;
  }
  return { width, height, counts: runs, isCompressed };
}
