import { describe, expect, it } from 'vitest';
import { blendError, blendErrorOfSpan, probeCount, type TileSpan } from '../../src/imaging/certificate.js';
import { KernelSource, kernelSampling } from '../../src/imaging/kernel-source.js';
import { KernelMaker } from '../../src/optics/psf.js';
import { sampleRig } from '../optics/samples.js';

const KERNEL_PX = 15;
const SPAN: TileSpan = { nearX: 100, farX: 180, nearY: 60, farY: 140 };

/** Kernels of two samples whose light moves from the first to the second by a law of the place. */
function movingLight(share: (x: number, y: number) => number) {
  const source = {
    kernelAt(x: number, y: number, out: Float32Array | Float64Array) {
      out.fill(0);
      out[0] = 1 - share(x, y);
      out[1] = share(x, y);
    },
  };
  return source as unknown as KernelSource;
}

describe('blendError', () => {
  it.each([1, 2, 3])('is nothing where kernels follow a polynomial of order %i', (order) => {
    const polynomial = (u: number) =>
      0.3 + 0.2 * u + (order > 1 ? 0.1 * u * u : 0) - (order > 2 ? 0.2 * u ** 3 : 0);
    const source = movingLight((x, y) => polynomial((x - 100) / 80) * polynomial((y - 60) / 80));
    // float32 kernels: a few roundings of 6e-8
    expect(blendErrorOfSpan(source, SPAN, order, 3)).toBeLessThan(5e-7);
  });

  it('of a bend is the height of the bend: half the sum of the differences', () => {
    // a bilinear blend of u^2 misses 1/4 in the middle; so much light stands in the wrong one of two samples
    const source = movingLight((x) => ((x - 100) / 80) ** 2);
    expect(blendErrorOfSpan(source, SPAN, 1, 3)).toBeCloseTo(0.25, 6);
  });

  it('sees bends in x and y that cancel in the middle of the tile', () => {
    const source = movingLight((x, y) => 0.5 + ((x - 100) / 80) ** 2 / 4 - ((y - 60) / 80) ** 2 / 4);
    expect(blendErrorOfSpan(source, SPAN, 1, 3)).toBeCloseTo(0.25 / 4, 6);
  });

  it('takes kernels that are at hand', () => {
    const source = movingLight((x) => ((x - 100) / 80) ** 2);
    const nodes = [100, 180, 100, 180].map((x) => {
      const kernel = new Float32Array(9);
      source.kernelAt(x, 60, kernel);
      return kernel;
    });
    expect(blendError(source, SPAN, 1, nodes, new Float32Array(9))).toBe(
      blendErrorOfSpan(source, SPAN, 1, 3),
    );
  });

  it.each([1, 2, 3])('of real PSFs of order %i is found at a few places almost whole', (order) => {
    const rig = sampleRig({
      waves: { W040: 0.5, W131: 1.5, W222: 1, W220: -0.7 },
      lens: { fNumber: 2.8, fullFieldMm: 0.8 },
    });
    const maker = new KernelMaker(kernelSampling(rig, 1, KERNEL_PX));
    const source = new KernelSource(rig, rig.camera.bands[0], 1, maker);
    const span = { nearX: 1040, farX: 1090, nearY: 780, farY: 830 };
    const found = blendErrorOfSpan(source, span, order, KERNEL_PX);
    expect(probeCount(order)).toBeLessThanOrEqual(4);
    // the same at 8 x 8 places
    const nodes: Float32Array[] = [];
    for (let j = 0; j <= order; j++) {
      for (let i = 0; i <= order; i++) {
        const kernel = new Float32Array(KERNEL_PX ** 2);
        source.kernelAt(1040 + (50 * i) / order, 780 + (50 * j) / order, kernel);
        nodes.push(kernel);
      }
    }
    let largest = 0;
    const weight = (node: number, u: number) => {
      let value = 1;
      for (let other = 0; other <= order; other++) {
        if (other !== node) value *= (u * order - other) / (node - other);
      }
      return value;
    };
    const exact = new Float64Array(KERNEL_PX ** 2);
    for (let v = 1 / 16; v < 1; v += 1 / 8) {
      for (let u = 1 / 16; u < 1; u += 1 / 8) {
        source.kernelAt(1040 + 50 * u, 780 + 50 * v, exact);
        let sum = 0;
        exact.forEach((value, k) => {
          let blended = 0;
          nodes.forEach((node, at) => {
            blended += weight(at % (order + 1), u) * weight(Math.floor(at / (order + 1)), v) * node[k];
          });
          sum += Math.abs(value - blended);
        });
        largest = Math.max(largest, sum / 2);
      }
    }
    // 1 % too low at worst here; the probes stand where the error polynomial is largest, the 8 x 8 places do not quite
    expect(found).toBeGreaterThan(0.9 * largest);
  });
});
