import { mkdirSync } from 'node:fs';
import { beforeEach, expect, test } from 'vitest';
import { formatFault } from '../../src/errors.js';
import { loadRecipe } from '../../src/files/load-recipe.js';
import { faultsOf, RECIPE, RIG, useFolder } from './packhouse.js';

const folder = useFolder();

beforeEach(() => {
  mkdirSync(folder.path('scenes'));
  folder.write('packhouse.rig.yaml', RIG);
  folder.write('labels.json', '{}');
});

test('a recipe comes in, with names that open from the working folder', () => {
  expect(loadRecipe(folder.write('a.recipe.yaml', RECIPE))).toEqual({
    rigs: [folder.path('packhouse.rig.yaml')],
    scenes: {
      images: folder.path('scenes/'),
      labels: folder.path('labels.json'),
      order: 'in_turn',
      isLinear: false,
    },
    count: 2000,
    seed: 7,
    vary: [
      { key: 'lens.waves.W131', distribution: { kind: 'normal', mean: 1.1, deviation: 0.3, within: [0, 2] } },
      { key: 'mount.sensor_shift_um', distribution: { kind: 'uniform', low: -25, high: 25 } },
      { key: 'camera.sensor.white_e', distribution: { kind: 'log_uniform', low: 1500, high: 8000 } },
      { key: 'mount.sensor_tilt_deg[0]', distribution: { kind: 'choice', values: [0, 0.1] } },
      { key: 'lens.colour.axial_um.450', distribution: { kind: 'fixed', value: 3 } },
    ],
    ...ASIDE,
    output: {
      size: [640, 480],
      window: 'random',
      format: 'jpeg',
      picture: 'developed',
      quality: 90,
      labels: 'coco',
      leastLeft: 0.2,
    },
  });
});

/** What a recipe has although it does not say so. */
const ASIDE = {
  correlated: [],
  placement: { cover: 'sensor', scale: { kind: 'fixed', value: 1 }, at: 'middle', quarterTurns: false },
  accuracy: { oversample: 1, tolerance: 0.004, kernelTolerance: 0.005 },
};

test('the shortest recipe; several rigs', () => {
  const text = 'rig: [packhouse.rig.yaml, packhouse.rig.yaml]\nscenes: { images: scenes }\ncount: 3\n';
  const rig = folder.path('packhouse.rig.yaml');
  expect(loadRecipe(folder.write('a.recipe.yaml', text))).toEqual({
    rigs: [rig, rig],
    scenes: { images: folder.path('scenes'), order: 'in_turn', isLinear: false },
    count: 3,
    seed: 1,
    vary: [],
    ...ASIDE,
    output: { window: 'random', format: 'png', picture: 'developed', labels: 'coco', leastLeft: 0.2 },
  });
});

test('all that a recipe can say besides', () => {
  const text = `${RECIPE.replace('count: 2000', 'shares: { train: 8, test: 2 }\ncount: 2000')
    .replace('labels: labels.json', 'labels: labels.json, order: random, linear: true')
    .replace('format: jpeg, quality: 90', 'format: tiff, window: [16, 8], least_left: 0.5')}correlated:
  - { keys: [lens.waves.W131, mount.sensor_shift_um], correlation: -0.5 }
placement: { cover: none, scale: { uniform: [0.8, 1.25] }, at: random, quarter_turns: true }
accuracy: { oversample: 2, tolerance: 0.01, kernel_tolerance: 0.02 }
`;
  const recipe = loadRecipe(folder.write('a.recipe.yaml', text));
  expect(recipe).toMatchObject({
    scenes: { order: 'random', isLinear: true },
    shares: { train: 8, test: 2 },
    correlated: [
      {
        keys: ['lens.waves.W131', 'mount.sensor_shift_um'],
        matrix: [
          [1, -0.5],
          [-0.5, 1],
        ],
      },
    ],
    placement: {
      cover: 'none',
      scale: { kind: 'uniform', low: 0.8, high: 1.25 },
      at: 'random',
      quarterTurns: true,
    },
    accuracy: { oversample: 2, tolerance: 0.01, kernelTolerance: 0.02 },
    output: { window: [16, 8], format: 'tiff', picture: 'linear', leastLeft: 0.5 },
  });
});

const GROUP = 'correlated:\n  - { keys: [lens.waves.W131, mount.sensor_shift_um, camera.sensor.white_e], ';
test.each([
  [
    'correlation: -0.6 }',
    '13:91: correlated[0].correlation: contradicts itself: no variables can be correlated so, found -0.6. Allowed: from -0.500 to 1 for 3 keys.',
  ],
  [
    'matrix: [[1, 0], [0, 1]] }',
    '13:86: correlated[0].matrix: has not a row and a column for each key, found [[1,0],[0,1]]. Allowed: 3 x 3 numbers.',
  ],
  [
    'matrix: [[1, 0.5, 0], [0.4, 1, 0], [0, 0, 1]] }',
    '13:86: correlated[0].matrix: is no correlation matrix, found [[1,0.5,0],[0.4,1,0],[0,0,1]]. Allowed: a symmetric one with 1 on the diagonal.',
  ],
  [
    'matrix: [[1, 0.9, 0.9], [0.9, 1, -0.9], [0.9, -0.9, 1]] }',
    '13:86: correlated[0].matrix: contradicts itself: no variables can be correlated so, found [[1,0.9,0.9],[0.9,1,-0.9],[0.9,-0.9,1]]. Allowed: a positive semidefinite matrix.',
  ],
  [
    'correlation: 0.5, matrix: [[1]] }',
    '13:96: correlated[0].matrix: stands beside correlation, which says the same thing. Allowed: one of correlation, matrix.',
  ],
  ['}', '13:5: correlated[0]: lacks correlation or matrix.'],
])('a group that ends in %j', (ending, fault) => {
  const path = folder.write('a.recipe.yaml', `${RECIPE}${GROUP}${ending}\n`);
  expect(faultsOf(() => loadRecipe(path)).map(formatFault)[0]).toBe(`${path}:${fault}`);
});

test('groups of keys that are not varied, or in two groups', () => {
  const group = (keys: string) => `  - { keys: [${keys}], correlation: 0.5 }\n`;
  const text = `${RECIPE}correlated:\n${group('lens.waves.W131, lens.waves.W040')}${group('mount.sensor_shift_um, lens.waves.W131')}`;
  const path = folder.write('a.recipe.yaml', text);
  expect(faultsOf(() => loadRecipe(path)).map(({ key, message }) => [key, message])).toEqual([
    ['correlated[0].keys[1]', 'is no key of vary'],
    ['correlated[1].keys[1]', 'stands in two places of the groups'],
  ]);
});

// [a part of the recipe, what stands there instead, the one fault that follows]
test.each([
  [
    'count: 2000',
    'count: 0',
    '3:8: count: is too small, found 0. Allowed: a whole number from 1 to 100000000.',
  ],
  ['count: 2000\n', '', '1:1: count: is missing. Allowed: a whole number from 1 to 100000000.'],
  [
    'seed: 7',
    'seed: -1',
    '4:7: seed: is too small, found -1. Allowed: a whole number from 0 to 9007199254740991.',
  ],
  [
    'rig: packhouse.rig.yaml',
    'rig: 7',
    '1:6: rig: has the wrong form, found 7. Allowed: the name of a rig file, or a list of them.',
  ],
  [
    'rig: packhouse.rig.yaml',
    'rig: []',
    '1:6: rig: has too few entries, found []. Allowed: a list of rig files.',
  ],
  [
    'lens.waves.W131',
    'lens.waves.W113',
    "6:3: vary.lens.waves.W113: is no number of a rig, found lens.waves.W113. Allowed: the path of a number in the rig, such as lens.waves.W131. Did you mean 'lens.waves.W131'?",
  ],
  [
    'lens.waves.W131',
    'lens.name',
    '6:3: vary.lens.name: is no number of a rig, found lens.name. Allowed: the path of a number in the rig, such as lens.waves.W131.',
  ],
  [
    'axial_um.450',
    'axial_um.red',
    '10:3: vary.lens.colour.axial_um.red: is no number of a rig, found lens.colour.axial_um.red. Allowed: the path of a number in the rig, such as lens.waves.W131.',
  ],
  [
    '{ uniform: [-25, 25] }',
    '{ uniform: [25, -25] }',
    '7:37: vary.mount.sensor_shift_um.uniform: does not rise, found [25,-25]. Allowed: a pair [lowest, highest].',
  ],
  [
    '{ uniform: [-25, 25] }',
    '{ uniform: [25] }',
    '7:37: vary.mount.sensor_shift_um.uniform: has too few entries, found [25]. Allowed: a pair [lowest, highest].',
  ],
  [
    '{ uniform: [-25, 25] }',
    '{ uniform: [-25, 25], fixed: 3 }',
    '7:48: vary.mount.sensor_shift_um.fixed: stands beside uniform, which says the same thing. Allowed: one of uniform, normal, log_uniform, choice, fixed.',
  ],
  [
    '{ uniform: [-25, 25] }',
    '{ uniform: [-25, 25], within: [0, 1] }',
    '7:48: vary.mount.sensor_shift_um.within: stands without normal.',
  ],
  [
    '{ uniform: [-25, 25] }',
    '{}',
    '7:3: vary.mount.sensor_shift_um: lacks one of uniform, normal, log_uniform, choice, fixed.',
  ],
  [
    '{ uniform: [-25, 25] }',
    '{ unifrm: [-25, 25] }',
    "7:28: vary.mount.sensor_shift_um.unifrm: is no known key, found unifrm. Allowed: uniform, normal, log_uniform, choice, fixed, within. Did you mean 'uniform'?",
  ],
  [
    'log_uniform: [1500',
    'log_uniform: [0',
    '8:42: vary.camera.sensor.white_e.log_uniform[0]: is not above 0, found 0. Allowed: a number above 0.',
  ],
  [
    'normal: [1.1, 0.3]',
    'normal: [1.1, -0.3]',
    '6:36: vary.lens.waves.W131.normal[1]: is below 0, found -0.3. Allowed: a standard deviation of 0 or more.',
  ],
  [
    'normal: [1.1, 0.3]',
    'normal: [1.1, .inf]',
    '6:36: vary.lens.waves.W131.normal[1]: is not a finite number, found Infinity. Allowed: a number.',
  ],
  [
    '[640, 480]',
    '[640, 0]',
    '11:23: output.size[1]: is too small, found 0. Allowed: a whole number from 1 to 65535.',
  ],
  [
    'format: jpeg',
    'format: bmp',
    '11:37: output.format: is none of the choices, found "bmp". Allowed: png, jpeg, webp, tiff.',
  ],
  [
    'format: jpeg',
    'format: png',
    '11:42: output.quality: does not fit the format png. Allowed: beside jpeg or webp.',
  ],
  [
    'quality: 90',
    'picture: raw',
    '11:52: output.picture: needs 16 bits, which jpeg has not, found "raw". Allowed: developed, or the format png or tiff.',
  ],
  [
    'labels: coco',
    'window: left, labels: coco',
    '11:64: output.window: is none of the choices, found "left". Allowed: random, middle, or a pair [column, row] of whole numbers.',
  ],
  ['seed: 7', 'shares: {}', '4:1: shares: names no part. Allowed: one of train, val, test or more.'],
  [
    'seed: 7',
    'shares: { train: 0 }',
    '4:18: shares.train: is too small, found 0. Allowed: a number above 0 and up to 1000000000.',
  ],
  [
    'labels: coco',
    'labels: boxes',
    '11:64: output.labels: is none of the choices, found "boxes". Allowed: coco, none.',
  ],
])('%j as %j', (from, to, fault) => {
  expect(RECIPE).toContain(from);
  const text = RECIPE.replace(from, to);
  const path = folder.write('a.recipe.yaml', text);
  expect(faultsOf(() => loadRecipe(path)).map(formatFault)).toEqual([`${path}:${fault}`]);
});

test('files that are not there, or are something else, all at once', () => {
  const text =
    'rig: [packhouse.rig.yml, scenes]\nscenes: { images: labels.json, labels: lables.json }\ncount: 3\n';
  const path = folder.write('a.recipe.yaml', text);
  const at = (name: string) => folder.path(name);
  expect(faultsOf(() => loadRecipe(path)).map(formatFault)).toEqual([
    `${path}:1:7: rig[0]: '${at('packhouse.rig.yml')}': there is no such file. Did you mean '${at('packhouse.rig.yaml')}'?`,
    `${path}:1:26: rig[1]: '${at('scenes')}': is a folder, not a file.`,
    `${path}:2:19: scenes.images: '${at('labels.json')}': is a file, not a folder.`,
    `${path}:2:40: scenes.labels: '${at('lables.json')}': there is no such file. Did you mean '${at('labels.json')}'?`,
  ]);
});
