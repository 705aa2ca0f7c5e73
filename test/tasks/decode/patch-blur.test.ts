import { describe, expect, it } from 'vitest';
import { distortionMap } from '../../../src/optics/distortion.js';
import { bandLines } from '../../../src/optics/otf.js';
import { KernelMaker } from '../../../src/optics/psf.js';
import type { Rig } from '../../../src/optics/rig.js';
import type { Place } from '../../../src/tasks/bench.js';
import { BlurDesk, PatchBlur } from '../../../src/tasks/decode/patch-blur.js';
import { patchKernels } from '../../../src/tasks/decode/patch-kernels.js';
import { COLOUR, placeAt, taskRig } from '../rigs.js';

const SIDE = 40; // pixels

/** A dark rectangle turned by 20 degrees: its shares on a grid of samples, by 8 x 8 points in each. */
function scene(oversample: number): Float64Array {
  const n = SIDE * oversample;
  const out = new Float64Array(n * n);
  const [c, s] = [Math.cos(0.35), Math.sin(0.35)];
  for (let row = 0; row < n; row++)
    for (let column = 0; column < n; column++)
      for (let i = 0; i < 64; i++) {
        const x = (column + ((i % 8) + 0.5) / 8) / oversample - SIDE / 2;
        const y = (row + (Math.floor(i / 8) + 0.5) / 8) / oversample - SIDE / 2;
        const isDark = Math.abs(c * x + s * y) < 4.3 && Math.abs(-s * x + c * y) < 2.6;
        if (isDark) out[row * n + column] += 1 / 64;
      }
  return out;
}

/** The pixels of a band by a plain sum over points 5 a pixel, with the exact samples of the PSF over a pixel. */
function directly(rig: Rig, { xMm, yMm }: Place, band = 0): Float64Array {
  const fine = 5;
  const kernelPx = 161;
  const shortestNm = Math.min(...rig.camera.bands.flatMap(({ lines }) => lines.map(({ nm }) => nm)));
  const maker = new KernelMaker({ fNumber: rig.mount.fNumber, pitchUm: 1, boxUm: 5, shortestNm, kernelPx });
  const kernel = new Float64Array(kernelPx * kernelPx);
  maker.bandKernel(bandLines(rig, xMm, yMm, rig.camera.bands[band]), kernel);
  const points = scene(fine);
  const n = SIDE * fine;
  const middle = (kernelPx - 1) / 2;
  const out = new Float64Array(SIDE * SIDE);
  for (let row = 0; row < SIDE; row++)
    for (let column = 0; column < SIDE; column++) {
      let sum = 0;
      for (let dy = -middle; dy <= middle; dy++) {
        const y = row * fine + 2 - dy; // the middle of a pixel is its third point
        if (y < 0 || y >= n) continue;
        for (let dx = -middle; dx <= middle; dx++) {
          const x = column * fine + 2 - dx;
          if (x < 0 || x >= n) continue;
          sum += points[y * n + x] * kernel[(dy + middle) * kernelPx + dx + middle];
        }
      }
      out[row * SIDE + column] = sum;
    }
  return out;
}

function blurred(rig: Rig, place: Place, oversample: number, scenes = [scene(oversample)]): Float64Array[][] {
  const n = SIDE * oversample;
  const kernels = patchKernels(rig, place, oversample, 200);
  const planes = new PatchBlur(new BlurDesk(), kernels, n, n).blur(scenes);
  return planes.map((bands) =>
    bands.map((plane) =>
      Float64Array.from({ length: SIDE * SIDE }, (_, i) => {
        const [row, column] = [Math.floor(i / SIDE), i % SIDE];
        const middle = (oversample - 1) >> 1;
        return plane[(oversample * row + middle) * n + oversample * column + middle];
      }),
    ),
  );
}

function farthest(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let most = 0;
  for (let i = 0; i < a.length; i++) most = Math.max(most, Math.abs(a[i] - b[i]));
  return most;
}

describe('a patch through the lens', () => {
  // What is finer than the samples is folded. Measured: 0.009 of full scale with three samples a pixel, 0.03 with two, 0.14 with one. The kernel's
  // tail of 1 % of the light is given back by normalising.
  it.each([
    ['a lens without aberrations', {}, 3, 0.012],
    ['coma and astigmatism', { W131: 1.2, W222: 0.8, W220: -0.3 }, 3, 0.012],
    ['two samples a pixel', {}, 2, 0.04],
    ['one sample a pixel', {}, 1, 0.17],
  ])('is the sum over the PSF: %s', (_, waves, oversample, most) => {
    const rig = taskRig({ waves });
    const place = placeAt(rig, 0.9);
    expect(farthest(blurred(rig, place, oversample)[0][0], directly(rig, place))).toBeLessThan(most);
  });

  it('moves the bands apart by lateral colour, about their mean', () => {
    const rig = taskRig({ camera: COLOUR, lens: { colour: { lateral_um: { 460: 6, 540: 0, 620: -6 } } } });
    const place = placeAt(rig, 1);
    const bands = blurred(rig, place, 2)[0];
    const centroid = (plane: Float64Array) => {
      const total = plane.reduce((sum, value) => sum + value, 0);
      return plane.reduce((sum, value, i) => sum + (i % SIDE) * value, 0) / total;
    };
    const shift = (band: number) =>
      (1000 * (distortionMap(rig.lens, rig.camera.bands[band]).distorted(2) - 2)) / 5;
    for (const band of [0, 1, 2])
      expect(Math.abs(centroid(bands[band]) - (SIDE - 1) / 2 - shift(band))).toBeLessThan(0.02);
  });

  it('blurs two scenes at once as it blurs each alone', () => {
    const rig = taskRig({ waves: { W131: 1.2 } });
    const place = placeAt(rig, 1);
    const one = scene(2);
    const other = one.toReversed();
    const together = blurred(rig, place, 2, [one, other]);
    const alone = [one, other].map((plane) => blurred(rig, place, 2, [plane])[0]);
    for (const at of [0, 1]) expect(farthest(together[at][0], alone[at][0])).toBeLessThan(1e-5); // float32
  });

  it('cuts a kernel for which there is no room, and keeps its light', () => {
    const rig = taskRig({ waves: { W020: 40 } });
    const { side, bands } = patchKernels(rig, placeAt(rig, 0), 2, 100);
    expect(side).toBeLessThanOrEqual(100);
    expect(bands[0].reduce((sum, value) => sum + value, 0)).toBeCloseTo(1, 2);
  });
});
