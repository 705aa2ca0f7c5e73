import { expect, test } from 'vitest';
import { formatFault } from '../../src/errors.js';
import { loadPrescription } from '../../src/files/load-prescription.js';
import { faultsOf, LENS, PRESCRIPTION, useFolder } from './packhouse.js';

const folder = useFolder();
const load = (text: string) => loadPrescription(folder.write('a.lens.yaml', text));

test('a prescription comes in', () => {
  expect(load(PRESCRIPTION)).toEqual({
    name: 'three-element lens, packing hall',
    wavelengthNm: 550,
    surfaces: [
      { radiusMm: 30.1, thicknessMm: 3.2, glass: { nd: 1.62, vd: 60.3 }, semiDiameterMm: 6 },
      { thicknessMm: 4, conic: -1, asphericMm: { A4: 1e-5 } },
      { stop: true, thicknessMm: 1 },
      { radiusMm: -20, thicknessMm: 1, glass: { code: 620603 } },
      { radiusMm: 22, thicknessMm: 4 },
      {
        radiusMm: 60,
        thicknessMm: 2,
        glass: { sellmeier: { B: [0.7, 0.4, 0.9], CUm2: [0.005, 0.013, 98] } },
      },
      { radiusMm: -25 },
    ],
    aperture: { fNumber: 2.8 },
    field: { imageHeightMm: 4.6 },
    scaleToFocalLengthMm: 12,
  });
});

test('the other ways to state the aperture, the field, the object and the glass', () => {
  const text = PRESCRIPTION.replace('f_number: 2.8', 'object_na: 0.1')
    .replace('full_field_mm: 4.6', 'object_height_mm: 20')
    .replace('object_distance_mm: infinity', 'object_distance_mm: 100')
    .replace('620603', "'620603'")
    .replace('{ nd: 1.62, vd: 60.3 }', '{ n: 1.5 }');
  expect(load(text)).toMatchObject({
    objectDistanceMm: 100,
    aperture: { objectNa: 0.1 },
    field: { objectHeightMm: 20 },
    surfaces: [{ glass: { n: 1.5 } }, {}, {}, { glass: { code: 620603 } }, {}, {}, {}],
  });
  const other = PRESCRIPTION.replace('f_number: 2.8', 'entrance_pupil_mm: 4').replace(
    'full_field_mm: 4.6',
    'half_field_deg: 20',
  );
  expect(load(other)).toMatchObject({ aperture: { entrancePupilMm: 4 }, field: { halfAngleDeg: 20 } });
});

test('a mirror; the d line is the wavelength where none is stated', () => {
  const text =
    'surfaces:\n  - { radius_mm: -200, mirror: true, stop: true }\nentrance_pupil_mm: 20\nhalf_field_deg: 1\n';
  expect(load(text)).toEqual({
    name: 'lens',
    wavelengthNm: 587.5618,
    surfaces: [{ radiusMm: -200, mirror: true, stop: true }],
    aperture: { entrancePupilMm: 20 },
    field: { halfAngleDeg: 1 },
  });
});

// [a part of the prescription, what stands there instead, the one fault that follows]
test.each([
  [
    'radius_mm: 30.1',
    'radius_mm: 0',
    '4:18: surfaces[0].radius_mm: is 0, found 0. Allowed: a number other than 0 (mm), or infinity.',
  ],
  [
    'radius_mm: 30.1',
    'radius_mm: flat',
    '4:18: surfaces[0].radius_mm: is none of the choices, found "flat". Allowed: a number other than 0 (mm), or infinity.',
  ],
  [
    'radius_mm: 30.1',
    'radius_mm: .inf',
    '4:18: surfaces[0].radius_mm: has the wrong form, found Infinity. Allowed: a number other than 0 (mm), or infinity.',
  ],
  [
    'radius_mm: 30.1',
    'radus_mm: 30.1',
    "4:7: surfaces[0].radus_mm: is no known key, found radus_mm. Allowed: radius_mm, thickness_mm, glass, mirror, stop, semi_diameter_mm, conic, aspheric_mm. Did you mean 'radius_mm'?",
  ],
  [
    'thickness_mm: 3.2, ',
    '',
    '4:5: surfaces[0].thickness_mm: is missing. Allowed: a number (mm); only the last surface may leave it out.',
  ],
  ['nd: 1.62, ', '', '4:43: surfaces[0].glass.nd: is missing beside vd.'],
  [', vd: 60.3', '', '4:43: surfaces[0].glass.vd: is missing beside nd.'],
  [
    'nd: 1.62',
    'nd: 0.9',
    '4:56: surfaces[0].glass.nd: is too small, found 0.9. Allowed: a number above 1 and up to 6.',
  ],
  [
    'nd: 1.62, vd: 60.3',
    'n: 1.5, sellmeier: { B: [1], C_um2: [0.01] }',
    '4:60: surfaces[0].glass.sellmeier: stands beside n, which says the same thing. Allowed: one of n, nd, sellmeier.',
  ],
  ['{ nd: 1.62, vd: 60.3 }', '{}', '4:43: surfaces[0].glass: lacks one of n, nd, sellmeier.'],
  [
    '{ nd: 1.62, vd: 60.3 }',
    'crown',
    '4:50: surfaces[0].glass: has the wrong form, found "crown". Allowed: a six-digit glass code, such as 517642.',
  ],
  [
    '{ nd: 1.62, vd: 60.3 }',
    '1.5',
    '4:50: surfaces[0].glass: has the wrong form, found 1.5. Allowed: a six-digit glass code, such as 517642, or a mapping with nd and vd, with n, or with sellmeier.',
  ],
  [
    '620603',
    '620',
    '7:47: surfaces[3].glass: is too small, found 620. Allowed: a six-digit glass code, such as 517642.',
  ],
  [
    '620603',
    "'620'",
    '7:47: surfaces[3].glass: has the wrong form, found "620". Allowed: a six-digit glass code, such as 517642.',
  ],
  [
    '620603',
    '620000',
    '7:47: surfaces[3].glass: surface 4: this V_d is not possible, found 0. Allowed: a number above 0.',
  ],
  [
    'C_um2: [0.005, 0.013, 98]',
    'C_um2: [0.005]',
    '9:88: surfaces[5].glass.sellmeier.C_um2: is not as long as B, found [0.005]. Allowed: 3 numbers.',
  ],
  [
    'semi_diameter_mm: 6',
    'semi_diameter_mm: -6',
    '4:92: surfaces[0].semi_diameter_mm: is too small, found -6. Allowed: a number above 0 and up to 1000000 (mm).',
  ],
  [
    'A4: 1.0e-5',
    'A5: 1.0e-5',
    '5:71: surfaces[1].aspheric_mm.A5: is no known key, found A5. Allowed: A4, A6, A8, A10, A12, A14, A16, A18, A20.',
  ],
  [
    '{ stop: true, thickness_mm: 1 }',
    '{ thickness_mm: 1 }',
    '3:1: surfaces: has no stop, found 7 surfaces. Write stop: true on the surface that limits the aperture, or give it an entry of its own.',
  ],
  [
    'radius_mm: -20',
    'radius_mm: -20, stop: true',
    '7:23: surfaces[3].stop: is a second stop beside surfaces[2]. Allowed: one stop.',
  ],
  [
    'stop: true',
    'stop: false',
    '6:13: surfaces[2].stop: is none of the choices, found false. Allowed: true, or leave the key out.',
  ],
  [
    'radius_mm: -20',
    'radius_mm: -20, mirror: true',
    '7:54: surfaces[3].glass: stands beside mirror: behind a mirror is what was before it.',
  ],
  [
    'radius_mm: -25',
    'radius_mm: -25, glass: 517642',
    '10:30: surfaces[6].glass: the space in front of the sensor is not air. For a sensor behind cemented glass add a flat surface of thickness_mm 0 at the end.',
  ],
  ['f_number: 2.8\n', '', '1:1: lacks one of f_number, entrance_pupil_mm, object_na.'],
  [
    'f_number: 2.8',
    'f_number: 2.8\nentrance_pupil_mm: 4',
    '13:1: entrance_pupil_mm: stands beside f_number, which says the same thing. Allowed: one of f_number, entrance_pupil_mm, object_na.',
  ],
  [
    'f_number: 2.8',
    'object_na: 0.1',
    '12:1: object_na: needs an object at a finite distance. State object_distance_mm, or another aperture or field.',
  ],
  [
    'full_field_mm: 4.6',
    'object_height_mm: 20',
    '13:1: object_height_mm: needs an object at a finite distance. State object_distance_mm, or another aperture or field.',
  ],
  [
    'full_field_mm: 4.6',
    'half_field_deg: 90',
    '13:17: half_field_deg: is too large, found 90. Allowed: a number above 0 and below 90 (deg).',
  ],
  [
    'object_distance_mm: infinity',
    'object_distance_mm: 0',
    '11:21: object_distance_mm: is 0, found 0. Allowed: a number other than 0 (mm), or infinity.',
  ],
  [
    'object_distance_mm: infinity',
    'object_distance_mm: far',
    '11:21: object_distance_mm: is none of the choices, found "far". Allowed: a number other than 0 (mm), or infinity.',
  ],
  [
    'scale_to_focal_length_mm: 12',
    'scale_to_focal_length_mm: 0',
    '14:27: scale_to_focal_length_mm: is too small, found 0. Allowed: a number above 0 and up to 1000000 (mm).',
  ],
])('%j as %j', (from, to, fault) => {
  expect(PRESCRIPTION).toContain(from);
  const text = PRESCRIPTION.replace(from, to);
  expect(faultsOf(() => load(text)).map(formatFault)).toEqual([`${folder.path('a.lens.yaml')}:${fault}`]);
});

test('no surfaces', () => {
  const text = PRESCRIPTION.replace(/surfaces:[\s\S]*object/, 'surfaces: []\nobject');
  expect(faultsOf(() => load(text))).toMatchObject([
    {
      line: 3,
      key: 'surfaces',
      message: 'has too few entries',
      allowed: 'a list of surfaces, light from the left',
    },
  ]);
});

test('a lens part in place of a prescription', () => {
  expect(faultsOf(() => load(LENS))).toMatchObject([
    { line: 1, message: 'is a lens part, not a prescription' },
  ]);
});
