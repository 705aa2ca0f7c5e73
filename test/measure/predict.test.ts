import { describe, expect, it } from 'vitest';
import { parseRig } from '../../src/files/load-rig.js';
import { chartMtf, dotPlace, predictedSfr, radialMap, rigMap } from '../../src/measure/predict.js';
import { cubicMap, fitRadialMap } from '../../src/measure/radial-fit.js';
import { DistortionMap } from '../../src/optics/distortion.js';
import { zonesOf } from '../../src/optics/zones.js';

const RIG = parseRig({
  lens: {
    name: 'test lens',
    focal_length_mm: 12,
    f_number: 2.8,
    full_field_mm: 4,
    wavelength_nm: 550,
    waves: { W040: 0.5, W131: 1.2, W222: 0.6, W220: 0.3, W311: 4 },
    colour: { lateral_um: { 450: 2, 650: -1 } },
  },
  camera: {
    pixels: [1000, 800],
    pixel_pitch_um: 4,
    bands_nm: { red: [650], green: [550], blue: [450] },
    fill_factor: 0.9,
  },
});
const [, GREEN, BLUE] = RIG.camera.bands;
const AXIS = [499.5, 399.5];

describe('rigMap', () => {
  it('moves points along the radius by third-order distortion and lateral colour, and back', () => {
    const [x, y] = [AXIS[0] + 300, AXIS[1] - 400]; // 2 mm from the axis, h = 0.5
    // r' - r = -2 N lambda W311 h^3, and lateral colour h x 2 um
    const shiftPx = (-2 * 2.8 * 0.55 * 4 * 0.125) / 4;
    for (const [band, more] of [
      [GREEN, 0],
      [BLUE, (0.5 * 2) / 4],
    ] as const) {
      const map = rigMap(RIG, band);
      const [landedX, landedY] = map.landed(x, y);
      expect(landedX - x).toBeCloseTo(0.6 * (shiftPx + more), 9);
      expect(landedY - y).toBeCloseTo(-0.8 * (shiftPx + more), 9);
      const back = map.ideal(landedX, landedY);
      expect(back).toEqual([expect.closeTo(x, 9), expect.closeTo(y, 9)]);
    }
    expect(rigMap(RIG, GREEN).landed(AXIS[0], AXIS[1])).toEqual(AXIS);
  });

  it('puts the centroid of a small disc where coma moves it: 2 N lambda W131 h toward the axis', () => {
    const [x, y] = [AXIS[0] + 300, AXIS[1] - 400];
    const landed = rigMap(RIG, GREEN).landed(x, y);
    const [centroidX, centroidY] = dotPlace(RIG, GREEN, x, y, 0);
    const comaPx = (2 * 2.8 * 0.55 * 1.2 * 0.5) / 4;
    expect(centroidX - landed[0]).toBeCloseTo(-0.6 * comaPx, 9);
    expect(centroidY - landed[1]).toBeCloseTo(0.8 * comaPx, 9);
  });

  it('puts the centroid of a large disc where the middle of its distorted area is', () => {
    const [x, y] = [AXIS[0] + 300, AXIS[1] - 400];
    const map = rigMap(RIG, GREEN);
    const radiusPx = 90;
    // the area of the distorted disc, square by square: each goes where its corners go
    let [area, momentX, momentY] = [0, 0, 0];
    for (let u = -radiusPx; u < radiusPx; u += 2)
      for (let v = -radiusPx; v < radiusPx; v += 2) {
        if (Math.hypot(u + 1, v + 1) > radiusPx) continue;
        const [a, b, c] = [
          [u, v],
          [u + 2, v],
          [u, v + 2],
        ].map(([i, j]) => map.landed(x + i, y + j));
        const [middleX, middleY] = map.landed(x + u + 1, y + v + 1);
        const size = (b[0] - a[0]) * (c[1] - a[1]) - (c[0] - a[0]) * (b[1] - a[1]);
        area += size;
        momentX += size * middleX;
        momentY += size * middleY;
      }
    const small = dotPlace(RIG, GREEN, x, y, 0);
    const large = dotPlace(RIG, GREEN, x, y, radiusPx);
    const landed = map.landed(x, y);
    const bentX = momentX / area - landed[0];
    expect(Math.abs(bentX)).toBeGreaterThan(0.02);
    expect(Math.abs(large[0] - small[0] - bentX)).toBeLessThan(0.05 * Math.abs(bentX)); // squares, and terms of higher order
    expect(Math.abs(large[1] - small[1] - (momentY / area - landed[1]))).toBeLessThan(0.05 * Math.abs(bentX));
  });
});

describe('predictedSfr', () => {
  const at = (h: number) => AXIS[0] + (h * 4) / 0.004;
  /** A short edge through an ideal place on +x, where it lands. */
  const edgeAt = (h: number, normalDeg: number) => {
    const [x, y] = rigMap(RIG, GREEN).landed(at(h), AXIS[1]);
    const [nx, ny] = [Math.cos((normalDeg * Math.PI) / 180), Math.sin((normalDeg * Math.PI) / 180)];
    return { from: [x + 0.01 * ny, y - 0.01 * nx], to: [x - 0.01 * ny, y + 0.01 * nx], normalDeg } as const;
  };

  it('is the camera MTF of zones along and across the radius', () => {
    const lpPerMm = [20, 60, 100];
    const zones = zonesOf(RIG, { fields: [0.5], lpPerMm }).zones.filter(({ band }) => band === 'green');
    for (const [normalDeg, direction] of [
      [0, 'tangential'],
      [180, 'tangential'],
      [90, 'sagittal'],
    ] as const) {
      const predicted = predictedSfr(RIG, GREEN, edgeAt(0.5, normalDeg));
      for (const { lpPerMm: lp, camera } of zones[0].mtf)
        expect(predicted(lp * 0.004)).toBeCloseTo(camera[direction], 6);
    }
  });

  it('averages along an edge on which the lens changes', () => {
    const [a, b] = [0.3, 0.7].map((h) => predictedSfr(RIG, GREEN, edgeAt(h, 90))(0.2));
    const map = rigMap(RIG, GREEN);
    const whole = predictedSfr(RIG, GREEN, {
      from: map.landed(at(0.3), AXIS[1]),
      to: map.landed(at(0.7), AXIS[1]),
      normalDeg: 90,
    })(0.2);
    const middle = predictedSfr(RIG, GREEN, edgeAt(0.5, 90))(0.2);
    // a parabola through the three points has the mean (a + 4 m + b) / 6
    expect(whole).toBeCloseTo((a + 4 * middle + b) / 6, 2);
    expect(Math.abs(whole - middle)).toBeGreaterThan(0.001);
  });
});

describe('chartMtf', () => {
  it('is the transform of a square of one sample', () => {
    expect(chartMtf(4, 0, 0.4)).toBeCloseTo(Math.sin(0.1 * Math.PI) / (0.1 * Math.PI), 12);
    expect(chartMtf(1, 90, 0.5)).toBeCloseTo(2 / Math.PI, 12);
    expect(chartMtf(2, 45, 0.5)).toBeCloseTo((Math.sin(0.17678 * Math.PI) / (0.17678 * Math.PI)) ** 2, 5);
  });
});

describe('radial fits', () => {
  const truth = new DistortionMap(1.002, -0.004);
  const pairs = [0, 0.5, 1, 1.7, 2.4].map((idealMm) => ({ idealMm, foundMm: truth.distorted(idealMm) }));

  it('give back scale and third order', () => {
    const { a, c } = fitRadialMap(pairs);
    expect([a, c]).toEqual([expect.closeTo(1.002, 10), expect.closeTo(-0.004, 10)]);
  });

  it('have no third order from one radius alone, and nothing from the axis', () => {
    expect(fitRadialMap([pairs[2], pairs[2]])).toMatchObject({ a: expect.closeTo(0.998, 10), c: 0 });
    expect(fitRadialMap([pairs[0]])).toMatchObject({ a: 1, c: 0 });
    expect(fitRadialMap([])).toMatchObject({ a: 1, c: 0 });
  });

  it('have a cubic part alone for places not yet seen', () => {
    const pure = new DistortionMap(1, -0.003);
    expect(cubicMap([0.4, 0.9].map((mm) => ({ idealMm: mm, foundMm: pure.distorted(mm) })))).toMatchObject({
      a: 1,
      c: expect.closeTo(-0.003, 12),
    });
    expect(cubicMap([])).toMatchObject({ a: 1, c: 0 });
  });

  it('move places around the axis, both ways', () => {
    const map = radialMap([10, 20], 0.01, truth);
    const [x, y] = map.landed(70, 100); // 1 mm away
    expect([x, y]).toEqual([expect.closeTo(10 + 60 * 0.998, 9), expect.closeTo(20 + 80 * 0.998, 9)]);
    expect(map.ideal(x, y)).toEqual([expect.closeTo(70, 9), expect.closeTo(100, 9)]);
  });
});
