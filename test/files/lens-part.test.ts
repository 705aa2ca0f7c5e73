import { expect, test } from 'vitest';
import { parse } from 'yaml';
import { lensPartText } from '../../src/files/lens-part.js';
import { loadLensPart } from '../../src/files/load-rig.js';
import { yamlText } from '../../src/files/write-data.js';
import { toLens } from '../../src/prescription/derive.js';
import { packhouseLens } from '../prescription/lenses.js';
import { useFolder } from './packhouse.js';

const folder = useFolder();
const { warnings, ...lens } = toLens(packhouseLens({ wavelengthNm: 587.5618 }), [450, 500, 650]);

test.each(['a.lens.yaml', 'a.lens.json', 'a.LENS.JSON'])(
  'a lens comes back from %s to the last bit',
  (name) => {
    expect(warnings).not.toHaveLength(0); // they stay behind
    const path = folder.write(name, lensPartText(name, { ...lens, warnings }, ['A note.\nOf two lines.']));
    expect(loadLensPart(path)).toEqual(lens);
  },
);

test('notes stand at the head of a YAML file', () => {
  const text = lensPartText('a.yaml', lens, ['One.\nStill one.', 'Two.']);
  expect(text.split('\n').slice(0, 5)).toEqual([
    '# One.',
    '# Still one.',
    '# Two.',
    '',
    'name: three-element lens, packing hall',
  ]);
  expect(lensPartText('a.yaml', lens)).toMatch(/^name: /);
  expect(() => JSON.parse(lensPartText('a.json', lens, ['x']))).not.toThrow();
});

test('wavelengths rise in a YAML file, and other keys stay where they are', () => {
  expect(lensPartText('a.yaml', lens).match(/^ {2}"[\d.]+":$/gm)).toEqual(
    ['450', '500', '587.5618', '650'].map((nm) => `  "${nm}":`),
  );
  const data = { b: 1, a: { 700: 1, x: 2 }, 10: 3, list: [{ z: 1, y: 2 }] };
  const keys = (value: object) => Object.keys(value);
  expect(keys(parse(yamlText(data)))).toEqual(keys(data));
});
