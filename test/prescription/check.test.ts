import { describe, expect, test } from 'vitest';
import { InputError } from '../../src/errors.js';
import { checkPrescription } from '../../src/prescription/check.js';
import { atWavelength, lensModel } from '../../src/prescription/lens-model.js';
import type { Prescription, Surface } from '../../src/prescription/prescription.js';
import { doublet, packhouseLens, singlet, sixSurfaceLens } from './lenses.js';

/** The faults of a prescription: their keys and whole text. */
function faults(prescription: Prescription, check: (p: Prescription) => void = checkPrescription) {
  try {
    check(prescription);
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return { keys: error.faults.map(({ key }) => key), text: error.message };
  }
  return { keys: [], text: '' };
}

/** The singlet with one surface changed. */
function withSurface(i: number, change: Partial<Surface>): Prescription {
  const lens = singlet();
  return {
    ...lens,
    surfaces: lens.surfaces.map((surface, at) => (at === i ? { ...surface, ...change } : surface)),
  };
}

test('good prescriptions pass', () => {
  for (const lens of [singlet(), doublet(), sixSurfaceLens(), packhouseLens()])
    expect(faults(lens).keys).toEqual([]);
});

describe('surfaces', () => {
  test.each<[string, Prescription, string, RegExp]>([
    ['none', singlet({ surfaces: [] }), 'surfaces', /no surface/],
    ['no stop', withSurface(0, { stop: undefined }), 'surfaces', /no surface is the stop/],
    [
      'two stops',
      withSurface(2, { stop: true }),
      'surfaces',
      /more than one surface is the stop, found surfaces 1, 3/,
    ],
    ['radius 0', withSurface(1, { radiusMm: 0 }), 'surfaces[1].radius_mm', /surface 2: this radius.*found 0/],
    ['radius NaN', withSurface(1, { radiusMm: Number.NaN }), 'surfaces[1].radius_mm', /found NaN/],
    ['conic', withSurface(1, { conic: Number.POSITIVE_INFINITY }), 'surfaces[1].conic', /found Infinity/],
    ['no thickness', withSurface(1, { thicknessMm: undefined }), 'surfaces[1].thickness_mm', /missing/],
    ['thickness', withSurface(1, { thicknessMm: Number.NaN }), 'surfaces[1].thickness_mm', /found NaN/],
    ['semi-diameter', withSurface(1, { semiDiameterMm: -1 }), 'surfaces[1].semi_diameter_mm', /found -1/],
    [
      'odd term',
      withSurface(1, { asphericMm: { A5: 1 } as object }),
      'surfaces[1].aspheric_mm.A5',
      /Allowed: A4, A6/,
    ],
    [
      'term NaN',
      withSurface(1, { asphericMm: { A4: Number.NaN } }),
      'surfaces[1].aspheric_mm.A4',
      /found NaN/,
    ],
    ['mirror with glass', withSurface(1, { mirror: true }), 'surfaces[1].glass', /mirror has no glass/],
    [
      'glass at the sensor',
      withSurface(2, { glass: { n: 1.5 } }),
      'surfaces[2].glass',
      /not air.*thickness_mm 0/,
    ],
    ['code', withSurface(1, { glass: { code: 5176 } }), 'surfaces[1].glass', /found 5176.*six digits/],
    ['V_d', withSurface(1, { glass: { nd: 1.5, vd: 0 } }), 'surfaces[1].glass', /V_d.*found 0/],
    ['V_d of the code', withSurface(1, { glass: { code: 517000 } }), 'surfaces[1].glass', /V_d.*found 0/],
    [
      'Sellmeier',
      withSurface(1, { glass: { sellmeier: { B: [1, 0.2], CUm2: [0.01] } } }),
      'surfaces[1].glass.sellmeier',
      /found 2 and 1/,
    ],
  ])('%s', (_, lens, key, text) => {
    const found = faults(lens);
    expect(found.keys).toEqual([key]);
    expect(found.text).toMatch(text);
  });
});

describe('conjugate, aperture, field', () => {
  test.each<[string, Partial<Prescription>, string, RegExp]>([
    ['wavelength', { wavelengthNm: 0 }, 'wavelength_nm', /found 0/],
    ['scale', { scaleToFocalLengthMm: -5 }, 'scale_to_focal_length_mm', /found -5/],
    ['object at the lens', { objectDistanceMm: 0 }, 'object_distance_mm', /found 0/],
    ['f-number', { aperture: { fNumber: 0 } }, 'f_number', /found 0.*above 0/],
    ['pupil', { aperture: { entrancePupilMm: Number.NaN } }, 'entrance_pupil_mm', /found NaN/],
    ['NA', { aperture: { objectNa: 1 }, objectDistanceMm: 100 }, 'object_na', /found 1.*below 1/],
    [
      'NA of a distant object',
      { aperture: { objectNa: 0.1 } },
      'object_na',
      /infinity has no numerical aperture/,
    ],
    ['image height', { field: { imageHeightMm: -1 } }, 'full_field_mm', /found -1/],
    ['angle', { field: { halfAngleDeg: 90 } }, 'half_field_deg', /found 90.*below 90/],
    ['object height', { field: { objectHeightMm: 0 }, objectDistanceMm: 100 }, 'object_height_mm', /found 0/],
    [
      'height of a distant object',
      { field: { objectHeightMm: 5 } },
      'object_height_mm',
      /infinity has no height/,
    ],
  ])('%s', (_, overrides, key, text) => {
    const found = faults(singlet(overrides));
    expect(found.keys).toEqual([key]);
    expect(found.text).toMatch(text);
  });

  test('all faults come at once', () => {
    const lens = withSurface(1, { radiusMm: 0, semiDiameterMm: 0 });
    expect(faults({ ...lens, wavelengthNm: -1, aperture: { fNumber: -1 } }).keys).toEqual([
      'wavelength_nm',
      'surfaces[1].radius_mm',
      'surfaces[1].semi_diameter_mm',
      'f_number',
    ]);
  });
});

describe('faults that only tracing finds', () => {
  test.each<[string, Prescription, string, RegExp]>([
    [
      'index below 1',
      withSurface(1, { glass: { n: 0.5 } }),
      'surfaces[1].glass',
      /surface 2: the glass has no usable index at 550 nm, found 0.5/,
    ],
    [
      'diverging lens',
      singlet({
        surfaces: [{ stop: true, radiusMm: -40, thicknessMm: 2, glass: { n: 1.5 } }, {}],
        scaleToFocalLengthMm: undefined,
      }),
      'surfaces',
      /no real image.*found a virtual image/,
    ],
    [
      'no power',
      singlet({
        surfaces: [{ stop: true, thicknessMm: 2, glass: { n: 1.5 } }, {}],
        scaleToFocalLengthMm: undefined,
      }),
      'surfaces',
      /no real image.*found no image/,
    ],
    [
      'diverging lens to scale',
      singlet({ surfaces: [{ stop: true, radiusMm: -40, thicknessMm: 2, glass: { n: 1.5 } }, {}] }),
      'scale_to_focal_length_mm',
      /found a focal length of -80/,
    ],
    [
      'sensor out of focus',
      withSurface(2, { thicknessMm: 30 }),
      'surfaces',
      /far out of focus.*Leave the last/,
    ],
    [
      'stop at an image',
      singlet({
        surfaces: [
          { radiusMm: 20, thicknessMm: 60, glass: { n: 1.5 } },
          { stop: true, thicknessMm: 20 },
          { radiusMm: 10, thicknessMm: 2, glass: { n: 1.6 } },
          { radiusMm: -20 },
        ],
        scaleToFocalLengthMm: undefined,
      }),
      'surfaces[1]',
      /surface 2: the stop lies at the object or at an image/,
    ],
  ])('%s', (_, lens, key, text) => {
    const found = faults(lens, lensModel);
    expect(found.keys).toEqual([key]);
    expect(found.text).toMatch(text);
  });

  test('a glass without an index at another wavelength', () => {
    const lens = withSurface(1, { glass: { sellmeier: { B: [1.1], CUm2: [0.04] } } });
    expect(faults(lens, (p) => atWavelength(lensModel(p), 195)).text).toMatch(/surface 2: .* at 195 nm/);
  });
});
