/** The varying blur by the compiled kernels, a column of tiles at a time. */
import {
  BLUR_SHAPE_BYTES,
  BLUR_TILE_BYTES,
  type Kernels,
  MIRROR_X,
  MIRROR_Y,
  writeBlurShape,
  writeBlurTile,
} from '../numeric/kernels.js';
import { type BlurGrid, blendWeights } from './blur-grid.js';
import type { NodeKernels } from './node-kernels.js';
import { rounded, type Scratch } from './scratch.js';
import { blurFftSize } from './tile-blur.js';

/** Planes of a blur, as addresses. */
export interface BlurPlanes {
  sourceAt: number;
  outAt: number;
  /** What a scene of ones becomes: all of it, or a quarter where `isFolded`. */
  flatAt: number;
}

/** Whether the four quadrants are blurred together: they mirror each other to the sample, which an even kernel does not. */
export function isFolded(grid: BlurGrid, isMirrored: boolean): boolean {
  return isMirrored && grid.kernelPx % 2 === 1;
}

/** Columns of tiles that must be asked for; the others come with their mirror images. */
export function columnCount(grid: BlurGrid, isMirrored: boolean): number {
  return isFolded(grid, isMirrored) ? Math.ceil(grid.tilesX / 2) : grid.tilesX;
}

/** Bytes of work space of one blur. */
export function blurWorkBytes(kernels: Kernels, grid: BlurGrid): number {
  const size = kernelFftSize(grid);
  const nodes = grid.order + 1;
  const spectra = nodes * nodeRowsKept(grid) * rounded(kernels.spectrumBytes(size, size) >>> 0);
  const work = rounded(kernels.blurScratchBytes(size, size, nodes, nodes) >>> 0);
  const spectrumWork = rounded(kernels.spectrumScratchBytes(grid.kernelPx, size) >>> 0);
  const lines = 5 * rounded(4 * nodes * grid.tilePx) + 2 * rounded(4 * nodes ** 2);
  return spectra + work + spectrumWork + lines + 16 * 64;
}

/** Rows of nodes whose spectra are at hand: those of two tiles, one above the other. */
function nodeRowsKept({ order }: BlurGrid): number {
  return 2 * order + 1;
}

/** The FFT size that the kernels use for a grid. */
export function kernelFftSize(grid: BlurGrid): number {
  return Math.max(64, blurFftSize(grid.tilePx, grid.kernelPx));
}

/** Blurs columns of tiles of one grid. In a rig whose quadrants mirror each other two tiles that mirror each other share their
 * kernels, so that one complex transform serves both. Elsewhere, and for tiles of ones, two neighbours share it. */
export class SimdBlur {
  readonly #kernels: Kernels;
  readonly #scratch: Scratch;
  readonly #nodes: NodeKernels;
  readonly #planes: BlurPlanes;
  readonly #fftSize: number;
  readonly #isFolded: boolean;
  readonly #shape: number;
  readonly #first: number;
  readonly #second: number;
  readonly #weightsX: Floats;
  /** What belongs to single tiles, for two of them in turn: tiles of ones are blurred in pairs, one above the other. */
  readonly #tiles: readonly [TileRoom, TileRoom];
  /** Room for the spectra of some rows of nodes; row r of the grid lies in place r modulo the number of rows. */
  readonly #spectra: number[][];
  readonly #spectrumWork: number;
  readonly #weights: Float64Array;

  constructor(kernels: Kernels, scratch: Scratch, nodes: NodeKernels, planes: BlurPlanes) {
    const { grid } = nodes;
    const side = grid.order + 1;
    this.#kernels = kernels;
    this.#scratch = scratch;
    this.#nodes = nodes;
    this.#planes = planes;
    this.#fftSize = kernelFftSize(grid);
    this.#isFolded = isFolded(grid, nodes.isMirrored);
    this.#shape = scratch.allocate(BLUR_SHAPE_BYTES);
    this.#first = scratch.allocate(BLUR_TILE_BYTES);
    this.#second = scratch.allocate(BLUR_TILE_BYTES);
    this.#weightsX = scratch.floats(side * grid.tilePx);
    this.#tiles = [tileRoom(scratch, side, grid.tilePx), tileRoom(scratch, side, grid.tilePx)];
    this.#weights = new Float64Array(side * grid.tilePx);
    const spectrumBytes = kernels.spectrumBytes(this.#fftSize, this.#fftSize) >>> 0;
    this.#spectra = Array.from({ length: nodeRowsKept(grid) }, () =>
      Array.from({ length: side }, () => scratch.allocate(spectrumBytes)),
    );
    this.#spectrumWork = scratch.allocate(kernels.spectrumScratchBytes(grid.kernelPx, this.#fftSize) >>> 0);
    writeBlurShape(scratch.memory, this.#shape, {
      fftWidth: this.#fftSize,
      fftHeight: this.#fftSize,
      tileWidth: grid.tilePx,
      tileHeight: grid.tilePx,
      kernelSize: grid.kernelPx,
      nodesX: side,
      nodesY: side,
      weightsX: this.#weightsX.address,
      scratch: scratch.allocate(kernels.blurScratchBytes(this.#fftSize, this.#fftSize, side, side) >>> 0),
    });
  }

  /** Blur a column of tiles from top to bottom, with what mirrors it. */
  blurColumn(tileX: number): void {
    const { tilesX, tilesY, originX, width } = this.#nodes.grid;
    this.#weigh(tileX, originX, width, this.#weightsX.values);
    const rows = this.#isFolded ? Math.ceil(tilesY / 2) : tilesY;
    const isOwnMirrorX = 2 * tileX === tilesX - 1;
    for (let tileY = 0; tileY < rows; tileY++) {
      const isOwnMirrorY = 2 * tileY === tilesY - 1;
      const tile = this.#prepare(tileX, tileY);
      if (this.#isFolded) this.#blurMirrored(tile, isOwnMirrorX, isOwnMirrorY);
      this.#prepareOnes(tileY, this.#isFolded && isOwnMirrorX, this.#isFolded && isOwnMirrorY);
      // two tiles, one above the other, share a transform, each with kernels of its own
      if (tileY % 2 === 0 && tileY < rows - 1) continue;
      const pair = tileY % 2 === 1 ? [tileY - 1, tileY] : [tileY];
      const [first, second] = pair.map((at) => this.#tileAt(tileX, at));
      if (!this.#isFolded) this.#blurApart(first, second);
      const [ones, moreOnes] = pair.map((at) => this.#onesTile(this.#tileAt(tileX, at), at));
      this.#blurApart(ones, moreOnes);
    }
  }

  /** Blur a tile together with its mirror images: they are seen mirrored, and have the same kernels then. */
  #blurMirrored(tile: Tile, isOwnMirrorX: boolean, isOwnMirrorY: boolean): void {
    const mirrors = [0, MIRROR_X, MIRROR_Y, MIRROR_X + MIRROR_Y].filter(
      (mirror) => !(isOwnMirrorX && mirror & MIRROR_X) && !(isOwnMirrorY && mirror & MIRROR_Y),
    );
    for (let at = 0; at < mirrors.length; at += 2) {
      const second = at + 1 < mirrors.length ? { ...tile, mirror: mirrors[at + 1] } : undefined;
      this.#blur({ ...tile, mirror: mirrors[at] }, second);
    }
  }

  /** Blur one tile, or two with the same kernels. */
  #blur(first: Tile, second: Tile | undefined): void {
    const { memory } = this.#scratch;
    writeBlurTile(memory, this.#first, first);
    if (second !== undefined) writeBlurTile(memory, this.#second, { ...second, spectra: 0 });
    this.#kernels.blurTiles(this.#shape, this.#first, second === undefined ? 0 : this.#second);
  }

  /** Blur one tile, or two with kernels of their own. */
  #blurApart(first: Tile, second: Tile | undefined): void {
    const { memory } = this.#scratch;
    writeBlurTile(memory, this.#first, first);
    if (second !== undefined) writeBlurTile(memory, this.#second, second);
    this.#kernels.blurTiles(this.#shape, this.#first, second === undefined ? 0 : this.#second);
  }

  /** A tile of the scene, with its weights and spectra in place. */
  #prepare(tileX: number, tileY: number): Tile {
    const { originY, height } = this.#nodes.grid;
    this.#weigh(tileY, originY, height, this.#tiles[tileY % 2].weightsY.values);
    this.#prepareSpectra(tileX, tileY, tileY === 0 ? 0 : 1);
    return this.#tileAt(tileX, tileY);
  }

  #tileAt(tileX: number, tileY: number): Tile {
    const { width, height, originX, originY, tilePx } = this.#nodes.grid;
    const room = this.#tiles[tileY % 2];
    return {
      source: this.#planes.sourceAt,
      sourceStride: 4 * width,
      target: this.#planes.outAt,
      targetStride: 4 * width,
      frameWidth: width,
      frameHeight: height,
      left: originX + tileX * tilePx,
      top: originY + tileY * tilePx,
      mirror: 0,
      weightsY: room.weightsY.address,
      spectra: room.list,
    };
  }

  /** The tile of ones at the same place. */
  #onesTile(tile: Tile, tileY: number): Tile {
    const weightsY = this.#tiles[tileY % 2].onesWeightsY.address;
    return { ...tile, source: 0, target: this.#planes.flatAt, weightsY };
  }

  /** A tile that is its own mirror image counts by half, since its mirror image is added when the picture is divided. */
  #prepareOnes(tileY: number, isOwnMirrorX: boolean, isOwnMirrorY: boolean): void {
    const { weightsY, onesWeightsY } = this.#tiles[tileY % 2];
    const share = (isOwnMirrorX ? 0.5 : 1) * (isOwnMirrorY ? 0.5 : 1);
    for (let i = 0; i < weightsY.values.length; i++) onesWeightsY.values[i] = share * weightsY.values[i];
  }

  /** Spectra of the tile's nodes: those of the rows that the tile above left behind, and new ones.
   * @param firstRow first row of the tile's nodes that is new */
  #prepareSpectra(tileX: number, tileY: number, firstRow: number): void {
    const { order, kernelPx } = this.#nodes.grid;
    const side = order + 1;
    const list = new Uint32Array(this.#scratch.memory.buffer, this.#tiles[tileY % 2].list, side * side);
    for (let j = 0; j <= order; j++) {
      const nodeY = tileY * order + j;
      const room = this.#spectra[nodeY % this.#spectra.length];
      for (let i = 0; i <= order; i++) {
        if (j >= firstRow) {
          const { address, flipX, flipY } = this.#nodes.place(tileX * order + i, nodeY);
          const mirror = (flipX ? MIRROR_X : 0) + (flipY ? MIRROR_Y : 0);
          this.#kernels.kernelSpectrum(
            address,
            kernelPx,
            mirror,
            this.#fftSize,
            this.#fftSize,
            this.#spectrumWork,
            room[i],
          );
        }
        list[j * side + i] = room[i];
      }
    }
  }

  #weigh(tile: number, origin: number, size: number, out: Float32Array): void {
    const { tilePx, order } = this.#nodes.grid;
    blendWeights(tile, origin, tilePx, order, size, this.#weights);
    out.set(this.#weights);
  }
}

type Tile = Parameters<typeof writeBlurTile>[2];
type Floats = ReturnType<Scratch['floats']>;

/** Memory for what belongs to one tile. */
interface TileRoom {
  weightsY: Floats;
  onesWeightsY: Floats;
  /** Address of the list of its nodes' spectra, row by row. */
  list: number;
}

function tileRoom(scratch: Scratch, side: number, tilePx: number): TileRoom {
  return {
    weightsY: scratch.floats(side * tilePx),
    onesWeightsY: scratch.floats(side * tilePx),
    list: scratch.allocate(4 * side * side),
  };
}
