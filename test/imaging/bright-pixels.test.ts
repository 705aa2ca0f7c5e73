/** Single bright pixels through the whole of the image formation: each comes out as the exact PSF of its own field point. */
import { describe, expect, it } from 'vitest';
import type { Camera, Rig } from '../../src/optics/rig.js';
import { wavefrontAt } from '../../src/optics/wavefront.js';
import { type RigParts, sampleRig } from '../optics/samples.js';
import { exactPixels } from '../support/exact-psf.js';
import { type FormOptions, useFormer } from '../support/form.js';

const { form } = useFormer();

type Pixel = [x: number, y: number];

interface ErrorOptions extends FormOptions {
  /** How far from the bright pixel its peak may lie. */
  reach?: number;
  /** Hold the picture against what part of the exact PSF lies inside the kernel, brought to unit sum. */
  isCut?: boolean;
}

/** Differences from the exact PSF as a share of its peak. */
interface Errors {
  error: number;
  /** The same after the exact PSF has been brought to the height that fits best. */
  shapeError: number;
}

/** Largest differences of a formed picture from the exact PSFs, on the pixels around the peak of each bright pixel.
 * Bright pixels must stand so far apart that none adds to the peak of another. */
async function worstErrors(rig: Rig, bright: readonly Pixel[], options: ErrorOptions = {}): Promise<Errors> {
  const { oversample = 1 } = options;
  const [width, height] = rig.camera.pixels;
  const scene = new Float32Array(width * height * oversample ** 2);
  for (const [x, y] of bright) {
    for (let row = y * oversample; row < (y + 1) * oversample; row++) {
      scene.fill(1, (row * width + x) * oversample, (row * width + x + 1) * oversample);
    }
  }
  const scenes = rig.camera.bands.map(() => scene);
  const { planes, accuracy } = await form(rig, scenes, { blend: 0.001, ...options });
  const cutPx = options.isCut ? accuracy.kernelPx : undefined;
  const errors = planes.flatMap((plane, band) =>
    bright.map((pixel) => errorAt(rig, plane, band, pixel, { ...options, cutPx })),
  );
  return {
    error: Math.max(...errors.map(({ error }) => error)),
    shapeError: Math.max(...errors.map(({ shapeError }) => shapeError)),
  };
}

async function worstError(...wanted: Parameters<typeof worstErrors>): Promise<number> {
  return (await worstErrors(...wanted)).error;
}

function errorAt(
  rig: Rig,
  plane: Float32Array,
  bandIndex: number,
  [x, y]: Pixel,
  { oversample = 1, reach = 12, cutPx }: ErrorOptions & { cutPx?: number },
): Errors {
  const [width, height] = rig.camera.pixels;
  const { pixelPitchUm, fillFactor, bands } = rig.camera;
  const band = bands[bandIndex];
  const [axisX, axisY] = rig.mount.axisPx;
  const toMm = pixelPitchUm / 1000;
  const lines = band.lines.map(({ nm, weight }) => ({
    nm,
    weight,
    wavefront: wavefrontAt(rig, (x - axisX) * toMm, (y - axisY) * toMm, nm, band),
  }));
  const around = (middle: number, distance: number, at: number, size: number) =>
    Array.from({ length: 2 * distance + 1 }, (_, i) => middle + i - distance).filter(
      (i) => at + i >= 0 && at + i < size,
    );
  let peak = { value: 0, column: 0, row: 0 };
  for (const row of around(0, reach, y, height)) {
    for (const column of around(0, reach, x, width)) {
      const value = plane[(y + row) * width + x + column];
      if (value > peak.value) peak = { value, column, row };
    }
  }
  const columns = around(peak.column, 1, x, width);
  const rows = around(peak.row, 1, y, height);
  const exact = rows.map(() => columns.map(() => 0));
  // a bright pixel of the scene is k x k points of 1 / k^2 of its light each
  const points = Array.from({ length: oversample }, (_, i) => (i - (oversample - 1) / 2) / oversample);
  for (const dy of points) {
    for (const dx of points) {
      const energy = exactPixels(
        lines,
        rig.mount.fNumber,
        pixelPitchUm * fillFactor,
        columns.map((column) => (column - dx) * pixelPitchUm),
        rows.map((row) => (row - dy) * pixelPitchUm),
      );
      energy.forEach((line, j) => {
        line.forEach((share, i) => {
          exact[j][i] += share / (oversample * fillFactor) ** 2;
        });
      });
    }
  }
  const light =
    cutPx === undefined ? 1 : exactPixels(lines, rig.mount.fNumber, cutPx * pixelPitchUm, [0], [0])[0][0];
  const expected = exact.flat().map((value) => value / light);
  const found = rows.flatMap((row) => columns.map((column) => plane[(y + row) * width + x + column]));
  const product = (a: number[], b: number[]) => a.reduce((sum, value, i) => sum + value * b[i], 0);
  const fit = product(found, expected) / product(expected, expected);
  const worst = (scale: number) =>
    Math.max(...found.map((value, i) => Math.abs(value - scale * expected[i])));
  const peakOf = Math.max(...expected);
  return { error: worst(1) / peakOf, shapeError: worst(fit) / peakOf };
}

/** Near the corners, sides and middle of a frame, and between; off its very edge, which the scene repeats beyond. */
function spread([width, height]: readonly [number, number]): Pixel[] {
  return [
    [2, 3],
    [width - 3, height - 3],
    [Math.round(0.52 * width), Math.round(0.47 * height)],
    [width - 4, Math.round(0.3 * height)],
    [Math.round(0.27 * width), height - 5],
  ];
}

const mono = (nm: number): Partial<Camera> => ({ bands: [{ name: 'mono', lines: [{ nm, weight: 1 }] }] });
const WAVES = { W040: 0.8, W131: 1.1, W222: 0.9, W220: -0.6 };

/** A part of a sensor with h = 1 at its far corner, right and below the axis or left and above. */
function partOfSensor(parts: RigParts & { camera: Partial<Camera> }, side: 1 | -1 = 1): Rig {
  const [width, height] = parts.camera.pixels as readonly [number, number];
  const rig = sampleRig(parts);
  const fieldPx = (1000 * rig.lens.fullFieldMm) / rig.camera.pixelPitchUm;
  const axisPx: [number, number] =
    side === 1 ? [width - 0.8 * fieldPx, height - 0.6 * fieldPx] : [0.8 * fieldPx, 0.6 * fieldPx];
  return { ...rig, mount: { ...rig.mount, axisPx } };
}

// What users are promised is 1 % of the peak at a tolerance of 0.001. Of that, 0.5 % is the light outside the kernel, given back by
// normalising, and 0.1 % or so the blending.
const PROMISE = 0.01;

describe('bright pixels come out as the exact PSF of their own field point', () => {
  const none = { relativeIllumination: 'none' as const };

  it.each([
    [1.4, 1.4, 400, 4.6],
    [1.4, 2.8, 550, 4.6],
    [2.4, 4, 460, 4.6],
    [3.45, 2.8, 550, 4.6],
    [5.5, 4, 850, 8],
  ])('at %f um, f/%f, %i nm, out to h = 1', async (pixelPitchUm, fNumber, nm, fullFieldMm) => {
    const pixels = [150, 110] as const;
    const parts = {
      waves: WAVES,
      lens: { ...none, fNumber, fullFieldMm, wavelengthNm: nm },
      camera: { ...mono(nm), pixels, pixelPitchUm },
    };
    // both sides of the axis once; the kernels' own tests go round all quadrants
    for (const side of pixelPitchUm === 3.45 ? ([1, -1] as const) : ([-1] as const)) {
      expect(await worstError(partOfSensor(parts, side), spread(pixels))).toBeLessThan(PROMISE);
    }
  });

  it('at 10 um, f/1.4, 400 nm, the finest PSF on the coarsest pixels', async () => {
    // a symmetric rig with the axis in its middle takes the fewest of these costly PSFs; h = 0.5 in the corners
    const pixels = [60, 40] as const;
    const rig = sampleRig({
      waves: WAVES,
      lens: { ...none, fNumber: 1.4, fullFieldMm: 0.7, wavelengthNm: 400 },
      camera: { ...mono(400), pixels, pixelPitchUm: 10 },
    });
    expect(await worstError(rig, spread(pixels).slice(1, 4), { reach: 2 })).toBeLessThan(PROMISE);
  });

  it.each([
    [10, 1000],
    [3.45, 550],
    [1.4, 400],
    [1.4, 1000],
  ])('at %f um, f/16, %i nm, a lens of f/8 stopped down and out of focus', async (pixelPitchUm, nm) => {
    const pixels = [40, 30] as const;
    const rig = partOfSensor({
      waves: { W040: 6, W131: 6, W222: 3, W220: -2 },
      lens: { ...none, fNumber: 8, fullFieldMm: 9, wavelengthNm: nm },
      camera: { ...mono(nm), pixels, pixelPitchUm },
      mount: { fNumber: 16, sensorShiftUm: 8 * 16 ** 2 * (nm / 1000) * 0.4 },
    });
    // the spots are so wide that half a percent of their light lies up to 450 pixels out: smaller kernels will do to compare
    const options = { kernel: 0.03, isCut: true, reach: 20 };
    expect(await worstError(rig, [[4, 3]], options)).toBeLessThan(0.005); // 0.33 % measured
  });

  it('over a whole small sensor, in all four quadrants', async () => {
    const pixels = [161, 120] as const;
    const rig = sampleRig({
      waves: WAVES,
      lens: { ...none, fNumber: 2.8 },
      camera: { ...mono(550), pixels },
    });
    const bright: Pixel[] = [
      [20, 20],
      [140, 20],
      [20, 100],
      [140, 100],
      [80, 60],
    ];
    expect(await worstError(rig, bright)).toBeLessThan(PROMISE);
  });

  it('on a tilted sensor whose axis lies outside of it', async () => {
    const pixels = [150, 110] as const;
    const rig = partOfSensor({
      waves: WAVES,
      lens: { ...none, fNumber: 4 },
      camera: { ...mono(550), pixels, pixelPitchUm: 2.4 },
      mount: { sensorTiltDeg: [0.5, -1] },
    });
    expect(await worstError(rig, spread(pixels))).toBeLessThan(PROMISE);
  });

  it('in every band, of several lines each, with colour along and across the axis', async () => {
    const pixels = [120, 90] as const;
    const bands = [
      {
        name: 'red',
        lines: [
          { nm: 600, weight: 0.4 },
          { nm: 640, weight: 0.6 },
        ],
      },
      {
        name: 'blue',
        lines: [
          { nm: 440, weight: 0.3 },
          { nm: 470, weight: 0.5 },
          { nm: 500, weight: 0.2 },
        ],
      },
    ];
    // the lateral colour of a whole band is the warp's, which has tests of its own: here the mean of each band is 0
    const lateralUm = [
      [440, 2],
      [470, 0],
      [500, -3],
      [600, 1.5],
      [640, -1],
    ] as const;
    const axialUm = [
      [440, 8],
      [640, -5],
    ] as const;
    const rig = partOfSensor({
      waves: WAVES,
      lens: { ...none, fNumber: 2.8, axialUm, lateralUm },
      camera: { pixels, bands },
    });
    expect(await worstError(rig, spread(pixels))).toBeLessThan(PROMISE);
  });

  it.each([2, 3])('with pixels of %i samples a side', async (oversample) => {
    const pixels = [70, 50] as const;
    const rig = partOfSensor({
      waves: WAVES,
      lens: { ...none, fNumber: 2.8 },
      camera: { ...mono(550), pixels },
    });
    expect(await worstError(rig, spread(pixels), { oversample })).toBeLessThan(PROMISE);
  });

  it('with a fill factor of a half, where the pixels are finer than the PSF', async () => {
    const pixels = [90, 70] as const;
    const rig = partOfSensor({
      waves: WAVES,
      lens: { ...none, fNumber: 8, fullFieldMm: 6 },
      camera: { ...mono(550), pixels, fillFactor: 0.5 },
    });
    expect(await worstError(rig, spread(pixels))).toBeLessThan(PROMISE);
  });

  it('through a strong lens: 12 waves of coma at f/2.8 on 3.45 um pixels', async () => {
    const pixels = [150, 110] as const;
    const rig = partOfSensor({
      waves: { W131: 12, W040: 1, W222: 2, W220: 1 },
      lens: { ...none, fNumber: 2.8, fullFieldMm: 4.6 },
      camera: { ...mono(550), pixels },
    });
    const { error, shapeError } = await worstErrors(rig, spread(pixels).slice(0, 3));
    expect(shapeError).toBeLessThan(0.002); // 0.05 % measured
    // Such coma throws the light of all points 10.7 px toward the axis at h = 1, 1333 px out: a uniform scene would come out 1.6 % brighter
    // if it were not evened out, and single points pay for it. 1.2 % measured
    expect(error).toBeLessThan(PROMISE + 0.006);
  });
});
