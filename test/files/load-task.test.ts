import { expect, test } from 'vitest';
import { parse } from 'yaml';
import { formatFault } from '../../src/errors.js';
import { loadTask, parseTask } from '../../src/files/load-task.js';
import { PLACES } from '../../src/optics/field-points.js';
import { faultsOf, RIG, TASK, useFolder } from './packhouse.js';

const folder = useFolder();

const EXPECTED = {
  name: 'read the crate tag',
  zones: ['axis', 0.7, '0.7@90', 'top_right'],
  rules: [
    { kind: 'contrast', size: { featureMm: 0.6 }, atLeast: 0.3 },
    { kind: 'placement', limit: { atMostPx: 1.5 }, after: 'none' },
    { kind: 'edge_blur', limit: { atMostPx: 2.5 } },
    { kind: 'decode', symbol: 'qr', module: { moduleMm: 0.6 }, successAtLeast: 0.98, trials: 20 },
    { kind: 'detect', size: { featureMm: 0.8 }, contrast: 0.2, ratioAtLeast: 4 },
  ],
};

test('a task comes in as a file, a text and an object', () => {
  expect(loadTask(folder.write('a.task.yaml', TASK))).toEqual(EXPECTED);
  expect(parseTask(TASK)).toEqual(EXPECTED);
  expect(parseTask(parse(TASK))).toEqual(EXPECTED);
});

test('the other ways to state a size or a limit, and the defaults', () => {
  const task = parseTask({
    require: [
      { contrast: { lp_per_mm: 40, at_least: 0.3 } },
      { contrast: { feature_px: 2, at_least: 0.3 } },
      { placement: { at_most_mm: 0.1, after: 'radial-model' } },
      { placement: { at_most_mm: 0.1, after: 'radial-model', model_order: 5 } },
      { edge_blur: { at_most_mm: 0.2 } },
      { decode: { symbol: 'data_matrix', module_px: 3, success_at_least: 1 } },
      { detect: { feature_px: 4, contrast: 0.2 } },
    ],
  });
  expect(task).toEqual({
    name: 'task',
    rules: [
      { kind: 'contrast', size: { lpPerMm: 40 }, atLeast: 0.3 },
      { kind: 'contrast', size: { featurePx: 2 }, atLeast: 0.3 },
      { kind: 'placement', limit: { atMostMm: 0.1 }, after: 'radial-model', modelOrder: 3 },
      { kind: 'placement', limit: { atMostMm: 0.1 }, after: 'radial-model', modelOrder: 5 },
      { kind: 'edge_blur', limit: { atMostMm: 0.2 } },
      { kind: 'decode', symbol: 'data_matrix', module: { modulePx: 3 }, successAtLeast: 1, trials: 50 },
      { kind: 'detect', size: { featurePx: 4 }, contrast: 0.2, ratioAtLeast: 5 }, // Rose's rule of 5
    ],
  });
});

test.each([...PLACES, 0, 1.2, '0.7', '0.7@-45', '1@22.5'])('field point %s', (zone) => {
  expect(parseTask({ zones: [zone], require: [{ edge_blur: { at_most_px: 1 } }] }).zones).toEqual([zone]);
});

const FIELD_WORDS =
  'a field h, h@azimuth in degrees, or one of axis, top, bottom, left, right, top_left, top_right, bottom_left, bottom_right';

// [a part of the task, what stands there instead, the one fault that follows]
test.each([
  [
    '0.7@90',
    '0.7@up',
    `2:20: zones[2]: no field point has this name, found "0.7@up". Allowed: ${FIELD_WORDS}.`,
  ],
  ['0.7@90', '-0.7', `2:20: zones[2]: is too small, found -0.7. Allowed: a number from 0 to 10.`],
  [
    '[axis, 0.7, 0.7@90, top_right]',
    '[]',
    '2:8: zones: has too few entries, found []. Allowed: a list of field points.',
  ],
  [
    'feature_mm: 0.6',
    'feature_mm: 0',
    '4:29: require[0].contrast.feature_mm: is too small, found 0. Allowed: a number above 0 and up to 1000000 (mm).',
  ],
  ['feature_mm: 0.6, ', '', '4:5: require[0].contrast: lacks one of feature_mm, feature_px, lp_per_mm.'],
  [
    'feature_mm: 0.6, ',
    'feature_mm: 0.6, lp_per_mm: 4, ',
    '4:34: require[0].contrast.lp_per_mm: stands beside feature_mm, which says the same thing. Allowed: one of feature_mm, feature_px, lp_per_mm.',
  ],
  [
    'at_least: 0.30',
    'at_least: 30',
    '4:44: require[0].contrast.at_least: is too large, found 30. Allowed: a number above 0 and up to 1.',
  ],
  [
    'at_least: 0.30',
    'at_lest: 0.30',
    "4:34: require[0].contrast.at_lest: is no known key, found at_lest. Allowed: feature_mm, feature_px, lp_per_mm, at_least. Did you mean 'at_least'?",
  ],
  ['{ at_most_px: 1.5 }', '{}', '5:5: require[1].placement: lacks at_most_px or at_most_mm.'],
  [
    '{ at_most_px: 1.5 }',
    '{ at_most_px: 1.5, after: model }',
    '5:42: require[1].placement.after: is none of the choices, found "model". Allowed: none, radial-model. Did you mean \'radial-model\'?',
  ],
  [
    '{ at_most_px: 1.5 }',
    '{ at_most_px: 1.5, after: radial-model, model_order: 4 }',
    '5:69: require[1].placement.model_order: is even, found 4. Allowed: 1, 3, 5 or 7.',
  ],
  [
    '{ at_most_px: 1.5 }',
    '{ at_most_px: 1.5, model_order: 3 }',
    '5:35: require[1].placement.model_order: stands without after: radial-model.',
  ],
  [
    '{ at_most_px: 2.5 }',
    '2.5',
    '6:16: require[2].edge_blur: is not a mapping, found 2.5. Allowed: a mapping with the keys at_most_px, at_most_mm.',
  ],
  [
    'symbol: qr',
    'symbol: qrcode',
    '7:23: require[3].decode.symbol: is none of the choices, found "qrcode". Allowed: qr, data_matrix, code_128.',
  ],
  [
    'trials: 20',
    'trials: 0',
    '7:75: require[3].decode.trials: is too small, found 0. Allowed: a whole number from 1 to 100000.',
  ],
  [
    'contrast: 0.2',
    'contrast: 1.2',
    '8:42: require[4].detect.contrast: is too large, found 1.2. Allowed: a number above 0 and up to 1.',
  ],
  [
    '- placement',
    '  placement',
    '5:5: require[0].placement: stands in one list entry with contrast. Begin a list entry of its own: - placement: ...',
  ],
  [
    '- edge_blur',
    '- edge_blurr',
    "6:5: require[2].edge_blurr: is no known key, found edge_blurr. Allowed: contrast, placement, edge_blur, decode, detect. Did you mean 'edge_blur'?",
  ],
])('%j as %j', (from, to, fault) => {
  expect(TASK).toContain(from);
  const text = TASK.replace(from, to);
  expect(faultsOf(() => parseTask(text)).map(formatFault)).toEqual([fault]);
});

test('no rules', () => {
  expect(faultsOf(() => parseTask({}))).toMatchObject([
    { key: 'require', message: 'is missing', allowed: 'a list of rules' },
  ]);
  expect(faultsOf(() => parseTask({ require: [{}] }))).toMatchObject([
    {
      key: 'require[0]',
      message: 'is no rule',
      allowed: 'one of contrast, placement, edge_blur, decode, detect',
    },
  ]);
});

test('a rig in place of a task', () => {
  const path = folder.write('a.yaml', RIG);
  expect(faultsOf(() => loadTask(path))).toMatchObject([
    { file: path, line: 1, message: 'is a rig, not a task' },
  ]);
});
