/** Every refusal of a rig: where the fault lies, what was found, what is allowed, what to do. */
import { mkdirSync, readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { type Fault, formatFault } from '../../src/errors.js';
import { loadCameraPart, loadLensPart, loadRig, parseRig } from '../../src/files/load-rig.js';
import { CAMERA, faultsOf, LENS, PRESCRIPTION, RIG, TASK, useFolder } from './packhouse.js';

const folder = useFolder();

/** The faults of the rig of the packing hall after one change. */
function changed(from: string, to: string): readonly Fault[] {
  expect(RIG).toContain(from); // a change that changes nothing would test nothing
  return faultsOf(() => parseRig(RIG.replace(from, to)));
}

/** From rig-refusals.txt: part, replacement, fault. */
const REFUSALS = [
  ...readFileSync(new URL('rig-refusals.txt', import.meta.url), 'utf8').matchAll(
    /^(".*") => (".*")\n {2}(.*)$/gm,
  ),
].map(([, from, to, fault]): [string, string, string] => [JSON.parse(from), JSON.parse(to), fault]);

test('the list of refusals is read', () => {
  expect(REFUSALS.length).toBeGreaterThan(70);
});

test.each(REFUSALS)('%j as %j', (from, to, fault) => {
  expect(changed(from, to).map(formatFault)).toEqual([fault]);
});

describe('an empty rig', () => {
  test('lacks its two parts', () => {
    expect(faultsOf(() => parseRig({}))).toMatchObject([
      { key: 'lens', message: 'is missing' },
      { key: 'camera', message: 'is missing' },
    ]);
    expect(faultsOf(() => parseRig('lens:\ncamera: 3\nmount: []'))).toMatchObject([
      { line: 1, column: 1, key: 'lens', message: 'is empty' },
      { line: 2, column: 9, key: 'camera', message: 'is not a mapping', found: '3' },
      { line: 3, column: 8, key: 'mount', message: 'is not a mapping', found: '[]' },
    ]);
  });

  test.each([[undefined], [null], [3], [[1, 2]]])('%j is no rig', (input) => {
    expect(faultsOf(() => parseRig(input))[0].message).toBe(
      'a rig is a text or an object with the keys of a rig file',
    );
  });
});

test('an object distance needs the focal length', () => {
  const lens = RIG.replace('  focal_length_mm: 12\n', '').replace('illumination: cos4', 'illumination: none');
  expect(
    faultsOf(() => parseRig(lens.replace('object_pixel_mm: 0.12', 'object_distance_mm: 800'))),
  ).toMatchObject([
    {
      key: 'mount.object_distance_mm',
      message: 'needs lens.focal_length_mm',
      found: '800',
      advice: 'State it, or give object_pixel_mm or magnification.',
    },
  ]);
});

test('all faults of a file come at once, in the order of its lines, cross-checks and keys that stand twice among them', () => {
  const path = folder.write(
    'a.rig.yaml',
    RIG.replace('f_number: 2.8', 'f_numbr: 2.8')
      .replace('W131: 1.1', 'W131: .nan, W040: 2')
      .replace('illumination: cos4', 'illumination: [[0, 1], [0, 1]]')
      .replace('pixel_pitch_um: 3.45', 'pixel_pitch_um: 3,45')
      .replace('mosaic: none', 'mosaic: rggb')
      .replace('object_pixel_mm: 0.12', 'object_pixel_mm: 0.12\n  magnification: 0'),
  );
  expect(faultsOf(() => loadRig(path)).map(formatFault)).toEqual([
    `${path}:4:3: lens.f_numbr: is no known key, found f_numbr. Allowed: name, focal_length_mm, f_number, full_field_mm, wavelength_nm, waves, distortion_percent, prescription, colour, waves_by_wavelength, relative_illumination. Did you mean 'f_number'?`,
    `${path}:7:29: lens.waves.W131: is not a finite number, found NaN. Allowed: a number.`,
    `${path}:7:35: lens.waves.W040: stands twice, first in line 7. Delete one of the two.`,
    `${path}:11:36: lens.relative_illumination[1][0]: does not rise, found 0. Allowed: a field h above the one before, 0.`,
    `${path}:14:19: camera.pixel_pitch_um: is not a number, found "3,45". Allowed: a number above 0 and up to 1000 (um). Write the decimal mark as a point.`,
    `${path}:17:11: camera.mosaic: needs the bands red, green and blue, found "rggb". Allowed: none for a camera with the band mono. State red, green and blue in bands_nm, or write mosaic: none.`,
    `${path}:24:3: mount.magnification: stands beside object_pixel_mm, which says the same thing. Allowed: one of object_pixel_mm, magnification, object_distance_mm.`,
    `${path}:24:18: mount.magnification: is too small, found 0. Allowed: a number above 0 and up to 10000.`,
  ]);
});

test('a key that stands in the wrong part is told where it belongs', () => {
  const [fault] = changed('mosaic: none', 'sensor_shift_um: 3');
  expect(fault).toMatchObject({ key: 'camera.sensor_shift_um', advice: 'It belongs under mount.' });
  const [two] = changed('camera:', 'f_number: 3\ncamera:');
  expect(two).toMatchObject({ key: 'f_number', advice: 'It belongs under lens or mount.' });
});

test('a value that is long or has several lines is cut short', () => {
  const [fault] = changed('W131: 1.1', `W131: "${'long\\n'.repeat(100)}"`);
  expect(fault.found).toMatch(/^"long\\nlong.*…$/);
  expect(fault.found).toHaveLength(60);
});

describe('parts', () => {
  const rig = (lens: string, camera: string) =>
    folder.write('a.rig.yaml', `lens: ${lens}\ncamera: ${camera}\nmount: { f_number: 2 }\n`);

  test('a fault inside a part names its file and line; those of the rig come with it', () => {
    mkdirSync(folder.path('parts'));
    const lens = folder.write('parts/lens.yaml', LENS.replace('W131: 1.1', 'W131: x'));
    const camera = folder.write('camera.yaml', CAMERA.replace('0.9', '9'));
    const path = rig('parts/lens.yaml', 'camera.yaml');
    expect(
      faultsOf(() => loadRig(path)).map(({ file, line, column, key }) => [file, line, column, key]),
    ).toEqual([
      [lens, 6, 27, 'waves.W131'],
      [camera, 3, 14, 'fill_factor'],
      [path, 3, 20, 'mount.f_number'],
    ]);
  });

  test('a key that stands twice in a part', () => {
    const lens = folder.write('lens.yaml', `${LENS}name: again\n`);
    const path = folder.write('a.rig.yaml', RIG.replace(/lens:[\s\S]*camera:/, 'lens: lens.yaml\ncamera:'));
    expect(faultsOf(() => loadRig(path))).toMatchObject([
      { file: lens, line: 11, key: 'name', message: 'stands twice, first in line 1' },
    ]);
  });

  test('a part that is not there is told where it is named', () => {
    folder.write('camera.yaml', CAMERA);
    folder.write('lens.yaml', LENS);
    const path = rig('lens.yaml', 'camra.yaml');
    expect(faultsOf(() => loadRig(path))).toMatchObject([
      {
        file: path,
        line: 2,
        column: 9,
        key: 'camera',
        message: `'${folder.path('camra.yaml')}': there is no such file`,
        advice: `Did you mean '${folder.path('camera.yaml')}'?`,
      },
      { file: path, line: 3, key: 'mount.f_number' }, // the lens is there, so the stop is checked
    ]);
  });

  test.each([
    ['an empty part', '', /is empty$/, undefined],
    ['a part that is no YAML', 'a: [1', /^is not valid YAML/, 1],
    ['a part that is no mapping', '\n- 1', /^is not a mapping$/, 2],
  ])('%s', (_, content, message, line) => {
    const part = folder.write('lens.yaml', content);
    folder.write('camera.yaml', CAMERA);
    const path = rig('lens.yaml', 'camera.yaml');
    const [fault] = faultsOf(() => loadRig(path));
    expect(fault.message).toMatch(message);
    expect(fault).toMatchObject(
      line === undefined ? { file: path, line: 1, column: 7, key: 'lens' } : { file: part, line },
    );
  });

  test('a folder for a part', () => {
    mkdirSync(folder.path('parts'));
    folder.write('camera.yaml', CAMERA);
    const path = rig('parts', 'camera.yaml');
    expect(faultsOf(() => loadRig(path))).toMatchObject([
      { file: path, line: 1, message: `'${folder.path('parts')}': is a folder, not a file` },
    ]);
  });

  test('a name that is empty', () => {
    expect(faultsOf(() => parseRig('lens: ""\ncamera: " "'))).toMatchObject([
      { line: 1, column: 7, key: 'lens', message: 'no file is named' },
      { line: 2, column: 9, key: 'camera' },
    ]);
  });

  test('a rig cannot hold itself', () => {
    const path = folder.write('a.rig.yaml', 'lens: a.rig.yaml\ncamera: a.rig.yaml\n');
    expect(faultsOf(() => loadRig(path))).toMatchObject([
      { file: path, line: 1, message: 'is a rig, not a lens part' },
      { file: path, line: 1, message: 'is a rig, not a camera part' },
    ]);
  });
});

describe('a file of another kind', () => {
  test.each([
    ['a lens part, not a rig', LENS, loadRig, undefined],
    ['a camera part, not a rig', CAMERA, loadRig, undefined],
    ['a task, not a rig', TASK, loadRig, undefined],
    ['a prescription, not a rig', PRESCRIPTION, loadRig, 'A rig names it as lens: { prescription: FILE }.'],
    [
      'a prescription, not a lens part',
      PRESCRIPTION,
      loadLensPart,
      'Name it one key deeper: lens: { prescription: FILE }.',
    ],
    [
      'a rig, not a lens part',
      RIG,
      loadLensPart,
      'Give the lens a file of its own, or move it into the rig.',
    ],
    ['a lens part, not a camera part', LENS, loadCameraPart, undefined],
  ])('%s', (message, content, load, advice) => {
    const file = folder.write('a.yaml', content);
    expect(faultsOf(() => load(file))).toEqual([
      { file, line: 1, column: 1, message: `is ${message}`, advice },
    ]);
  });
});

describe('a lens given by its surfaces', () => {
  const rigWith = (keys: string) =>
    `lens:\n  prescription: triplet.lens.yaml\n${keys}camera:\n${CAMERA.replaceAll(/^(?=.)/gm, '  ')}`;

  test('leaves no room for coefficients', () => {
    folder.write('triplet.lens.yaml', PRESCRIPTION);
    const path = folder.write(
      'a.rig.yaml',
      rigWith('  waves: {}\n  distortion_percent: 1\n  colour: {}\n  waves_by_wavelength: {}\n'),
    );
    const faults = faultsOf(() => loadRig(path));
    expect(faults.map(({ key }) => key)).toEqual(
      expect.arrayContaining([
        'lens.waves',
        'lens.distortion_percent',
        'lens.colour',
        'lens.waves_by_wavelength',
      ]),
    );
    expect(faults[0]).toMatchObject({
      line: 3,
      column: 3,
      message: 'stands beside prescription, from which it is computed',
      advice: 'Delete one of the two.',
    });
  });

  test('has faults at the lines of its own file', () => {
    const prescription = folder.write(
      'triplet.lens.yaml',
      PRESCRIPTION.replace('radius_mm: -20', 'radius_mm: 0'),
    );
    const path = folder.write('a.rig.yaml', rigWith(''));
    expect(faultsOf(() => loadRig(path))).toMatchObject([
      { file: prescription, line: 7, key: 'surfaces[3].radius_mm', message: 'is 0', found: '0' },
    ]);
  });

  test('is told where it is named when its file is missing', () => {
    const path = folder.write('a.rig.yaml', rigWith(''));
    expect(faultsOf(() => loadRig(path))).toMatchObject([
      {
        file: path,
        line: 2,
        column: 17,
        key: 'lens.prescription',
        message: expect.stringContaining('there is no such file'),
      },
    ]);
  });

  test('may stand in the rig itself', () => {
    const inline = `lens:\n  prescription:\n${PRESCRIPTION.replace('f_number: 2.8', 'f_number: 0').replaceAll(/^(?=.)/gm, '    ')}`;
    expect(
      faultsOf(() => parseRig(`${inline}camera:\n${CAMERA.replaceAll(/^(?=.)/gm, '  ')}`)),
    ).toMatchObject([{ line: 14, key: 'lens.prescription.f_number', message: 'is too small' }]);
  });
});
