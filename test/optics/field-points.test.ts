import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.js';
import {
  defaultFields,
  type FieldSpec,
  fieldPoint,
  PLACES,
  parseFieldPoint,
} from '../../src/optics/field-points.js';
import { sampleRig } from './samples.js';

function refusalOf(spec: FieldSpec): string {
  try {
    parseFieldPoint(spec);
  } catch (error) {
    expect(error).toBeInstanceOf(InputError);
    return (error as InputError).message;
  }
  throw new Error(`${JSON.stringify(spec)} was taken`);
}

describe('parseFieldPoint', () => {
  it('reads h, h with an azimuth, and places', () => {
    expect(parseFieldPoint('0.7')).toEqual({ field: 0.7, azimuthDeg: 0 });
    expect(parseFieldPoint(' .7@90 ')).toEqual({ field: 0.7, azimuthDeg: 90 });
    expect(parseFieldPoint('1e-1 @ -45.5')).toEqual({ field: 0.1, azimuthDeg: -45.5 });
    expect(parseFieldPoint(0.7)).toEqual({ field: 0.7, azimuthDeg: 0 });
    expect(parseFieldPoint(0)).toEqual({ field: 0, azimuthDeg: 0 });
    for (const place of PLACES) expect(parseFieldPoint(place)).toEqual({ place });
  });

  it('takes back what it gave', () => {
    for (const text of ['axis', 'top_left', '0.3@200'])
      expect(parseFieldPoint(parseFieldPoint(text))).toEqual(parseFieldPoint(text));
  });

  it.each(['', 'middle', '0.7@', '@90', '0.7@90@1', '0x1', '1 2', 'NaN', 'Infinity', '0,7', '0.7mm'])(
    "refuses '%s' with what is allowed",
    (text) => {
      const message = refusalOf(text);
      expect(message).toContain(`found '${text.trim()}'`);
      expect(message).toContain(
        'axis, top, bottom, left, right, top_left, top_right, bottom_left, bottom_right',
      );
    },
  );

  it.each(['-0.1', '10.1', '1e9', '-1@30'])("refuses the field '%s'", (text) => {
    expect(refusalOf(text)).toMatch(/the field h is out of range, found .*Allowed: h from 0 to 10/);
  });

  it.each([Number.NaN, Number.POSITIVE_INFINITY, -1, 11])('refuses the number %f', (h) => {
    expect(refusalOf(h)).toContain(`found '${h}'`);
    expect(refusalOf({ field: h, azimuthDeg: 0 })).toContain('the field h is out of range');
  });

  it('refuses an azimuth that is not finite', () => {
    expect(refusalOf({ field: 0.5, azimuthDeg: Number.NaN })).toContain('the azimuth is not a finite number');
    expect(refusalOf('0.5@1e999')).toContain('the azimuth is not a finite number');
  });

  it.each([
    ['top-right', 'top_right'],
    ['right_top', 'top_right'],
    ['Bottom', 'bottom'],
    ['lefft', 'left'],
    ['botom left', 'bottom_left'],
    ['axsi', 'axis'],
  ])("offers for '%s' the place '%s'", (text, place) => {
    expect(refusalOf(text)).toContain(`Did you mean '${place}'?`);
  });

  it('offers nothing where nothing is near', () => {
    expect(refusalOf('quokka')).not.toContain('Did you mean');
  });
});

describe('fieldPoint', () => {
  const rig = sampleRig(); // 2000 x 1500 pixels of 3.45 um, h = 1 at 4 mm

  it('puts h along +x, and an azimuth from +x toward +y', () => {
    expect(fieldPoint(rig, 0.5)).toEqual({ field: 0.5, azimuthDeg: 0, place: null, xMm: 2, yMm: 0 });
    const down = fieldPoint(rig, '0.5@90');
    expect(down.xMm).toBeCloseTo(0, 12);
    expect(down.yMm).toBeCloseTo(2, 12); // + is down
    expect(fieldPoint(rig, '0.5@-90').azimuthDeg).toBe(270);
    expect(fieldPoint(rig, '0.5@720').azimuthDeg).toBe(0);
  });

  it('puts sides and corners on the middles of the outermost pixels', () => {
    const xMm = 0.00345 * 999.5;
    const yMm = 0.00345 * 749.5;
    const at = (place: string) => {
      const point = fieldPoint(rig, place);
      return [point.xMm, point.yMm];
    };
    const expected: Record<string, [number, number]> = {
      axis: [0, 0],
      top: [0, -yMm],
      bottom: [0, yMm],
      left: [-xMm, 0],
      right: [xMm, 0],
      top_left: [-xMm, -yMm],
      top_right: [xMm, -yMm],
      bottom_left: [-xMm, yMm],
      bottom_right: [xMm, yMm],
    };
    for (const place of PLACES) {
      expect(at(place)[0]).toBeCloseTo(expected[place][0], 12);
      expect(at(place)[1]).toBeCloseTo(expected[place][1], 12);
    }
    expect(fieldPoint(rig, 'top')).toMatchObject({ place: 'top', azimuthDeg: 270 });
    expect(fieldPoint(rig, 'top').field).toBeCloseTo(yMm / 4, 12);
    expect(fieldPoint(rig, 'axis')).toMatchObject({ field: 0, azimuthDeg: 0 });
  });

  it('counts from where the optical axis meets the sensor', () => {
    const shifted = sampleRig({ mount: { axisPx: [0, 1499] } });
    expect(fieldPoint(shifted, 'axis')).toMatchObject({ xMm: 0, yMm: 0 });
    expect(fieldPoint(shifted, 'bottom_left')).toMatchObject({ xMm: 0, yMm: 0, place: 'bottom_left' });
    expect(fieldPoint(shifted, 'right').xMm).toBeCloseTo(0.00345 * 1999, 12);
  });

  it('gives a point whose radius and azimuth are those it lies at', () => {
    const anyPlace = fc.constantFrom(...PLACES);
    const anyPolar = fc
      .tuple(fc.integer({ min: 1, max: 200 }), fc.integer({ min: -400, max: 400 }))
      .map(([h, a]) => `${h / 100}@${a}`);
    fc.assert(
      fc.property(fc.oneof(anyPlace, anyPolar), (spec) => {
        const point = fieldPoint(rig, spec);
        expect(Math.hypot(point.xMm, point.yMm)).toBeCloseTo(point.field * 4, 12);
        expect(point.azimuthDeg).toBeGreaterThanOrEqual(0);
        expect(point.azimuthDeg).toBeLessThan(360);
        const azimuth = (point.azimuthDeg * Math.PI) / 180;
        expect(point.xMm).toBeCloseTo(point.field * 4 * Math.cos(azimuth), 12);
        expect(point.yMm).toBeCloseTo(point.field * 4 * Math.sin(azimuth), 12);
      }),
    );
  });
});

describe('defaultFields', () => {
  it('are four places of a symmetric rig, all nine of another', () => {
    expect(defaultFields(sampleRig())).toEqual(['axis', 'top', 'right', 'top_right']);
    expect(defaultFields(sampleRig({ mount: { sensorTiltDeg: [0.1, 0] } }))).toEqual(PLACES);
    expect(defaultFields(sampleRig({ mount: { axisPx: [990, 749.5] } }))).toEqual(PLACES);
    expect(PLACES).toHaveLength(9);
  });
});
