/** The kernels at the nodes of a grid, as they lie in shared memory. */
import { type BlurGrid, nodePosition } from './blur-grid.js';

/** Where the kernels of a grid lie: one a node, or, where the four quadrants mirror each other, one a node of the upper left quadrant. Nodes of
 * tiles that lie outside of the frame stand on its border and share the kernel there. */
export class NodeKernels {
  readonly grid: BlurGrid;
  readonly isMirrored: boolean;
  readonly #kernels: Float32Array;
  readonly #x: NodeRange;
  readonly #y: NodeRange;
  readonly #slotsX: number;
  readonly #slotsY: number;

  /** @param kernels slotCount kernels of kernelPx x kernelPx samples each, one after the other */
  constructor(grid: BlurGrid, isMirrored: boolean, kernels: Float32Array) {
    this.grid = grid;
    this.isMirrored = isMirrored;
    this.#kernels = kernels;
    [this.#x, this.#y] = distinctNodes(grid);
    [this.#slotsX, this.#slotsY] = slotSides(grid, isMirrored);
  }

  /** A number that is the same for the same kernel. */
  key(nodeX: number, nodeY: number): number {
    return indexIn(this.#y, nodeY) * this.#x.count + indexIn(this.#x, nodeX);
  }

  /** Where the kernel of a node lies, and how it is mirrored from there. */
  place(nodeX: number, nodeY: number): { slot: number; address: number; flipX: boolean; flipY: boolean } {
    const x = indexIn(this.#x, nodeX);
    const y = indexIn(this.#y, nodeY);
    const flipX = this.isMirrored && x >= this.#slotsX;
    const flipY = this.isMirrored && y >= this.#slotsY;
    const slot = (flipY ? this.#y.count - 1 - y : y) * this.#slotsX + (flipX ? this.#x.count - 1 - x : x);
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
    const nodeX = this.#x.first + (slot % this.#slotsX);
    const nodeY = this.#y.first + Math.floor(slot / this.#slotsX);
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
  const [x, y] = distinctNodes(grid).map(({ count }) => (isMirrored ? Math.ceil(count / 2) : count));
  return [x, y];
}

/** Nodes along an axis that stand at places of their own, from the last one on the near border of the frame to the first on the far one. */
interface NodeRange {
  first: number;
  count: number;
}

function distinctNodes({ width, height, originX, originY, tilePx, order }: BlurGrid): [NodeRange, NodeRange] {
  const range = (origin: number, size: number): NodeRange => {
    const first = Math.floor(-origin / tilePx) * order;
    const last = Math.ceil((size - origin) / tilePx) * order;
    return { first, count: last - first + 1 };
  };
  return [range(originX, width), range(originY, height)];
}

function indexIn({ first, count }: NodeRange, node: number): number {
  return Math.min(count - 1, Math.max(0, node - first));
}
