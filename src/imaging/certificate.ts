/** How wrong a blended kernel can be: the certificate of the blur grid. */
import { lagrange } from './blur-grid.js';
import type { KernelSource } from './kernel-source.js';

/** Places inside a tile, as shares of its sides, where the blend is held against the exact kernel: where the error polynomial of the
 * interpolation is largest. Order 1 errs most in the middle, or on an edge where the bends in x and y cancel in the middle; the
 * tile's near edges are its neighbours' far ones. */
const PROBES: Record<number, readonly (readonly [number, number])[]> = {
  1: [
    [0.5, 0.5],
    [1, 0.5],
    [0.5, 1],
  ],
  2: [
    [0.211, 0.211],
    [0.789, 0.789],
    [0.211, 0.789],
    [0.789, 0.211],
  ],
  3: [
    [0.127, 0.127],
    [0.873, 0.873],
    [0.127, 0.5],
    [0.5, 0.873],
  ],
};

/** Number of exact kernels that one tile's check takes. */
export function probeCount(order: number): number {
  return PROBES[order].length;
}

/** A rectangle of the picture over which kernels are blended, in samples, inside the frame. */
export interface TileSpan {
  nearX: number;
  farX: number;
  nearY: number;
  farY: number;
}

/** e = max over the probe points of (1/2) sum |exact - blended|: with kernels of unit sum, no pixel of a 0..1 scene can be wrong by more.
 * @param nodes (order + 1)^2 kernels, row by row
 */
export function blendError(
  source: KernelSource,
  span: TileSpan,
  order: number,
  nodes: readonly ArrayLike<number>[],
  exact: Float32Array,
): number {
  let largest = 0;
  for (const [u, v] of PROBES[order]) {
    source.kernelAt(
      span.nearX + u * (span.farX - span.nearX),
      span.nearY + v * (span.farY - span.nearY),
      exact,
    );
    largest = Math.max(largest, halfL1(exact, nodes, order, u, v));
  }
  return largest;
}

function halfL1(
  exact: Float32Array,
  nodes: readonly ArrayLike<number>[],
  order: number,
  u: number,
  v: number,
): number {
  const weights = nodes.map(
    (_, i) => lagrange(i % (order + 1), order, u) * lagrange(Math.floor(i / (order + 1)), order, v),
  );
  let sum = 0;
  for (let i = 0; i < exact.length; i++) {
    let blended = 0;
    for (let k = 0; k < nodes.length; k++) blended += weights[k] * nodes[k][i];
    sum += Math.abs(exact[i] - blended);
  }
  return sum / 2;
}

/** The error of a tile whose node kernels are not at hand: computes them first. */
export function blendErrorOfSpan(
  source: KernelSource,
  span: TileSpan,
  order: number,
  kernelPx: number,
): number {
  const nodes: Float32Array[] = [];
  for (let j = 0; j <= order; j++) {
    for (let i = 0; i <= order; i++) {
      const kernel = new Float32Array(kernelPx * kernelPx);
      const x = span.nearX + ((span.farX - span.nearX) * i) / order;
      const y = span.nearY + ((span.farY - span.nearY) * j) / order;
      source.kernelAt(x, y, kernel);
      nodes.push(kernel);
    }
  }
  return blendError(source, span, order, nodes, new Float32Array(kernelPx * kernelPx));
}
