/** How a data set is made. */
import { z } from 'zod';
import { nearest } from '../nearest.js';
import { checkOneOf, crossChecked, numberIn, type Report, type Unchecked } from './cross-check.js';
import { numberKeys } from './keys.js';
import { wholeRig } from './rig.js';
import { choice, fileName, list, mapping, number, pair } from './values.js';

const anyNumber = number({}, 'A number in the unit of the key.');
const range = (words: string) => pair(anyNumber, anyNumber, words);

const DISTRIBUTIONS = {
  uniform: range('a pair [lowest, highest]').describe('Evenly between two values.').optional(),
  normal: range('a pair [mean, standard deviation]').describe('Normally about a mean.').optional(),
  log_uniform: range('a pair [lowest, highest], both above 0')
    .describe('Evenly in the logarithm.')
    .optional(),
  choice: list(anyNumber, 'a list of numbers').describe('One of these values.').optional(),
  fixed: anyNumber.describe('This value in every picture.').optional(),
};

const distribution = crossChecked(
  mapping({
    ...DISTRIBUTIONS,
    within: range('a pair [lowest, highest]')
      .describe('Beside normal: values outside are drawn anew.')
      .optional(),
  }),
  (value, report) => {
    checkOneOf(value, Object.keys(DISTRIBUTIONS), report, { needed: true });
    for (const key of ['uniform', 'log_uniform', 'within']) checkRises(value, key, report);
    const lowest = first(value.log_uniform);
    if (lowest !== undefined && lowest <= 0)
      report(['log_uniform', 0], { message: 'is not above 0', allowed: 'a number above 0' });
    const deviation = second(value.normal);
    if (deviation !== undefined && deviation < 0)
      report(['normal', 1], { message: 'is below 0', allowed: 'a standard deviation of 0 or more' });
    if (value.within !== undefined && value.normal === undefined)
      report(['within'], { message: 'stands without normal', inKey: true });
  },
).meta({ description: 'How the values of a key are spread.' });

/** Every number of a rig; `*` stands for a key of the user's own. */
const KEYS = numberKeys(wholeRig);

const vary = crossChecked(
  z.record(z.string(), distribution, { error: 'a mapping from keys of the rig to distributions' }),
  (value, report) => {
    for (const key of Object.keys(value)) {
      if (KEYS.some((known) => matches(key, known))) continue;
      const near = nearestKey(key);
      report([key], {
        message: 'is no number of a rig',
        found: key,
        allowed: 'the path of a number in the rig, such as lens.waves.W131',
        advice: near === undefined ? undefined : `Did you mean '${near}'?`,
        inKey: true,
      });
    }
  },
).describe('Numbers of the rig, by path, with the distribution of each.');

const WITHOUT_QUALITY = ['png', 'tiff'];

const output = crossChecked(
  mapping({
    size: pair(
      number({ min: 1, max: 65535, whole: true }, 'Width.'),
      number({ min: 1, max: 65535, whole: true }, 'Height.'),
      'a pair [width, height] of whole numbers',
    )
      .describe("Size of the pictures. Left out: the sensor's. Unit: pixels.")
      .optional(),
    format: choice(['png', 'jpeg', 'webp', 'tiff'], 'File format of the pictures.').default('png'),
    quality: number({ min: 1, max: 100, whole: true }, 'Quality of jpeg and webp.').optional(),
    labels: choice(['coco', 'none'], 'Format of the labels.').default('coco'),
  }),
  (value, report) => {
    if (value.quality === undefined || !WITHOUT_QUALITY.includes(String(value.format))) return;
    report(['quality'], {
      message: `does not fit the format ${String(value.format)}`,
      allowed: 'beside jpeg or webp',
      inKey: true,
    });
  },
).describe('What the pictures and labels are written as.');

export const recipeFile = mapping({
  rig: z
    .union([fileName('A rig file.'), list(fileName('A rig file.'), 'a list of rig files')], {
      error: 'the name of a rig file, or a list of them',
    })
    .describe('The rig file, relative to this file; or a list of them, used in turn.'),
  scenes: mapping({
    images: fileName('Folder of the scenes, relative to this file.'),
    labels: fileName('Labels of the scenes (COCO), relative to this file.').optional(),
  }).describe('The scenes and their labels.'),
  count: number({ min: 1, max: 1e8, whole: true }, 'Number of pictures.'),
  seed: number(
    { min: 0, max: Number.MAX_SAFE_INTEGER, whole: true },
    'Seed of all that is drawn by chance.',
  ).default(1),
  vary: vary.default({}),
  output: output.prefault({}),
}).meta({ title: 'Dataset recipe', description: 'How a data set of labelled pictures is made.' });

export type RecipeFile = z.output<typeof recipeFile>;
export type Distribution = z.output<typeof distribution>;

function matches(key: string, known: string): boolean {
  const dotted = known.replaceAll('[', '.').replaceAll(']', ''); // mount.axis_px.0 is mount.axis_px[0]
  return [known, dotted].some((path) => {
    if (!path.endsWith('.*')) return key === path;
    const stem = path.slice(0, -1);
    return key.startsWith(stem) && /^\d+(\.\d+)?$/.test(key.slice(stem.length));
  });
}

/** The nearest key of the same mapping, or where there is no such mapping, the nearest of all. */
function nearestKey(key: string): string | undefined {
  const stem = key.slice(0, key.lastIndexOf('.') + 1);
  const siblings = KEYS.filter((known) => known.startsWith(stem)).map((known) => known.slice(stem.length));
  if (stem === '' || siblings.length === 0) return nearest(key, KEYS);
  const near = nearest(key.slice(stem.length), siblings);
  return near === undefined ? undefined : `${stem}${near}`;
}

function checkRises(value: Unchecked, key: string, report: Report): void {
  const low = first(value[key]);
  const high = second(value[key]);
  if (low !== undefined && high !== undefined && low > high) {
    report([key], { message: 'does not rise', allowed: 'a pair [lowest, highest]' });
  }
}

function first(list: unknown): number | undefined {
  return Array.isArray(list) ? numberIn(list[0]) : undefined;
}

function second(list: unknown): number | undefined {
  return Array.isArray(list) ? numberIn(list[1]) : undefined;
}
