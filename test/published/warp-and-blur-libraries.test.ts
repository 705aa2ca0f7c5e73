/** Warp and blur against a general-purpose image library: OpenCV 4.3.0 in the package opencv-wasm 4.3.0-10. */
import { describe, expect, it } from 'vitest';
import { sensorFrame } from '../../src/imaging/sensor-frame.js';
import { CounterRandom } from '../../src/numeric/random.js';
import { distortionMap } from '../../src/optics/distortion.js';
import { KernelMaker } from '../../src/optics/psf.js';
import type { Rig, Waves } from '../../src/optics/rig.js';
import { wavefrontAt } from '../../src/optics/wavefront.js';
import { sampleRig } from '../optics/samples.js';
import { useFormer } from '../support/form.js';
import { cv, type Mat } from '../support/image-library.js';

const { form, crew } = useFormer();

const mat = (width: number, height: number, values: ArrayLike<number>): Mat =>
  cv.matFromArray(height, width, cv.CV_32FC1, values);

function planeOf(width: number, height: number, value: (x: number, y: number) => number): Float32Array {
  return Float32Array.from({ length: width * height }, (_, i) => value(i % width, Math.floor(i / width)));
}

function largestDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  expect(a.length).toBe(b.length);
  let most = 0;
  for (let i = 0; i < a.length; i++) most = Math.max(most, Math.abs(a[i] - b[i]));
  return most;
}

describe('blur by one PSF', () => {
  const [width, height] = [96, 70];

  it.each([
    ['spherical aberration and defocus', { W040: 1, W220: 0 }, 0.6],
    ['coma, of one field point', { W131: 1.5, W040: 0.3 }, 0],
  ])('is filter2D with the edge repeated: %s', async (_, waves: Partial<Waves>, shiftWaves) => {
    // a field so large that the frame, far off its axis, sees one PSF
    const rig = sampleRig({
      waves,
      lens: { fNumber: 2.8, fullFieldMm: 400_000, relativeIllumination: 'none' },
      camera: { pixels: [width, height] },
      mount: { axisPx: [-92_800_000, -69_600_000], sensorShiftUm: shiftWaves * 8 * 2.8 ** 2 * 0.55 },
    });
    const draw = new CounterRandom(11, 0);
    draw.start(0);
    const scene = planeOf(width, height, () => draw.uniform());
    const { planes, accuracy } = await form(rig, [scene]);
    expect(accuracy.blendBound).toBeLessThan(1e-6);
    const { kernelPx } = accuracy;
    const mm = 0.00345;
    const seen = wavefrontAt(rig, 92_800_048 * mm, 69_600_035 * mm, 550);
    expect(Math.abs(seen.w31)).toBeCloseTo(waves.W131 ?? 0, 2);
    const sampling = { fNumber: 2.8, pitchUm: 3.45, boxUm: 3.45, shortestNm: 550, kernelPx };
    const kernel = new Float64Array(kernelPx ** 2);
    new KernelMaker(sampling).bandKernel([{ nm: 550, weight: 1, wavefront: seen }], kernel);
    const source = mat(width, height, scene);
    // the library correlates; a picture spreads with its PSF the other way round
    const turned = mat(kernelPx, kernelPx, Float32Array.from(kernel).reverse());
    const out = new cv.Mat();
    cv.filter2D(source, out, cv.CV_32F, turned, new cv.Point(-1, -1), 0, cv.BORDER_REPLICATE);
    // float32 transforms and float32 sums: 4e-7 measured
    expect(largestDifference(planes[0], out.data32F)).toBeLessThan(2e-6);
    for (const each of [source, turned, out]) each.delete();
  });
});

describe('the warp', () => {
  const [width, height] = [160, 120];

  /** Barrel or pincushion with a shift of so many pixels in the corner farthest from the axis. */
  function shifting(shiftPx: number): Rig {
    const rig = sampleRig({
      lens: { relativeIllumination: 'none' },
      camera: { pixels: [width, height] },
      mount: { axisPx: [-500, -300] },
    });
    const h = (Math.hypot(660, 420) * 0.00345) / 4;
    const W311 = (-shiftPx * 3.45) / (2 * 4 * 0.55 * h ** 3);
    return { ...rig, lens: { ...rig.lens, waves: { ...rig.lens.waves, W311 } } };
  }

  async function warped(rig: Rig, scene: Float32Array): Promise<Float32Array> {
    const { arena } = crew();
    const mark = arena.mark();
    const sceneAt = arena.allocateFloats(scene.length);
    const outAt = arena.allocateFloats(scene.length);
    arena.floats(sceneAt, scene.length).set(scene);
    const setup = { rig, bandIndex: 0, oversample: 1 };
    await crew().run({
      kind: 'warp',
      setup,
      planes: [{ sceneAt, outAt }],
      rowsPerTask: 32,
      count: Math.ceil(height / 32),
    });
    const out = Float32Array.from(arena.floats(outAt, scene.length));
    arena.release(mark);
    return out;
  }

  /** Ideal places by Newton's iteration on r' = r + c r^3, not by the closed form. */
  function idealPlaces(rig: Rig): { x: Float32Array; y: Float32Array } {
    const { axisX, axisY, pitchMm } = sensorFrame(rig, rig.camera.bands[0], 1);
    const { c } = distortionMap(rig.lens);
    const shrink = (x: number, y: number) => {
      const landed = Math.hypot(x - axisX, y - axisY) * pitchMm;
      let r = landed;
      for (let step = 0; step < 30; step++) r -= (r + c * r ** 3 - landed) / (1 + 3 * c * r ** 2);
      return r / landed;
    };
    return {
      x: planeOf(width, height, (x, y) => axisX + (x - axisX) * shrink(x, y)),
      y: planeOf(width, height, (x, y) => axisY + (y - axisY) * shrink(x, y)),
    };
  }

  it.each([40, -40, 3, -3])(
    'with shifts up to %f px is remap by cubic and by Lanczos interpolation',
    async (shiftPx) => {
      const rig = shifting(shiftPx);
      // A smooth picture, no steeper than 0.0304 a pixel along x and 0.0295 along y. The library rounds places to 1/32 px, so its values are up
      // to 1/64 of both slopes wrong, 9.4e-4
      const scene = planeOf(
        width,
        height,
        (x, y) =>
          0.5 +
          0.25 * Math.sin((2 * Math.PI * (x + 0.4 * y)) / 64) * Math.cos((2 * Math.PI * (y - 0.3 * x)) / 80),
      );
      const out = await warped(rig, scene);
      const places = idealPlaces(rig);
      const source = mat(width, height, scene);
      const [mapX, mapY] = [mat(width, height, places.x), mat(width, height, places.y)];
      for (const [interpolation, limit] of [
        [cv.INTER_LANCZOS4, 1e-3], // 9.4e-4 measured
        // its cubic has a = -0.75, which is not exact for quadratics: another (0.75 - 0.5) / 4 of the second differences, 0.003 in x and in y
        [cv.INTER_CUBIC, 2.5e-3], // 2.1e-3 measured
      ]) {
        const found = new cv.Mat();
        cv.remap(source, found, mapX, mapY, interpolation, cv.BORDER_REPLICATE, new cv.Scalar());
        let worst = 0;
        let sum = 0;
        let count = 0;
        out.forEach((value, i) => {
          const [x, y] = [places.x[i], places.y[i]];
          if (x < 5 || y < 5 || x > width - 6 || y > height - 6) return; // 8 x 8 samples see the edge before 4 x 4 do
          const difference = value - found.data32F[i];
          worst = Math.max(worst, Math.abs(difference));
          sum += difference;
          count++;
        });
        expect(count).toBeGreaterThan(0.3 * out.length);
        expect(worst).toBeLessThan(limit);
        // its roundings prefer no side, so a picture that stood off as a whole, by 1e-3 px and more, would show in the mean
        expect(Math.abs(sum / count)).toBeLessThan(3e-5);
        found.delete();
      }
      // the picture did move, or all of this would prove nothing
      expect(largestDifference(out, scene)).toBeGreaterThan(0.05);
      for (const each of [source, mapX, mapY]) each.delete();
    },
  );

  it('repeats the edge of the scene past its frame', async () => {
    const rig = shifting(-60);
    const scene = planeOf(width, height, (x, y) => 0.5 + 0.3 * Math.sin(x / 9) + 0.1 * Math.cos(y / 7));
    const out = await warped(rig, scene);
    const places = idealPlaces(rig);
    expect(Math.max(...places.x)).toBeGreaterThan(width + 20);
    const [source, mapX, mapY] = [
      mat(width, height, scene),
      mat(width, height, places.x),
      mat(width, height, places.y),
    ];
    const found = new cv.Mat();
    cv.remap(source, found, mapX, mapY, cv.INTER_CUBIC, cv.BORDER_REPLICATE, new cv.Scalar());
    expect(largestDifference(out, found.data32F)).toBeLessThan(3.5e-3); // slopes of 0.035 a pixel, its rounding and its cubic: 2.7e-3 measured
    for (const each of [source, mapX, mapY, found]) each.delete();
  });
});
