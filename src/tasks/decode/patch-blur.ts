/** A small piece of the picture through the lens, with the PSF of one place, by the compiled kernels. */
import { Arena } from '../../imaging/arena.js';
import { nextPowerOfTwo } from '../../numeric/fft.js';
import {
  BLUR_SHAPE_BYTES,
  BLUR_TILE_BYTES,
  instantiateKernels,
  type Kernels,
  LARGEST_KERNEL_FFT,
  SMALLEST_KERNEL_FFT,
  writeBlurShape,
  writeBlurTile,
} from '../../numeric/kernels.js';
import type { PatchKernels } from './patch-kernels.js';

/** The largest side of patch and kernel together. */
export const LARGEST_BLUR = LARGEST_KERNEL_FFT;

/** Memory with the kernels on it. One a thread; it serves one `PatchBlur` at a time. */
export class BlurDesk {
  readonly arena = new Arena();
  readonly kernels: Kernels;
  readonly #base: number;

  constructor() {
    this.kernels = instantiateKernels(this.arena.memory);
    this.kernels.prepare(this.arena.allocate(this.kernels.tablesBytes() >>> 0));
    this.#base = this.arena.mark();
  }

  /** Clear the desk: what lay on it must not be used any more. */
  clear(): void {
    this.arena.release(this.#base);
  }
}

/** Blurs patches of one size with the kernels of one place. */
export class PatchBlur {
  readonly #desk: BlurDesk;
  readonly #width: number;
  readonly #height: number;
  readonly #bandCount: number;
  readonly #shape: number;
  /** Addresses of the lists that name a band's spectrum. */
  readonly #lists: number[];
  readonly #tiles: readonly [number, number];
  readonly #sources: readonly [number, number];
  readonly #targets: readonly [number, number];
  readonly #weightsY: number;

  /** @param width, height of a patch in samples; with the kernel no more than `LARGEST_BLUR` + 1 */
  constructor(desk: BlurDesk, kernels: PatchKernels, width: number, height: number) {
    desk.clear();
    this.#desk = desk;
    this.#width = width;
    this.#height = height;
    this.#bandCount = kernels.bands.length;
    const { arena } = desk;
    const { side } = kernels;
    const fftSize = (samples: number) => Math.max(SMALLEST_KERNEL_FFT, nextPowerOfTwo(samples + side - 1));
    const [fftWidth, fftHeight] = [fftSize(width), fftSize(height)];
    this.#lists = this.#spectra(kernels, fftWidth, fftHeight);
    const room = () => arena.allocateFloats(width * height);
    this.#sources = [room(), room()];
    this.#targets = [room(), room()];
    this.#tiles = [arena.allocate(BLUR_TILE_BYTES), arena.allocate(BLUR_TILE_BYTES)];
    this.#weightsY = this.#ones(height);
    this.#shape = arena.allocate(BLUR_SHAPE_BYTES);
    writeBlurShape(arena.memory, this.#shape, {
      fftWidth,
      fftHeight,
      tileWidth: width,
      tileHeight: height,
      kernelSize: side,
      nodesX: 1,
      nodesY: 1,
      weightsX: this.#ones(width),
      scratch: arena.allocate(desk.kernels.blurScratchBytes(fftWidth, fftHeight, 1, 1) >>> 0),
    });
  }

  /** Blur one or two scenes, which share the transforms.
   * @param scenes  width x height samples each, row-major; past the border the scene goes on with its edge
   * @returns for each scene one plane a band. With an even kernel a sample stands for the place half a sample further right and down. */
  blur(scenes: readonly Float64Array[]): Float32Array[][] {
    const { arena, kernels } = this.#desk;
    const [width, height] = [this.#width, this.#height];
    for (const [at, scene] of scenes.entries()) arena.floats(this.#sources[at], width * height).set(scene);
    const results: Float32Array[][] = scenes.map(() => []);
    for (let band = 0; band < this.#bandCount; band++) {
      for (const at of scenes.keys()) {
        arena.floats(this.#targets[at], width * height).fill(0);
        writeBlurTile(arena.memory, this.#tiles[at], {
          source: this.#sources[at],
          sourceStride: 4 * width,
          target: this.#targets[at],
          targetStride: 4 * width,
          frameWidth: width,
          frameHeight: height,
          left: 0,
          top: 0,
          mirror: 0,
          weightsY: this.#weightsY,
          spectra: at === 0 ? this.#lists[band] : 0,
        });
      }
      kernels.blurTiles(this.#shape, this.#tiles[0], scenes.length === 2 ? this.#tiles[1] : 0);
      for (const [at, planes] of results.entries())
        planes.push(Float32Array.from(arena.floats(this.#targets[at], width * height)));
    }
    return results;
  }

  /** The bands' spectra, each with the list of one entry that a tile asks for. */
  #spectra({ side, bands }: PatchKernels, fftWidth: number, fftHeight: number): number[] {
    const { arena, kernels } = this.#desk;
    const kernelAt = arena.allocateFloats(side * side);
    const scratch = arena.allocate(kernels.spectrumScratchBytes(side, fftHeight) >>> 0);
    return bands.map((kernel) => {
      arena.floats(kernelAt, side * side).set(kernel);
      const spectrum = arena.allocate(kernels.spectrumBytes(fftWidth, fftHeight) >>> 0);
      kernels.kernelSpectrum(kernelAt, side, 0, fftWidth, fftHeight, scratch, spectrum);
      const list = arena.allocate(4);
      new Uint32Array(arena.memory.buffer, list, 1)[0] = spectrum;
      return list;
    });
  }

  #ones(count: number): number {
    const { arena } = this.#desk;
    const at = arena.allocateFloats(count);
    arena.floats(at, count).fill(1);
    return at;
  }
}
