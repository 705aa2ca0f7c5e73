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
    scenes: { images: folder.path('scenes/'), labels: folder.path('labels.json') },
    count: 2000,
    seed: 7,
    vary: [
      { key: 'lens.waves.W131', distribution: { kind: 'normal', mean: 1.1, deviation: 0.3, within: [0, 2] } },
      { key: 'mount.sensor_shift_um', distribution: { kind: 'uniform', low: -25, high: 25 } },
      { key: 'camera.sensor.white_e', distribution: { kind: 'log_uniform', low: 1500, high: 8000 } },
      { key: 'mount.sensor_tilt_deg[0]', distribution: { kind: 'choice', values: [0, 0.1] } },
      { key: 'lens.colour.axial_um.450', distribution: { kind: 'fixed', value: 3 } },
    ],
    output: { size: [640, 480], format: 'jpeg', quality: 90, labels: 'coco' },
  });
});

test('the shortest recipe; several rigs', () => {
  const text = 'rig: [packhouse.rig.yaml, packhouse.rig.yaml]\nscenes: { images: scenes }\ncount: 3\n';
  const rig = folder.path('packhouse.rig.yaml');
  expect(loadRecipe(folder.write('a.recipe.yaml', text))).toEqual({
    rigs: [rig, rig],
    scenes: { images: folder.path('scenes') },
    count: 3,
    seed: 1,
    vary: [],
    output: { format: 'png', labels: 'coco' },
  });
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
