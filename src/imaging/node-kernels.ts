/** The kernels at the nodes of a grid, as they lie in shared memory. */
import { type BlurGrid, nodeCount, nodePosition } from './blur-grid.js';

/** Where the kernels of a grid lie: one a node, or, where the four quadrants mirror each other, one a node of the upper left quadrant. */
export class NodeKernels {
  readonly grid: BlurGrid;
  readonly isMirrored: boolean;
  readonly #kernels: Float32Array;
  readonly #nodesX: number;
  readonly #nodesY: number;
  readonly #slotsX: number;
  readonly #slotsY: number;

  /** @param kernels slotCount kernels of kernelPx x kernelPx samples each, one after the other */
  constructor(grid: BlurGrid, isMirrored: boolean, kernels: Float32Array) {
    this.grid = grid;
    this.isMirrored = isMirrored;
    this.#kernels = kernels;
    this.#nodesX = nodeCount(grid.tilesX, grid.order);
    this.#nodesY = nodeCount(grid.tilesY, grid.order);
    [this.#slotsX, this.#slotsY] = slotSides(grid, isMirrored);
  }

  /** A number that is the same for the same kernel. */
  key(nodeX: number, nodeY: number): number {
    return nodeY * this.#nodesX + nodeX;
  }

  /** Where the kernel of a node lies, and how it is mirrored from there. */
  place(nodeX: number, nodeY: number): { slot: number; address: number; flipX: boolean; flipY: boolean } {
    const flipX = this.isMirrored && nodeX >= this.#slotsX;
    const flipY = this.isMirrored && nodeY >= this.#slotsY;
    const slot =
      (flipY ? this.#nodesY - 1 - nodeY : nodeY) * this.#slotsX + (flipX ? this.#nodesX - 1 - nodeX : nodeX);
    const address = this.#kernels.byteOffset + 4 * slot * this.grid.kernelPx ** 2;
    return { slot, address, flipX, flipY };
  }

  /** The kernel of a node; a copy where it is mirrored from another quadrant. */
  kernel(nodeX: number, nodeY: number): Float32Array {
    const { kernelPx } = this.grid;
    const { slot, flipX, flipY } = this.place(nodeX, nodeY);
    const kernel = this.slot(slot);
    if (!flipX && !flipY) return kernel;
    const mirrored = new Float32Array(kernel.length);
    for (let row = 0; row < kernelPx; row++) {
      for (let column = 0; column < kernelPx; column++) {
        const from = (flipY ? kernelPx - 1 - row : row) * kernelPx + (flipX ? kernelPx - 1 - column : column);
        mirrored[row * kernelPx + column] = kernel[from];
      }
    }
    return mirrored;
  }

  /** The kernel of a slot, in place. */
  slot(slot: number): Float32Array {
    const size = this.grid.kernelPx ** 2;
    return this.#kernels.subarray(slot * size, (slot + 1) * size);
  }

  /** Place of a slot's node in the picture, in samples. */
  slotPosition(slot: number): [x: number, y: number] {
    const { originX, originY, tilePx, order, width, height } = this.grid;
    const nodeX = slot % this.#slotsX;
    const nodeY = Math.floor(slot / this.#slotsX);
    return [
      nodePosition(nodeX, originX, tilePx, order, width),
      nodePosition(nodeY, originY, tilePx, order, height),
    ];
  }
}

/** Number of kernels that a grid keeps. */
export function slotCount(grid: BlurGrid, isMirrored: boolean): number {
  const [slotsX, slotsY] = slotSides(grid, isMirrored);
  return slotsX * slotsY;
}

function slotSides(grid: BlurGrid, isMirrored: boolean): [number, number] {
  const nodesX = nodeCount(grid.tilesX, grid.order);
  const nodesY = nodeCount(grid.tilesY, grid.order);
  return isMirrored ? [Math.ceil(nodesX / 2), Math.ceil(nodesY / 2)] : [nodesX, nodesY];
}
