import { describe, expect, it } from 'vitest';
import { parseRig } from '../../src/files/load-rig.js';
import { resultData, rigData, snakeCase } from '../../src/files/result-data.js';
import { dataText } from '../../src/files/write-data.js';
import type { Rig } from '../../src/optics/rig.js';

const RIG: Rig = {
  lens: {
    name: '12 mm, packing hall',
    focalLengthMm: 12,
    fNumber: 2.8,
    fullFieldMm: 4.6,
    wavelengthNm: 550,
    waves: { W040: 0.8, W131: 1.1, W222: 0.9, W220: 0.6, W311: 6, W020: 0.1, W111: 0.2 },
    axialUm: [
      [450, 12],
      [650, -5],
    ],
    lateralUm: [
      [450, 1.4],
      [650, -0.8],
    ],
    relativeIllumination: [
      [0, 1],
      [1, 0.7],
    ],
  },
  camera: {
    pixels: [2448, 2048],
    pixelPitchUm: 3.45,
    fillFactor: 0.9,
    bands: [
      { name: 'red', lines: [{ nm: 620, weight: 1 }] },
      {
        name: 'green',
        lines: [
          { nm: 520, weight: 0.25 },
          { nm: 550, weight: 0.75 },
        ],
      },
      { name: 'blue', lines: [{ nm: 460, weight: 1 }] },
    ],
    mosaic: 'rggb',
    sensor: {
      whiteE: 8000,
      fullWellE: 10000,
      darkNoiseE: 5,
      darkE: 1,
      prnuPercent: 0.7,
      dsnuE: 1.5,
      bitDepth: 12,
    },
  },
  mount: {
    fNumber: 4,
    sensorShiftUm: -3,
    sensorTiltDeg: [0.1, -0.2],
    objectScale: { objectPixelMm: 0.12 },
    axisPx: [1220, 1030.5],
  },
};

const PLAIN: Rig = {
  lens: { ...RIG.lens, focalLengthMm: undefined, axialUm: [], lateralUm: [], relativeIllumination: 'none' },
  camera: {
    ...RIG.camera,
    bands: [{ name: 'mono', lines: [{ nm: 550, weight: 1 }] }],
    mosaic: 'none',
    sensor: undefined,
  },
  mount: { ...RIG.mount, objectScale: { magnification: 0.02 } },
};

describe('rigData', () => {
  it.each([
    ['with everything', RIG],
    ['with the least', PLAIN],
    ['with half of its colour', { ...RIG, lens: { ...RIG.lens, lateralUm: [] } }],
  ])('says a rig %s so that it reads back as the same rig', (_, rig) => {
    const data = rigData(rig);
    expect(parseRig(data)).toEqual(rig);
    expect(parseRig(dataText('a.rig.json', data))).toEqual(rig);
    expect(parseRig(dataText('a.rig.yaml', rig))).toEqual(rig);
    expect(resultData(data)).toEqual(data); // names that are the file's already stay
  });

  it('leaves out what the rig does not have', () => {
    expect(Object.keys((rigData(PLAIN) as { lens: object }).lens)).not.toContain('colour');
    expect(JSON.stringify(rigData(PLAIN))).not.toContain('null');
  });
});

describe('snakeCase', () => {
  it.each([
    ['mtf50LpPerMm', 'mtf50_lp_per_mm'],
    ['fNumber', 'f_number'],
    ['azimuthDeg', 'azimuth_deg'],
    ['kernelPx', 'kernel_px'],
    ['W040', 'W040'],
    ['450', '450'],
    ['strehl', 'strehl'],
  ])('%s is %s', (key, name) => {
    expect(snakeCase(key)).toBe(name);
  });
});

describe('resultData', () => {
  it('renames the keys of a record at every depth, and keeps null but not undefined', () => {
    expect(
      resultData({
        foreglass: '1.2.3',
        rig: PLAIN,
        accuracy: { blendBound: 0.003, energyOutsideKernel: 0.004, cells: [14, 11], kernelPx: 64 },
        zones: [{ imageHeightMm: 1, place: null, note: undefined }],
        warnings: ['a warning keeps its wordsAsTheyAre'],
      }),
    ).toEqual({
      foreglass: '1.2.3',
      rig: rigData(PLAIN),
      accuracy: { blend_bound: 0.003, energy_outside_kernel: 0.004, cells: [14, 11], kernel_px: 64 },
      zones: [{ image_height_mm: 1, place: null }],
      warnings: ['a warning keeps its wordsAsTheyAre'],
    });
  });

  it('has no minus in front of nothing', () => {
    expect(resultData({ distortionPercent: -0, all: [-0] })).toEqual({ distortion_percent: 0, all: [0] });
  });

  it('leaves the name of a rig as it is', () => {
    expect(resultData({ rig: '12 mm, packing hall' })).toEqual({ rig: '12 mm, packing hall' });
  });
});

describe('dataText', () => {
  it('is JSON for .json, whatever the case, else YAML', () => {
    const data = { a: [1, 2], b: null };
    expect(dataText('x.JSON', data)).toBe('{\n  "a": [\n    1,\n    2\n  ],\n  "b": null\n}\n');
    expect(dataText('x.yaml', data)).toBe('a:\n  - 1\n  - 2\nb: null\n');
    expect(dataText('x', data)).toBe(dataText('x.yaml', data));
  });
});
