/** How a data set is made. */
import { z } from 'zod';
import { choleskyFactor } from '../../numeric/cholesky.js';
import { nearest } from '../nearest.js';
import { checkOneOf, crossChecked, isMapping, numberIn, type Report, type Unchecked } from './cross-check.js';
import { numberKeys } from './keys.js';
import { wholeRig } from './rig.js';
import { choice, fileName, flag, list, mapping, number, pair, text } from './values.js';

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

const correlation = number({ min: -1, max: 1 }, 'Correlation of two keys.');

const correlated = crossChecked(
  mapping({
    keys: list(text('A key of vary.'), 'a list of keys of vary', 100).describe(
      'Keys of vary that go together.',
    ),
    correlation: correlation.describe('Correlation of every two of the keys, -1 to 1.').optional(),
    matrix: list(list(correlation, 'a list of correlations', 100), 'a list of rows', 100)
      .describe('Correlation of every key with every other: a row a key, 1 on the diagonal.')
      .optional(),
  }),
  (value, report) => {
    checkOneOf(value, ['correlation', 'matrix'], report, { needed: true });
    checkMatrix(value, report);
  },
);

const share = (what: string) => number({ above: 0, max: 1e9 }, `Part of the pictures that are for ${what}.`);

const shares = crossChecked(
  mapping({
    train: share('training').optional(),
    val: share('validation').optional(),
    test: share('testing').optional(),
  }),
  (value, report) => {
    if (Object.keys(value).length > 0) return;
    report([], { message: 'names no part', allowed: 'one of train, val, test or more', inKey: true });
  },
).describe(
  'Parts into which the pictures are divided, in any unit: 8 and 2 or 0.8 and 0.2. No two of them show the same scene.',
);

const placement = mapping({
  cover: choice(
    ['sensor', 'picture', 'none'],
    'What the scene just covers at a scale of 1: the sensor, as in a rendering, or the picture; none: a pixel of the scene is a pixel of the sensor.',
  ).default('sensor'),
  scale: z
    .union([number({ min: 0.01, max: 100 }, 'A magnification.'), distribution], {
      error: 'a number from 0.01 to 100, or a distribution',
    })
    .describe('Magnification of the scene on top of that: a number or a distribution.')
    .default(1),
  at: choice(
    ['middle', 'random'],
    'middle: the middle of the scene lies on the middle of what it covers. random: the picture shows a random part of the scene.',
  ).default('middle'),
  quarter_turns: flag('Turn the scene by 0, 90, 180 or 270 degrees, each as often.').optional(),
}).describe('How the scene lies on the sensor. Past its border a scene goes on with its edge.');

const accuracy = mapping({
  oversample: number({ min: 1, max: 16, whole: true }, 'Blur on a grid of so many samples a pixel.').default(
    1,
  ),
  tolerance: number(
    { above: 0, max: 1 },
    'Largest error that blending PSFs may cause, as a share of full scale.',
  ).default(0.004),
  kernel_tolerance: number(
    { above: 0, max: 1 },
    "Largest share of a PSF's light outside its kernel.",
  ).default(0.005),
}).describe('How exact the pictures are, as the options of render with these names.');

const WITHOUT_QUALITY = ['png', 'tiff'];
const EIGHT_BIT = ['jpeg', 'webp'];
const pixelAt = (what: string) => number({ min: 0, max: 65534, whole: true }, what);

const output = crossChecked(
  mapping({
    size: pair(
      number({ min: 1, max: 65535, whole: true }, 'Width.'),
      number({ min: 1, max: 65535, whole: true }, 'Height.'),
      'a pair [width, height] of whole numbers',
    )
      .describe(
        'Size of the pictures: a window of the sensor, read out at its own pixels. Left out: the whole sensor. Unit: pixels.',
      )
      .optional(),
    window: z
      .union(
        [
          choice(['random', 'middle'], 'A place.'),
          pair(pixelAt('Column.'), pixelAt('Row.'), 'a pair [column, row] of whole numbers'),
        ],
        { error: 'random, middle, or a pair [column, row] of whole numbers' },
      )
      .describe(
        'Where the window lies on the sensor. random: anywhere, so that the pictures show every part of the field; middle; or its first pixel [column, row].',
      )
      .default('random'),
    format: choice(['png', 'jpeg', 'webp', 'tiff'], 'File format of the pictures.').default('png'),
    picture: choice(
      ['developed', 'linear', 'raw'],
      "What the files hold. developed: 8-bit sRGB; linear: the developed picture as 16-bit linear light; raw: the sensor's own 16-bit numbers. Left out: linear for tiff, else developed.",
    ).optional(),
    quality: number({ min: 1, max: 100, whole: true }, 'Quality of jpeg and webp.').optional(),
    labels: choice(['coco', 'none'], 'Format of the labels.').default('coco'),
    least_left: number(
      { min: 0, max: 1 },
      'A label of which less than this share of its area is left in the picture is dropped.',
    ).default(0.2),
  }),
  (value, report) => {
    if (value.quality !== undefined && WITHOUT_QUALITY.includes(String(value.format ?? 'png'))) {
      report(['quality'], {
        message: `does not fit the format ${String(value.format ?? 'png')}`,
        allowed: 'beside jpeg or webp',
        inKey: true,
      });
    }
    if (EIGHT_BIT.includes(String(value.format)) && (value.picture === 'linear' || value.picture === 'raw')) {
      report(['picture'], {
        message: `needs 16 bits, which ${String(value.format)} has not`,
        allowed: 'developed, or the format png or tiff',
      });
    }
  },
).describe('What the pictures and labels are written as.');

const keys = mapping({
  rig: z
    .union([fileName('A rig file.'), list(fileName('A rig file.'), 'a list of rig files')], {
      error: 'the name of a rig file, or a list of them',
    })
    .describe('The rig file, relative to this file; or a list of them, used in turn.'),
  scenes: mapping({
    images: fileName('Folder of the scenes, relative to this file.'),
    labels: fileName(
      'Labels of the scenes (COCO), relative to this file. Left out: every picture of the folder is a scene, without labels.',
    ).optional(),
    order: choice(
      ['in_turn', 'random'],
      'in_turn: one scene after the other, in the order of their names; random: by chance.',
    ).default('in_turn'),
    linear: flag('The numbers of the scenes are linear light, not sRGB.').optional(),
  }).describe('The scenes and their labels.'),
  count: number({ min: 1, max: 1e8, whole: true }, 'Number of pictures.'),
  seed: number(
    { min: 0, max: Number.MAX_SAFE_INTEGER, whole: true },
    'Seed of all that is drawn by chance.',
  ).default(1),
  shares: shares.optional(),
  vary: vary.default({}),
  correlated: list(correlated, 'a list of groups of keys', 100)
    .describe('Groups of varied keys that are not independent: a Gaussian copula joins their distributions.')
    .default([]),
  placement: placement.prefault({}),
  accuracy: accuracy.prefault({}),
  output: output.prefault({}),
});

export const recipeFile = crossChecked(keys, (value, report) => checkGroups(value, report)).meta({
  title: 'Dataset recipe',
  description: 'How a data set of labelled pictures is made.',
});

export type RecipeFile = z.output<typeof recipeFile>;
export type Distribution = z.output<typeof distribution>;

/** A matrix of correlations: square, symmetric, 1 on the diagonal, and possible. */
function checkMatrix(value: Unchecked, report: Report): void {
  const size = Array.isArray(value.keys) ? value.keys.length : 0;
  const matrix = correlationMatrix(size, value);
  if (size === 0 || matrix === undefined) return;
  const stated = value.matrix !== undefined;
  const isSquare = matrix.length === size && matrix.every((row) => row.length === size);
  if (!isSquare) {
    report(['matrix'], {
      message: 'has not a row and a column for each key',
      allowed: `${size} x ${size} numbers`,
    });
    return;
  }
  const isSymmetric = matrix.every(
    (row, i) => row[i] === 1 && row.every((entry, j) => entry === matrix[j][i]),
  );
  if (!isSymmetric) {
    report(['matrix'], {
      message: 'is no correlation matrix',
      allowed: 'a symmetric one with 1 on the diagonal',
    });
    return;
  }
  if (choleskyFactor(matrix) === undefined) {
    report([stated ? 'matrix' : 'correlation'], {
      message: 'contradicts itself: no variables can be correlated so',
      allowed: stated
        ? 'a positive semidefinite matrix'
        : `from ${(-1 / (size - 1)).toPrecision(3)} to 1 for ${size} keys`,
    });
  }
}

/** The matrix that a group states in full or by one number; undefined where it is not all numbers. */
export function correlationMatrix(
  size: number,
  { matrix, correlation }: { matrix?: unknown; correlation?: unknown },
): number[][] | undefined {
  if (Array.isArray(matrix)) {
    const isNumeric = matrix.every(
      (row) => Array.isArray(row) && row.every((entry) => numberIn(entry) !== undefined),
    );
    return isNumeric ? (matrix as number[][]) : undefined;
  }
  const one = numberIn(correlation);
  if (one === undefined) return undefined;
  return Array.from({ length: size }, (_, i) => Array.from({ length: size }, (_, j) => (i === j ? 1 : one)));
}

/** Groups name keys of vary, each once. */
function checkGroups({ correlated: groups, vary: varied }: Unchecked, report: Report): void {
  if (!Array.isArray(groups) || !isMapping(varied ?? {})) return;
  const seen = new Set<string>();
  const known = Object.keys(varied ?? {});
  for (const [at, group] of groups.entries()) {
    const names: unknown = isMapping(group) ? group.keys : undefined;
    for (const [index, name] of Array.isArray(names) ? names.entries() : []) {
      if (typeof name !== 'string') continue;
      const near = nearest(name, known);
      if (!known.includes(name)) {
        report(['correlated', at, 'keys', index], {
          message: 'is no key of vary',
          allowed: known.length === 0 ? 'nothing, as no key is varied' : known.join(', '),
          advice: near === undefined ? undefined : `Did you mean '${near}'?`,
        });
      } else if (seen.has(name)) {
        report(['correlated', at, 'keys', index], { message: 'stands in two places of the groups' });
      }
      seen.add(name);
    }
  }
}

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
