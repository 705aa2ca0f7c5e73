import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.js';
import { loadRecord } from '../../src/files/load-record.js';
import { loadTruth } from '../../src/files/load-truth.js';
import { encodePicture } from '../../src/files/pictures/encode.js';
import { pngEncoding } from '../../src/files/pictures/index.js';

const folder = mkdtempSync(join(tmpdir(), 'truth-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function file(name: string, content: string | object | Uint8Array): string {
  const path = join(folder, name);
  const isText = typeof content === 'string' || content instanceof Uint8Array;
  writeFileSync(path, isText ? content : JSON.stringify(content));
  return path;
}

const TRUTH = {
  foreglass: '0.1.0',
  chart: 'dots',
  rig: 'a lens',
  pixels: [100, 80],
  pixel_pitch_um: 5,
  axis_px: [49.5, 39.5],
  full_field_mm: 2,
  oversample: 4,
  levels: { white: 0.8, dark: 0.04 },
  dots: [{ x: 10, y: 20, field: 0.11, azimuth_deg: 206, radius_px: 5 }],
};

function faultsOf(run: () => unknown): string[] {
  try {
    run();
  } catch (error) {
    if (error instanceof InputError) return error.message.split('\n');
    throw error;
  }
  return [];
}

describe('loadTruth', () => {
  it('reads JSON and YAML, in the names of the code', () => {
    const truth = {
      foreglass: '0.1.0',
      chart: 'dots',
      rig: 'a lens',
      pixels: [100, 80],
      pixelPitchUm: 5,
      axisPx: [49.5, 39.5],
      fullFieldMm: 2,
      oversample: 4,
      levels: { white: 0.8, dark: 0.04 },
      dots: [{ x: 10, y: 20, field: 0.11, azimuthDeg: 206, radiusPx: 5 }],
    };
    expect(loadTruth(file('a.json', TRUTH))).toEqual(truth);
    const yaml = Object.entries(TRUTH).map(([key, value]) => `${key}: ${JSON.stringify(value)}`);
    expect(loadTruth(file('a.yaml', yaml.join('\n')))).toEqual(truth);
  });

  it('tells all faults, with their keys, and in YAML with their lines', () => {
    const wrong = { ...TRUTH, oversample: 0, dots: [{ ...TRUTH.dots[0], radius_px: -1, colour: 'red' }] };
    const [oversample, colour, radius, ...rest] = faultsOf(() => loadTruth(file('wrong.json', wrong))).sort(
      (a, b) => b.localeCompare(a),
    );
    expect(rest).toEqual([]);
    expect(oversample).toMatch(/wrong\.json: oversample: .*found 0\. Allowed: a whole number from 1 to 16/);
    expect(`${colour}${radius}`).toMatch(/dots\[0\]\.colour/);
    expect(`${colour}${radius}`).toMatch(/dots\[0\]\.radius_px: .*found -1\. Allowed: a number above 0/);
    expect(faultsOf(() => loadTruth(file('wrong.yaml', 'chart: dots\noversample: [')))[0]).toMatch(
      /wrong\.yaml:\d+:\d+: /,
    );
  });

  it('refuses what is no truth', () => {
    expect(faultsOf(() => loadTruth(file('rig.json', { lens: {} })))).toEqual([
      expect.stringMatching(/rig\.json: is not the truth file of a chart\. foreglass chart writes it/),
    ]);
  });
});

describe('loadRecord', () => {
  const RIG = {
    lens: {
      name: 'a lens',
      focal_length_mm: 12,
      f_number: 4,
      full_field_mm: 2,
      wavelength_nm: 550,
      waves: { W040: 0.2 },
    },
    camera: { pixels: [100, 80], pixel_pitch_um: 5, bands_nm: { mono: [[550, 1]] } },
  };

  it('takes rig, bands, pictures and levels', () => {
    const record = {
      rig: RIG,
      image: { width: 100, height: 80, bands: ['mono'] },
      files: { out: { name: 'a.png', encoding: 'srgb' }, raw: { name: 'raw.png' } },
      raw_levels: { black_level: 64, white_level: 4095, scene_white: 3200, gain_dn_per_e: 0.4 },
      seconds: { total: 1 },
    };
    expect(loadRecord(file('record.json', record))).toMatchObject({
      rig: { lens: { name: 'a lens' }, camera: { pixels: [100, 80] } },
      bands: ['mono'],
      mosaic: 'none',
      files: { out: { name: 'a.png', encoding: 'srgb' }, raw: 'raw.png' },
      levels: { blackLevel: 64, whiteLevel: 4095, sceneWhite: 3200 },
    });
    const { files, levels } = loadRecord(file('plain.json', { rig: RIG, image: { bands: ['mono'] } }));
    expect({ files, levels }).toEqual({ files: {}, levels: undefined });
  });

  it('refuses what is no record, and a record with faults', () => {
    expect(faultsOf(() => loadRecord(file('no.json', TRUTH)))[0]).toMatch(
      /no\.json: is not the record of a picture/,
    );
    const wrong = {
      rig: RIG,
      image: { bands: ['mono'] },
      files: { out: { name: 'a.png', encoding: 'gamma' } },
    };
    expect(faultsOf(() => loadRecord(file('wrong.json', wrong)))[0]).toMatch(
      /files\.out\.encoding: .*found "gamma"\. Allowed: srgb, linear/,
    );
  });
});

describe('pngEncoding', () => {
  const picture = { width: 4, height: 3, planes: [new Float32Array(12).fill(0.5)] };

  it('reads what the tags say', async () => {
    const encoded = (options: object) => encodePicture(picture, 'png', options);
    expect(await pngEncoding(file('linear.png', await encoded({ linear: true })))).toBe('linear');
    expect(await pngEncoding(file('srgb.png', await encoded({})))).toBe('srgb');
    expect(await pngEncoding(file('a.tif', await encodePicture(picture, 'tiff')))).toBeUndefined();
    const plain = (await encoded({ linear: true })).toString('latin1');
    const at = plain.indexOf('gAMA') - 4;
    expect(
      await pngEncoding(
        file('untagged.png', Buffer.from(plain.slice(0, at) + plain.slice(at + 16), 'latin1')),
      ),
    ).toBeUndefined();
    const gamma = Buffer.from(plain, 'latin1');
    gamma.writeUInt32BE(45_455, at + 8); // 1 / 2.2
    expect(await pngEncoding(file('gamma.png', gamma))).toBeUndefined();
    expect(await pngEncoding(file('short.png', gamma.subarray(0, 20)))).toBeUndefined();
  });
});
