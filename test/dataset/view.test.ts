import fc from 'fast-check';
import { describe, expect, it, test } from 'vitest';
import { rigOfFrame, sceneToSensor, sensorToScene } from '../../src/dataset/view.js';
import { distortionMap } from '../../src/optics/distortion.js';
import { rig, view } from './views.js';

const share = fc.double({ min: 0, max: 1, minExcluded: true, maxExcluded: true, noNaN: true });

describe('the window', () => {
  test('left out, it is the sensor', () => {
    expect(view().window).toEqual({ x: 0, y: 0, width: 320, height: 240 });
  });

  test('in the middle, at a place, at either end of chance', () => {
    const at = (
      window: 'random' | 'middle' | [number, number],
      windowShares: [number, number] = [0.5, 0.5],
    ) => {
      const { x, y } = view({ output: { size: [100, 60], window }, draw: { windowShares } }).window;
      return [x, y];
    };
    expect(at('middle')).toEqual([110, 90]);
    expect(at([7, 8])).toEqual([7, 8]);
    expect(at('random', [2 ** -53, 1 - 2 ** -53])).toEqual([0, 180]);
  });

  test('begins on the same colour of a mosaic wherever it lies', () => {
    fc.assert(
      fc.property(share, share, (u, v) => {
        const { window, frame } = view({
          rig: rig({ mosaic: 'rggb' }),
          output: { size: [101, 61] },
          draw: { windowShares: [u, v] },
        });
        expect([window.x % 2, window.y % 2, Math.abs(frame.x % 2), Math.abs(frame.y % 2)]).toEqual([
          0, 0, 0, 0,
        ]);
        expect(window.x + 101).toBeLessThanOrEqual(320);
      }),
    );
  });
});

describe('the pose of the scene', () => {
  const corners = (options: Parameters<typeof view>[0]) => {
    const { pose } = view(options);
    const sides = [sceneToSensor(pose, -0.5, -0.5), sceneToSensor(pose, pose.width - 0.5, pose.height - 0.5)];
    return [...sides[0], ...sides[1]].map((value) => Math.round(1000 * value) / 1000);
  };

  test('covers the sensor, middle on middle, as in a rendering', () => {
    // 4:3 on 4:3; a wide scene stands over at its sides
    expect(corners({ scene: { width: 160, height: 120 } })).toEqual([-0.5, -0.5, 319.5, 239.5]);
    expect(corners({ scene: { width: 200, height: 120 } })).toEqual([-40.5, -0.5, 359.5, 239.5]);
  });

  test('covers the picture', () => {
    const output = { size: [100, 60] as [number, number], window: [10, 20] as [number, number] };
    expect(corners({ output, placement: { cover: 'picture' }, scene: { width: 200, height: 120 } })).toEqual([
      9.5, 19.5, 109.5, 79.5,
    ]);
  });

  test('covers nothing: pixel on pixel, times the scale', () => {
    expect(
      corners({ placement: { cover: 'none' }, draw: { scale: 2 }, scene: { width: 100, height: 50 } }),
    ).toEqual([59.5, 69.5, 259.5, 169.5]);
  });

  test('by chance the picture shows a part of the scene that is anywhere in it, to its very border', () => {
    const of = (placeShares: [number, number]) =>
      corners({
        output: { size: [100, 60], window: [10, 20] },
        placement: { cover: 'none', at: 'random' },
        draw: { placeShares, scale: 1.5 },
        scene: { width: 200, height: 100 },
      });
    const [left, top] = of([1e-12, 1e-12]);
    expect([left, top]).toEqual([9.5, 19.5]);
    const [, , right, bottom] = of([1 - 1e-12, 1 - 1e-12]);
    expect([right, bottom]).toEqual([109.5, 79.5]);
  });

  test('a quarter turn is clockwise', () => {
    const { pose } = view({ draw: { quarterTurns: 1 }, scene: { width: 120, height: 160 } });
    expect(sceneToSensor(pose, 0, 0)).toEqual([318.5 + 0, 0.5 + 0].map((value) => value));
    expect(sceneToSensor(pose, 119, 0)).toEqual([318.5, 238.5]); // its top runs down the right side
  });

  it('has an inverse', () => {
    fc.assert(
      fc.property(
        fc.nat({ max: 3 }),
        share,
        share,
        fc.double({ min: 0.1, max: 9, noNaN: true }),
        (quarterTurns, u, v, scale) => {
          const { pose } = view({ draw: { quarterTurns, scale } });
          const [x, y] = sensorToScene(pose, ...sceneToSensor(pose, 320 * u, 240 * v));
          expect(x).toBeCloseTo(320 * u, 9);
          expect(y).toBeCloseTo(240 * v, 9);
        },
      ),
    );
  });
});

describe('where things land', () => {
  test('a corner of a lens with 8 % of barrel, by hand', () => {
    const { lens } = view();
    const [x, y] = lens.landed(319.5, 239.5); // the sensor's corner: h = 1
    expect(x).toBeCloseTo(159.5 + 160 * 0.92, 9);
    expect(y).toBeCloseTo(119.5 + 120 * 0.92, 9);
  });

  test('coma carries things outward or inward by its centroid: eps = -2 N lambda W131 h', () => {
    const { lens } = view({ rig: rig({ distortionPercent: 0, w131: 3 }) });
    const [x] = lens.landed(319.5, 119.5); // h = 0.8
    expect(x - 319.5).toBeCloseTo((-2 * 4 * 0.55 * 3 * 0.8) / 6, 9);
  });

  test('bands count alike', () => {
    const other = rig();
    const maps = other.camera.bands.map((band) => distortionMap(other.lens, band));
    const { lens } = view({ rig: other });
    const mean = maps.reduce((sum, map) => sum + map.distorted(0.9) / 3, 0);
    expect((lens.landed(159.5 + 150, 119.5)[0] - 159.5) * 6e-3).toBeCloseTo(mean, 12);
  });

  it('has an inverse, and areas grow by its determinant', () => {
    fc.assert(
      fc.property(fc.constantFrom(-12, -3, 0, 4, 15), share, share, (distortionPercent, u, v) => {
        const { lens } = view({ rig: rig({ distortionPercent, w131: -2 }) });
        const [x, y] = [320 * u, 240 * v];
        const back = lens.ideal(...lens.landed(x, y));
        expect(back[0]).toBeCloseTo(x, 8);
        expect(back[1]).toBeCloseTo(y, 8);
        const step = 1e-3;
        const [ax, ay] = lens.landed(x + step, y).map((value, i) => value - lens.landed(x - step, y)[i]);
        const [bx, by] = lens.landed(x, y + step).map((value, i) => value - lens.landed(x, y - step)[i]);
        expect(lens.areaScale(x, y)).toBeCloseTo((ax * by - ay * bx) / (2 * step) ** 2, 6); // central differences
      }),
    );
  });

  test('past the fold things stay outside, and do not come back', () => {
    const { lens } = view({ rig: rig({ distortionPercent: -30 }) }); // folds at h = 1.05
    const far = lens.landed(159.5 + 10_000, 119.5)[0];
    expect(far).toBeGreaterThan(lens.landed(319.5, 119.5)[0]);
  });
});

describe('the frame that is formed', () => {
  test('is the sensor for a picture of all of it', () => {
    expect(view().frame).toEqual({ x: 0, y: 0, width: 320, height: 240 });
  });

  test('reaches as far past the window as blur throws light, within the sensor', () => {
    // a perfect lens at f/4: two Airy radii of 620 nm are 6.05 um, 2 pixels of 6 um to be sure
    const { frame } = view({ output: { size: [100, 60], window: [20, 179] } });
    expect(frame).toEqual({ x: 18, y: 177, width: 104, height: 63 });
    // 20 um of defocus at f/4 throw the rim of the pupil 2.5 um farther
    const blurred = rig();
    blurred.mount.sensorShiftUm = 100;
    expect(view({ rig: blurred, output: { size: [100, 60], window: [20, 30] } }).frame.x).toBe(20 - 4);
  });

  test('stays symmetric for a window in the middle', () => {
    const { frame } = view({ output: { size: [100, 60], window: 'middle' } });
    expect(frame.x + (frame.width - 1) / 2).toBe(159.5);
    expect(frame.y + (frame.height - 1) / 2).toBe(119.5);
  });

  test('has its optical axis where the sensor has it', () => {
    const { frame } = view({ output: { size: [100, 60], window: [20, 30] } });
    const { axisPx } = rigOfFrame(rig(), frame).mount;
    expect(axisPx).toEqual([159.5 - frame.x, 119.5 - frame.y]);
  });
});

describe('the sheet of the scene', () => {
  test('is the sensor where the scene ends with it', () => {
    expect(view().sheet).toEqual({ x: 0, y: 0, width: 320, height: 240 });
  });

  it('reaches to all that distortion throws into the frame, as far as there is a scene', () => {
    fc.assert(
      fc.property(fc.constantFrom(-12, 0, 8), share, share, share, share, (distortionPercent, u, v, s, t) => {
        const { sheet, frame, lens } = view({
          rig: rig({ distortionPercent }),
          output: { size: [100, 60] },
          draw: { windowShares: [u, v], scale: 1.4 },
        });
        const [x, y] = lens.ideal(frame.x + s * (frame.width - 1), frame.y + t * (frame.height - 1));
        expect(sheet.x).toBeLessThanOrEqual(Math.min(x, frame.x));
        expect(sheet.y).toBeLessThanOrEqual(Math.min(y, frame.y));
        expect(sheet.x + sheet.width).toBeGreaterThanOrEqual(Math.max(x + 1, frame.x + frame.width));
        expect(sheet.y + sheet.height).toBeGreaterThanOrEqual(Math.max(y + 1, frame.y + frame.height));
      }),
    );
  });
});
