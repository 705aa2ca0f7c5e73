/** Rigs whose lens is given by its surfaces. */
import { describe, expect, test } from 'vitest';
import { loadPrescription } from '../../src/files/load-prescription.js';
import { loadLensPart, loadRig, parseRig } from '../../src/files/load-rig.js';
import { resultData } from '../../src/files/result-data.js';
import { toLens } from '../../src/prescription/derive.js';
import { HALL_LENS, hallLensWith, STEEP_LENS } from '../prescription/hall-lens.js';
import { faultsOf, useFolder } from './packhouse.js';

const folder = useFolder();
const CAMERA = `camera:
  pixels: [640, 480]
  pixel_pitch_um: 3.45
  bands_nm: { mono: [620, 590, 450] }
`;
const NM = [450, 590, 620];
const rigWith = (lensKeys: string, mount = '', prescription = hallLensWith()) => {
  folder.write('hall.lens.yaml', prescription);
  return folder.write('a.rig.yaml', `lens:\n  prescription: hall.lens.yaml\n${lensKeys}${CAMERA}${mount}`);
};

describe('a rig that names the surfaces of its lens', () => {
  const hall = loadPrescription(HALL_LENS);

  test('has the lens traced at all its wavelengths', () => {
    const { lens, mount } = loadRig(rigWith(''));
    expect(lens).toEqual(toLens(hall, NM));
    expect(lens.wavesByWavelength?.map(({ nm }) => nm)).toEqual([450, 550, 590, 620]);
    expect(mount.fNumber).toBe(lens.fNumber);
    expect(loadLensPart(folder.write('part.yaml', `prescription: ${HALL_LENS}\n`), NM)).toEqual(lens);
  });

  test('at any stop: the light is that of the stop in use, the coefficients those of the lens', () => {
    // a front rim that cuts oblique beams
    const cut = hallLensWith(['semi_diameter_mm: 2.2', 'semi_diameter_mm: 1.8']);
    const corner = ({ lens }: ReturnType<typeof loadRig>) =>
      (lens.relativeIllumination as [number, number][]).at(-1)![1];
    const open = loadRig(rigWith('', '', cut));
    const stopped = loadRig(rigWith('', 'mount: { f_number: 11 }\n', cut));
    expect(stopped.mount.fNumber).toBe(11);
    expect(stopped.lens.waves).toEqual(open.lens.waves);
    expect(corner(stopped)).toBeGreaterThan(1.05 * corner(open));
    const overridden = loadRig(rigWith('', '', cut), { fNumber: 11 });
    expect(overridden).toEqual(stopped);
  });

  test('states what goes before the file: name, wavelength, aperture, field, focal length, light', () => {
    const keys =
      '  name: x\n  wavelength_nm: 600\n  f_number: 5.6\n  full_field_mm: 3\n  focal_length_mm: 10\n  relative_illumination: cos4\n';
    const { lens } = loadRig(rigWith(keys));
    const { warnings, ...expected } = toLens(
      {
        ...hall,
        name: 'x',
        wavelengthNm: 600,
        aperture: { fNumber: 5.6 },
        field: { imageHeightMm: 3 },
        scaleToFocalLengthMm: 10,
      },
      NM,
      { relativeIllumination: 'cos4' },
    );
    expect(lens).toEqual({ ...expected, warnings });
    expect(warnings).toEqual([]); // no exact ray was traced
    const table = [
      [0, 1],
      [1, 0.7],
    ];
    const stated = loadRig(rigWith(`  relative_illumination: ${JSON.stringify(table)}\n`));
    expect(stated.lens.relativeIllumination).toEqual(table);
  });

  test('is written as a rig that reads back the same, its warnings left out', () => {
    const rig = loadRig(rigWith('', 'mount: { f_number: 8 }\n'));
    const { warnings, ...lens } = rig.lens;
    expect(warnings?.length).toBeGreaterThan(0);
    expect(parseRig(JSON.stringify(resultData(rig)))).toEqual({ ...rig, lens });
  });
});

describe('refusals', () => {
  test('a ray that misses a surface: file and line of the surface', () => {
    expect(faultsOf(() => loadRig(rigWith('', '', STEEP_LENS)))).toEqual([
      {
        file: folder.path('hall.lens.yaml'),
        line: 3,
        column: 5,
        key: 'surfaces[1]',
        message: expect.stringMatching(/^surface 2: the ray of field .* misses it$/),
        advice: expect.stringMatching(/semi_diameter_mm/),
      },
    ]);
    // who states the light has no exact ray traced
    expect(
      loadRig(rigWith('  relative_illumination: none\n', '', STEEP_LENS)).lens.relativeIllumination,
    ).toBe('none');
  });

  test('a prescription within the rig: lines of the rig', () => {
    const inner = hallLensWith(['radius_mm: 3.83', 'radius_mm: -3.83']).replaceAll(/^(?=.)/gm, '    ');
    const path = folder.write('b.rig.yaml', `lens:\n  prescription:\n${inner}${CAMERA}`);
    expect(faultsOf(() => loadRig(path))).toMatchObject(
      [
        { file: path, key: 'lens.prescription.scale_to_focal_length_mm', message: /positive focal length/ },
      ].map((fault) => ({ ...fault, message: expect.stringMatching(fault.message) })),
    );
  });

  test("a stop wider than the lens's", () => {
    expect(faultsOf(() => loadRig(rigWith('', 'mount: { f_number: 2.8 }\n')))).toMatchObject([
      { key: 'mount.f_number', message: expect.stringMatching(/below the lens's f-number/), found: '2.8' },
    ]);
    expect(faultsOf(() => loadRig(rigWith(''), { fNumber: 2.8 }))).toMatchObject([{ key: '--f-number' }]);
  });
});
