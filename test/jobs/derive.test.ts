import { describe, expect, it, test } from 'vitest';
import { InputError } from '../../src/errors.js';
import { lensPartText } from '../../src/files/lens-part.js';
import { loadPrescription } from '../../src/files/load-prescription.js';
import { loadRig } from '../../src/files/load-rig.js';
import { jsonText } from '../../src/files/write-data.js';
import { defaultWavelengths, derive } from '../../src/jobs/derive.js';
import { render } from '../../src/jobs/render.js';
import { zones } from '../../src/jobs/zones.js';
import { deriveLens } from '../../src/prescription/derive.js';
import type { Prescription } from '../../src/prescription/prescription.js';
import { SEIDEL_SUMS } from '../../src/prescription/seidel.js';
import { faultsOf, useFolder } from '../files/packhouse.js';
import { HALL_LENS, hallLensWith, STEEP_LENS } from '../prescription/hall-lens.js';
import { packhouseLens, singlet } from '../prescription/lenses.js';

const folder = useFolder();

describe('derive', () => {
  it('gives what the prescription holds, from its file or from code', () => {
    const options = { wavelengthsNm: [450, 650], fields: [0, 0.5, 1] };
    const { report, lens } = derive(HALL_LENS, options);
    expect(derive(loadPrescription(HALL_LENS), options)).toEqual({ report, lens });
    const derivation = deriveLens(loadPrescription(HALL_LENS), options);
    expect(lens).toEqual(derivation.lens);
    expect(report).toMatchObject({
      name: 'three elements, tag reader',
      method: 'sums',
      waves: lens.waves,
      wavesOfSums: lens.waves,
      seidelMm: derivation.seidelMm,
      explained: derivation.explained,
      warnings: derivation.warnings,
    });
    expect(report.wavelengths.map(({ nm }) => nm)).toEqual([450, 550, 650]);
    expect(report.wavelengths.map(({ axialUm }) => axialUm)).toEqual(lens.axialUm.map(([, um]) => um));
    expect(report.wavelengths.map(({ lateralUm }) => lateralUm)).toEqual(lens.lateralUm.map(([, um]) => um));
  });

  it('has the JSON keys that are promised', () => {
    const data = JSON.parse(jsonText(derive(HALL_LENS).report));
    const sums = Object.fromEntries(SEIDEL_SUMS.map((name) => [name, expect.any(Number)]));
    const waves = Object.fromEntries(
      ['W040', 'W131', 'W222', 'W220', 'W311', 'W020', 'W111'].map((name) => [name, expect.any(Number)]),
    );
    expect(data).toMatchObject({
      focal_length_mm: expect.closeTo(12, 10),
      working_f_number: expect.closeTo(4, 10),
      waves,
      waves_of_sums: waves,
      seidel_mm: sums,
      surfaces: [1, 2, 3, 4, 5, 6, 7].map((surface) => ({ surface, ...sums })),
      explained: [0, 0.3, 0.5, 0.7, 0.8, 0.9, 1].map((field) => ({
        field,
        share: expect.any(Number),
        rms_left_waves: expect.any(Number),
      })),
      wavelengths: defaultWavelengths(550).map((nm) => ({
        nm,
        waves,
        axial_um: expect.any(Number),
        lateral_um: expect.any(Number),
      })),
      warnings: [expect.any(String), expect.any(String)],
    });
    expect(data.surfaces.filter(({ stop }: { stop?: true }) => stop)).toMatchObject([{ surface: 5 }]);
  });

  it('tells infinite distances as null', () => {
    const distant = derive(singlet()).report.paraxial;
    expect(distant.objectHeightMm).toBeNull();
    // a stop in the front focus: the exit pupil is at infinity
    const { frontFocusMm } = derive({ ...singlet(), scaleToFocalLengthMm: undefined }).report.paraxial;
    const telecentric: Prescription = {
      ...singlet({ scaleToFocalLengthMm: undefined }),
      surfaces: singlet().surfaces.map((surface, i) =>
        i === 0 ? { ...surface, thicknessMm: surface.thicknessMm! - frontFocusMm! } : surface,
      ),
    };
    const { exitPupilMm, exitPupilDiameterMm } = derive(telecentric).report.paraxial;
    // rounding may leave it finite and very far
    expect(exitPupilMm === null || Math.abs(exitPupilMm) > 1e9).toBe(true);
    expect(exitPupilDiameterMm === null || exitPupilDiameterMm > 1e8).toBe(true);
    const mirror: Prescription = {
      name: 'flat mirror before a lens',
      wavelengthNm: 550,
      surfaces: [
        { radiusMm: 50, thicknessMm: 3, glass: { n: 1.5 }, stop: true },
        { thicknessMm: 2 },
        { mirror: true },
      ],
      aperture: { fNumber: 8 },
      field: { imageHeightMm: 1 },
    };
    expect(derive(mirror).report.paraxial.objectHeightMm).toBeNull();
    expect(jsonText(derive(mirror).report)).not.toMatch(/Infinity|NaN/);
  });

  it('fits the terms where that is asked for, and keeps the sums beside them', () => {
    const { report, lens } = derive(HALL_LENS, { bestFit: true });
    expect(report.method).toBe('best fit');
    expect(report.wavesOfSums).toEqual(derive(HALL_LENS).report.waves);
    expect(report.waves).toEqual(lens.waves);
    expect(report.waves.W040).not.toBeCloseTo(report.wavesOfSums.W040, 1);
  });

  it('looks from 400 to 700 nm, and on to 1000 nm for a lens of the infrared', () => {
    const visible = defaultWavelengths(587.5618);
    expect([visible.length, visible[0], visible.at(-1)]).toEqual([13, 400, 700]);
    const infrared = defaultWavelengths(850);
    expect([infrared.length, infrared[0], infrared.at(-1)]).toEqual([25, 400, 1000]);
    const { report } = derive(singlet({ wavelengthNm: 587.5618 }));
    expect(report.wavelengths.map(({ nm }) => nm)).toEqual([...visible, 587.5618].sort((a, b) => a - b));
  });

  it('finds no coma, distortion or lateral colour in a lens that is symmetrical about its stop at -1x', () => {
    // Source: W. T. Welford, Aberrations of Optical Systems (1986), ch. 8 (cited from memory). The lens is invented
    const glass = { nd: 1.6, vd: 50 };
    const symmetrical: Prescription = {
      name: 'symmetrical',
      wavelengthNm: 587.5618,
      surfaces: [
        { radiusMm: 40, thicknessMm: 4, glass },
        { radiusMm: 60, thicknessMm: 5 },
        { stop: true, thicknessMm: 5 },
        { radiusMm: -60, thicknessMm: 4, glass },
        { radiusMm: -40 },
      ],
      objectDistanceMm: 190.697674419, // to -1x within the digits that stand here
      aperture: { entrancePupilMm: 12 },
      field: { objectHeightMm: 15 },
    };
    const { seidelMm, surfaces, paraxial, explained } = derive(symmetrical).report;
    expect(paraxial.magnification).toBeCloseTo(-1, 10);
    const largest = Math.max(...surfaces.flatMap((one) => SEIDEL_SUMS.map((name) => Math.abs(one[name]))));
    // the object distance is off by up to 5e-10 mm of 190: 3e-12
    for (const name of ['S_II', 'S_V', 'C_II'] as const)
      expect(Math.abs(seidelMm[name])).toBeLessThan(1e-11 * largest);
    for (const { distortionPercent } of explained) expect(Math.abs(distortionPercent)).toBeLessThan(1e-8);
    expect(seidelMm.S_I).toBeGreaterThan(1e-3 * largest);
  });
});

describe('faults are told at the line of the surface', () => {
  const at = (text: string, options = {}) => {
    const path = folder.write('a.lens.yaml', text);
    return faultsOf(() => derive(path, options)).map(({ file, line, key, message }) => {
      expect([undefined, path]).toContain(file);
      return { line, key, message };
    });
  };
  const lineOf = (text: string, part: string) => text.slice(0, text.indexOf(part)).split('\n').length;

  test('a surface that a ray misses', () => {
    expect(at(STEEP_LENS)).toEqual([
      {
        line: 3,
        key: 'surfaces[1]',
        message: expect.stringMatching(/^surface 2: the ray of field [\d.]+ through .* misses it$/),
      },
    ]);
  });

  test('total reflection', () => {
    const text = `surfaces:
  - { stop: true, thickness_mm: 1 }
  - { thickness_mm: 5, glass: { n: 1.9 } }
  - { radius_mm: -9.5 }
f_number: 0.65
full_field_mm: 0.5
`;
    expect(at(text)).toEqual([
      { line: 4, key: 'surfaces[2]', message: expect.stringMatching(/^surface 3: .* is totally reflected/) },
    ]);
  });

  test('two stops, and none', () => {
    const text = hallLensWith(['radius_mm: -18,', 'radius_mm: -18, stop: true,']);
    expect(at(text)).toEqual([
      {
        line: lineOf(text, '- { stop: true'),
        key: 'surfaces[4].stop',
        message: expect.stringMatching(/second stop/),
      },
    ]);
    expect(at(hallLensWith(['stop: true, ', '']))).toEqual([
      { line: lineOf(hallLensWith(), 'surfaces:'), key: 'surfaces', message: 'has no stop' },
    ]);
  });

  test('a stop at the image, light that does not converge, a sensor far from the focus', () => {
    const lens = 'surfaces:\n  - { radius_mm: 20, thickness_mm: 3, glass: 517642, stop: true }\n';
    const rest = 'f_number: 8\nfull_field_mm: 1\n';
    expect(at(`${lens}  - { radius_mm: 5 }\n${rest}`)).toMatchObject([
      { line: 2, message: expect.stringMatching(/no real image/) },
    ]);
    expect(at(`${lens}  - { radius_mm: -40, thickness_mm: 9 }\n${rest}`)).toMatchObject([
      { line: 2, message: expect.stringMatching(/far out of focus/) },
    ]);
  });

  test('a glass without an index at a wavelength', () => {
    const text = hallLensWith(['{ nd: 1.6727, vd: 32.2 }', '{ sellmeier: { B: [1.5], C_um2: [0.16] } }']);
    expect(at(text, { wavelengthsNm: [390] })).toMatchObject([
      {
        line: lineOf(text, '- { radius_mm: -18'),
        message: expect.stringMatching(/surface 3: the glass has no usable index at 390 nm/),
      },
    ]);
  });

  test('options stand in no file', () => {
    for (const [options, key] of [
      [{ fields: [-1] }, '--fields'],
      [{ fields: [] }, '--fields'],
      [{ fields: [1], bestFit: true }, '--fields'],
      [{ wavelengthsNm: [0] }, '--wavelengths'],
    ] as const) {
      const [fault] = faultsOf(() => derive(HALL_LENS, options));
      expect(fault).toMatchObject({ key });
      expect(fault.file).toBeUndefined();
    }
  });

  test('no file, and a file of another kind', () => {
    expect(() => derive(folder.path('no.lens.yaml'))).toThrow(InputError);
    expect(at('lens: x\ncamera: y\n')).toEqual([
      { line: 1, key: undefined, message: 'is a rig, not a prescription' },
    ]);
  });
});

describe('the lens part', () => {
  const CAMERA = `
camera:
  pixels: [64, 48]
  pixel_pitch_um: 3.45
  bands_nm: { mono: [[480, 0.4], [620, 0.6]] }
mount: { axis_px: [-800, -700] } # a corner of the field: where the terms differ the most
`;
  const NM = [480, 620];
  const rigs = () => {
    const hall = folder.write('hall.lens.yaml', hallLensWith(['f_number: 4 ', 'f_number: 8 '])); // small PSFs are quick
    folder.write('part.lens.yaml', lensPartText('.yaml', derive(hall, { wavelengthsNm: NM }).lens));
    folder.write('a.rig.yaml', `lens: { prescription: hall.lens.yaml }${CAMERA}`);
    folder.write('b.rig.yaml', `lens: part.lens.yaml${CAMERA}`);
    return [loadRig(folder.path('a.rig.yaml')), loadRig(folder.path('b.rig.yaml'))] as const;
  };

  test('is the lens of a rig that names the surfaces, to the last bit', () => {
    const [surfaces, part] = rigs();
    const { warnings, ...lens } = surfaces.lens;
    expect(part).toEqual({ ...surfaces, lens });
    expect(warnings?.length).toBeGreaterThan(0);
  });

  test('gives the same zones and the same picture, and the surfaces their warnings', async () => {
    const [surfaces, part] = rigs();
    const options = { fields: ['axis', 0.8] };
    const [traced, stated] = [zones(surfaces, options), zones(part, options)];
    expect(stated.zones).toEqual(traced.zones);
    expect(traced.warnings).toEqual([...surfaces.lens.warnings!, ...stated.warnings]);

    const [width, height] = surfaces.camera.pixels;
    const plane = Float32Array.from({ length: width * height }, (_, i) => ((5 * i) % 64) / 64);
    const scene = { width, height, planes: [plane] };
    const one = await render({ rig: surfaces, scene, threads: 1 });
    const other = await render({ rig: part, scene, threads: 1 });
    expect(other.picture).toEqual(one.picture);
    for (const warning of surfaces.lens.warnings!) expect(one.record.warnings).toContain(warning);
    expect(one.picture.planes[0]).not.toEqual(plane); // it did something
  }, 30_000); // two renders: 1 s each, but on a machine that runs other tests
});

test('the demo lens is the one that the optics are tested with', () => {
  const { name: _, ...file } = loadPrescription(HALL_LENS);
  const { name: __, ...known } = packhouseLens();
  expect(file).toEqual(known);
});
