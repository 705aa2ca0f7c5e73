import { mkdirSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { parse, stringify } from 'yaml';
import { formatFault } from '../../src/errors.js';
import { loadCameraPart, loadLensPart, loadRig, loadRigFile, parseRig } from '../../src/files/load-rig.js';
import { resultData } from '../../src/files/result-data.js';
import { distortionPercent } from '../../src/optics/distortion.js';
import type { Rig } from '../../src/optics/rig.js';
import { CAMERA, faultsOf, LENS, MOUNT, PRESCRIPTION, RIG, useFolder } from './packhouse.js';

const folder = useFolder();

const EXPECTED: Rig = {
  lens: {
    name: '12 mm, packing hall',
    focalLengthMm: 12,
    fNumber: 2.8,
    fullFieldMm: 4.6,
    wavelengthNm: 550,
    waves: { W040: 0.8, W131: 1.1, W222: 0.9, W220: 0.6, W311: 6, W020: 0, W111: 0 },
    axialUm: [
      [450, 12],
      [650, -5],
    ],
    lateralUm: [
      [450, 1.4],
      [650, -0.8],
    ],
    relativeIllumination: 'cos4',
  },
  camera: {
    pixels: [2448, 2048],
    pixelPitchUm: 3.45,
    fillFactor: 0.9,
    bands: [{ name: 'mono', lines: [{ nm: 550, weight: 1 }] }],
    mosaic: 'none',
    sensor: {
      whiteE: 8000,
      fullWellE: 10000,
      darkNoiseE: 5,
      darkE: 0,
      prnuPercent: 0.7,
      dsnuE: 1.5,
      bitDepth: 10,
    },
  },
  mount: {
    fNumber: 4,
    sensorShiftUm: 3,
    sensorTiltDeg: [0.1, -0.2],
    objectScale: { objectPixelMm: 0.12 },
    axisPx: [1200, 1000.5],
  },
};

const SHORT = {
  lens: { f_number: 2.8, full_field_mm: 4.6, wavelength_nm: 550, waves: {}, relative_illumination: 'none' },
  camera: { pixels: [100, 60], pixel_pitch_um: 3.45, bands_nm: { mono: [550] } },
};

describe('a rig comes in', () => {
  test('as a file', () => {
    expect(loadRig(folder.write('a.rig.yaml', RIG))).toEqual(EXPECTED);
  });

  test('as JSON', () => {
    expect(loadRig(folder.write('a.rig.json', JSON.stringify(parse(RIG))))).toEqual(EXPECTED);
  });

  test('as a text and as an object', () => {
    expect(parseRig(RIG)).toEqual(EXPECTED);
    expect(parseRig(parse(RIG))).toEqual(EXPECTED);
  });

  test('with its parts in files of their own, each named relative to the file that names it', () => {
    mkdirSync(folder.path('parts'));
    folder.write('parts/lens.yaml', LENS);
    folder.write('parts/camera.yaml', CAMERA);
    const mount = parse(MOUNT);
    const path = folder.write(
      'a.rig.yaml',
      stringify({ lens: 'parts/lens.yaml', camera: 'parts/camera.yaml', mount }),
    );
    expect(loadRig(path)).toEqual(EXPECTED);
    expect(
      parseRig({ lens: 'lens.yaml', camera: 'camera.yaml', mount }, { folder: folder.path('parts') }),
    ).toEqual(EXPECTED);
    const absolute = {
      lens: folder.path('parts/lens.yaml'),
      camera: folder.path('parts/camera.yaml'),
      mount,
    };
    expect(parseRig(absolute)).toEqual(EXPECTED);
  });

  test('and its parts alone', () => {
    expect(loadLensPart(folder.write('lens.yaml', LENS))).toEqual(EXPECTED.lens);
    expect(loadCameraPart(folder.write('camera.yaml', CAMERA))).toEqual(EXPECTED.camera);
  });
});

describe('what is left out', () => {
  test('is filled in', () => {
    const rig = parseRig(SHORT);
    expect(rig.lens).toEqual({
      name: 'lens',
      fNumber: 2.8,
      fullFieldMm: 4.6,
      wavelengthNm: 550,
      waves: { W040: 0, W131: 0, W222: 0, W220: 0, W311: 0, W020: 0, W111: 0 },
      axialUm: [],
      lateralUm: [],
      relativeIllumination: 'none',
    });
    expect(rig.camera).toMatchObject({ fillFactor: 1, mosaic: 'none' });
    expect(rig.camera).not.toHaveProperty('sensor');
    expect(rig.mount).toEqual({
      fNumber: 2.8,
      sensorShiftUm: 0,
      sensorTiltDeg: [0, 0],
      axisPx: [49.5, 29.5],
    });
  });

  test('cos4 is the law of illumination where none is stated', () => {
    const { relative_illumination, ...lens } = SHORT.lens;
    expect(relative_illumination).toBe('none');
    expect(parseRig({ ...SHORT, lens: { ...lens, focal_length_mm: 12 } }).lens.relativeIllumination).toBe(
      'cos4',
    );
  });

  test('of a sensor: no noise, 12 bits', () => {
    const camera = { ...SHORT.camera, sensor: { white_e: 8000, full_well_e: 10000 } };
    expect(parseRig({ ...SHORT, camera }).camera.sensor).toEqual({
      whiteE: 8000,
      fullWellE: 10000,
      darkNoiseE: 0,
      darkE: 0,
      prnuPercent: 0,
      dsnuE: 0,
      bitDepth: 12,
    });
  });
});

describe('distortion in percent', () => {
  test.each([
    ['beside the coefficients', { waves: {}, distortion_percent: -2.1 }],
    ['among them', { waves: { distortion_percent: -2.1 } }],
  ])('%s gives W311', (_, keys) => {
    const { lens } = parseRig({ ...SHORT, lens: { ...SHORT.lens, ...keys } });
    expect(lens.waves.W311).toBeGreaterThan(0); // barrel
    // the two formulas are inverses of each other: rounding only
    expect(distortionPercent(lens, 1)).toBeCloseTo(-2.1, 12);
  });

  test('a worked figure', () => {
    // D = -2 N lambda W311 / h'max: N 4, 0.55 um, h'max 8 mm, W311 10 gives -0.55 %
    // (third-order formula, W. T. Welford, Aberrations of Optical Systems, cited from memory)
    const lens = { ...SHORT.lens, f_number: 4, full_field_mm: 8, waves: {}, distortion_percent: -0.55 };
    expect(parseRig({ ...SHORT, lens }).lens.waves.W311).toBeCloseTo(10, 12);
  });
});

describe('bands', () => {
  const bands = (bands_nm: object, mosaic = 'none') =>
    parseRig({ ...SHORT, camera: { ...SHORT.camera, bands_nm, mosaic } }).camera.bands;

  test('weights are normalised, a bare wavelength counts 1', () => {
    expect(bands({ mono: [500, [550, 2], [600, 1]] })).toEqual([
      {
        name: 'mono',
        lines: [
          { nm: 500, weight: 0.25 },
          { nm: 550, weight: 0.5 },
          { nm: 600, weight: 0.25 },
        ],
      },
    ]);
  });

  test('come as red, green, blue, however the file orders them', () => {
    expect(bands({ blue: [460], red: [610], green: [540] }, 'rggb').map(({ name }) => name)).toEqual([
      'red',
      'green',
      'blue',
    ]);
  });

  test('weights sum to 1 but for rounding', () => {
    const line = fc.tuple(
      fc.integer({ min: 100, max: 20000 }),
      fc.double({ min: 1e-6, max: 1e6, noNaN: true }),
    );
    const lines = fc.uniqueArray(line, { selector: ([nm]) => nm, minLength: 1, maxLength: 20 });
    fc.assert(
      fc.property(lines, (mono) => {
        const sum = bands({ mono })[0].lines.reduce((total, { weight }) => total + weight, 0);
        expect(Math.abs(sum - 1)).toBeLessThanOrEqual(20 * Number.EPSILON); // one rounding a line
      }),
    );
  });
});

test.each([
  [{ object_pixel_mm: 0.12 }, { objectPixelMm: 0.12 }],
  [{ magnification: 0.03 }, { magnification: 0.03 }],
  [{ object_distance_mm: 800 }, { objectDistanceMm: 800 }],
])('scale on the object: %j', (mount, objectScale) => {
  const lens = { ...SHORT.lens, focal_length_mm: 12 };
  expect(parseRig({ ...SHORT, lens, mount }).mount.objectScale).toEqual(objectScale);
});

describe('options of the command line', () => {
  test('go before what the file says', () => {
    const path = folder.write('a.rig.yaml', RIG);
    expect(loadRig(path, { fNumber: 5.6, sensorShiftUm: -12 }).mount).toMatchObject({
      fNumber: 5.6,
      sensorShiftUm: -12,
    });
    expect(loadRig(path, { fNumber: 5.6 }).mount).toEqual({ ...EXPECTED.mount, fNumber: 5.6 });
    expect(parseRig(SHORT, { sensorShiftUm: 4 }).mount.sensorShiftUm).toBe(4);
  });

  test('may mend what the file has wrong', () => {
    expect(parseRig({ ...SHORT, mount: { f_number: 1 } }, { fNumber: 4 }).mount.fNumber).toBe(4);
  });

  test('are refused by their own names', () => {
    const path = folder.write('a.rig.yaml', RIG);
    expect(faultsOf(() => loadRig(path, { fNumber: 2, sensorShiftUm: Number.NaN }))).toEqual([
      {
        key: '--sensor-shift',
        message: 'is not a finite number',
        found: 'NaN',
        allowed: 'a number from -100000 to 100000 (um)',
      },
      {
        key: '--f-number',
        message: "is below the lens's f-number, so the coefficients do not hold",
        found: '2',
        allowed: '2.8 (lens.f_number) or more',
      },
    ]);
    expect(faultsOf(() => loadRig(path, { fNumber: 0 })).map(formatFault)).toEqual([
      '--f-number: is too small, found 0. Allowed: a number above 0 and up to 10000.',
    ]);
  });
});

describe('there and back', () => {
  const double = (min: number, max: number) => fc.double({ min, max, noNaN: true }).map((x) => x + 0);
  const lines = fc.uniqueArray(fc.integer({ min: 100, max: 20000 }), { minLength: 1, maxLength: 4 });
  const rigs = fc.record({
    lens: fc.record({
      name: fc.string({ minLength: 1, maxLength: 30 }),
      focal_length_mm: double(0.1, 1000),
      f_number: double(0.5, 30),
      full_field_mm: double(0.1, 100),
      wavelength_nm: fc.constant(550),
      waves: fc.dictionary(
        fc.constantFrom('W040', 'W131', 'W222', 'W220', 'W311', 'W020', 'W111'),
        double(-50, 50),
      ),
      colour: fc.record({
        axial_um: fc.dictionary(fc.integer({ min: 600, max: 900 }).map(String), double(-50, 50)),
      }),
      waves_by_wavelength: fc.dictionary(
        fc.integer({ min: 400, max: 900 }).map(String),
        fc.record({ W040: double(-5, 5), W311: double(-5, 5) }),
      ),
      relative_illumination: fc.constantFrom('cos4', 'none', [
        [0, 1],
        [0.5, 0.9],
        [1, 0.4],
      ]),
    }),
    camera: fc.record({
      pixels: fc.tuple(fc.integer({ min: 1, max: 65535 }), fc.integer({ min: 1, max: 65535 })),
      pixel_pitch_um: double(0.5, 20),
      fill_factor: double(0.01, 1),
      bands_nm: fc.oneof(fc.record({ mono: lines }), fc.record({ red: lines, green: lines, blue: lines })),
    }),
    mount: fc.record({
      sensor_shift_um: double(-100, 100),
      sensor_tilt_deg: fc.tuple(double(-44, 44), double(-44, 44)),
      magnification: double(0.001, 10),
    }),
  });

  test('an object, its YAML and its JSON are the same rig', () => {
    fc.assert(
      fc.property(rigs, (file) => {
        const rig = parseRig(file);
        expect(parseRig(stringify(file))).toEqual(rig);
        expect(parseRig(JSON.stringify(file))).toEqual(rig);
      }),
    );
  });

  test('a rig as the records hold it reads back as the same rig, to the last bit', () => {
    fc.assert(
      fc.property(rigs, (file) => {
        const rig = parseRig(file);
        expect(parseRig(JSON.stringify(resultData(rig)))).toEqual(rig);
      }),
    );
    expect(parseRig(stringify(resultData(EXPECTED)))).toEqual(EXPECTED);
  });
});

describe('loadRigFile', () => {
  test('gives the keys of the file, its parts in place', () => {
    folder.write('lens.yaml', LENS);
    const path = folder.write('a.rig.yaml', stringify({ lens: 'lens.yaml', camera: parse(CAMERA) }));
    const file = loadRigFile(path, { fNumber: 8 });
    expect(file.lens).toMatchObject({ f_number: 2.8, waves: { W131: 1.1, W020: 0 } });
    expect(file.mount).toEqual({ f_number: 8, sensor_shift_um: 0, sensor_tilt_deg: [0, 0] });
    expect(parseRig(file)).toEqual(loadRig(path, { fNumber: 8 }));
  });

  test('gives the surfaces of a lens, too', () => {
    folder.write('triplet.lens.yaml', PRESCRIPTION);
    const path = folder.write(
      'a.rig.yaml',
      stringify({ ...SHORT, lens: { prescription: 'triplet.lens.yaml' } }),
    );
    expect(loadRigFile(path).lens.prescription).toMatchObject({
      name: 'three-element lens, packing hall',
      f_number: 2.8,
    });
  });
});
