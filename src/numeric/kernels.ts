/** The door to the compiled kernels of `src/kernels`: loads them and gives their functions types.
 *
 * All of them work on one shared memory that the caller owns, by addresses (byte offsets, multiples of 16 unless said otherwise).
 * The module keeps no data there but what `prepare` writes. Addresses above 2^31 must be passed as they are; JavaScript's numbers hold
 * them, and the kernels read them as unsigned.
 *
 * Shapes: a "complex row" is 32 bytes, the real parts of four neighbouring columns and then their imaginary parts; a "panel" is n complex
 * rows, four columns of a transform side by side. Spectra lie in digit-reversed order: frequency k in row `positionOf(k, n)`.
 */
import { readFileSync } from 'node:fs';

/** Sizes that the transforms know: powers of two between these. */
export const SMALLEST_KERNEL_FFT = 64;
export const LARGEST_KERNEL_FFT = 2048;

/** Bytes of a complex row. */
export const COMPLEX_ROW_BYTES = 32;

/** The functions of the kernels. See `src/kernels` for the equations. */
export interface Kernels {
  /** Bytes that `prepare` fills. */
  tablesBytes(): number;
  /** Fill the tables at an address that stays reserved; once for each instance, before anything else. */
  prepare(at: number): void;

  /** Row of frequency k in a spectrum of n. */
  positionOf(k: number, n: number): number;
  /** Transform a panel forward, exp(-i), unscaled. Row r is multiplied by weights[r]; rows from `used` on count as zero and are not
   * read. @param weights address of `used` float32 numbers. @param target may be `source` */
  forward(source: number, weights: number, used: number, target: number, n: number): void;
  /** As `forward`, worked out in `panel` and written as lines: positions 4m ... 4m + 3 become the lanes of line m, which starts at
   * lines + m * lineBytes and takes one complex row for each of the four columns. Real and imaginary parts have weights of their own. */
  forwardToLines(
    source: number,
    weightsRe: number,
    weightsIm: number,
    used: number,
    panel: number,
    n: number,
    lines: number,
    lineBytes: number,
  ): void;
  /** Transform a panel back, exp(+i), unscaled. `source` is overwritten; `target` may be `source`. */
  inverse(source: number, target: number, n: number): void;
  /** As `inverse`, the spectrum read from lines as `forwardToLines` writes them. */
  inverseFromLines(lines: number, lineBytes: number, panel: number, n: number): void;

  /** Bytes of a kernel's half spectrum. */
  spectrumBytes(fftWidth: number, fftHeight: number): number;
  /** Bytes of work space that `kernelSpectrum` takes. */
  spectrumScratchBytes(kernelSize: number, fftHeight: number): number;
  /** The half spectrum of a real kernel of kernelSize x kernelSize float32 numbers, for `blurTiles`.
   * @param mirror MIRROR_X, MIRROR_Y, their sum or 0: the kernel is read mirrored */
  kernelSpectrum(
    kernel: number,
    kernelSize: number,
    mirror: number,
    fftWidth: number,
    fftHeight: number,
    scratch: number,
    spectrum: number,
  ): void;

  /** Bytes of work space that `blurTiles` takes. */
  blurScratchBytes(fftWidth: number, fftHeight: number, nodesX: number, nodesY: number): number;
  /** Blur one tile, or two at the price of little more than one, and add the results to their targets. The tiles share the weights along
   * x; they may have kernels and weights along y of their own, lie in different planes and overlap in any way.
   * @param shape address of a block as `writeBlurShape` writes it
   * @param first address of a block as `writeBlurTile` writes it
   * @param second the same, or 0 for none */
  blurTiles(shape: number, first: number, second: number): void;

  /** Bytes of work space that `psfIntensity` takes. */
  psfScratchBytes(n: number, half: number): number;
  /** The intensity of a PSF on a window of its fine grid. @param request address of a block as `writePsfRequest` writes it */
  psfIntensity(request: number): void;
  /** Add the pixels of a PSF to `sum`; see `src/kernels/pixel-box.ts`. */
  addPixels(
    intensity: number,
    side: number,
    taps: number,
    tapCount: number,
    perPixel: number,
    pixels: number,
    scale: number,
    lines: number,
    sum: number,
  ): void;

  /** Warp and light some rows; `lightRows` where nothing is moved. @param request address of a block as `writeWarpRequest` writes it */
  warpRows(request: number, rowStart: number, rowEnd: number): void;
  lightRows(request: number, rowStart: number, rowEnd: number): void;

  /** Divide a row of the picture by the blurred ones, or by four quadrants' worth of them. */
  divideRow(out: number, flat: number, width: number): void;
  divideMirroredRow(out: number, flat: number, opposite: number, width: number): void;
  /** Set bytes to 0. */
  clear(at: number, bytes: number): void;
}

/** How a plane or a kernel is seen: mirrored left to right, top to bottom. The sum means both. */
export const MIRROR_X = 1;
export const MIRROR_Y = 2;

/** What the tiles of one call have in common. All addresses are byte offsets into the shared memory. */
export interface BlurShape {
  /** Sizes of the transforms along x and y: powers of two from SMALLEST_KERNEL_FFT to LARGEST_KERNEL_FFT. */
  fftWidth: number;
  fftHeight: number;
  /** Sides of a tile: at most fftWidth - kernelSize + 1 and fftHeight - kernelSize + 1. */
  tileWidth: number;
  tileHeight: number;
  /** Side of the kernels, odd where tiles or kernels are mirrored. Sample floor(kernelSize/2) is the middle. */
  kernelSize: number;
  nodesX: number;
  nodesY: number;
  /** Address of float32[nodesX][tileWidth]. */
  weightsX: number;
  /** Address of `blurScratchBytes` bytes that no other thread touches. */
  scratch: number;
}

/** One tile: where it is read, where its result is added, with which kernels. */
export interface BlurTile {
  /** Addresses of the planes, float32, and the bytes from one of their rows to the next. Source 0 stands for a scene of ones, in both tiles
   * of a call; that takes about half the time. */
  source: number;
  sourceStride: number;
  target: number;
  targetStride: number;
  /** Size of both planes. Tiles may reach past them: there the source's edge goes on, and results are dropped. */
  frameWidth: number;
  frameHeight: number;
  /** First sample of the tile in the frame as it is seen, see `mirror`. */
  left: number;
  top: number;
  /** MIRROR_X, MIRROR_Y, their sum or 0: both planes are seen mirrored. */
  mirror: number;
  /** Address of float32[nodesY][tileHeight]. */
  weightsY: number;
  /** Address of uint32[nodesY][nodesX], the addresses of the nodes' spectra. A node with address 0 in the list is left out (of both
   * tiles). In a second tile 0 in place of the list's address means: the kernels of the first, which is the fastest. */
  spectra: number;
}

export const BLUR_SHAPE_BYTES = 36;
export const BLUR_TILE_BYTES = 44;

/** Write a shape's block at `at`. */
export function writeBlurShape(memory: WebAssembly.Memory, at: number, shape: BlurShape): void {
  const { fftWidth, fftHeight, tileWidth, tileHeight, kernelSize, nodesX, nodesY, weightsX, scratch } = shape;
  new Uint32Array(memory.buffer, at, BLUR_SHAPE_BYTES / 4).set([
    fftWidth,
    fftHeight,
    tileWidth,
    tileHeight,
    kernelSize,
    nodesX,
    nodesY,
    weightsX,
    scratch,
  ]);
}

/** Write a tile's block at `at`. */
export function writeBlurTile(memory: WebAssembly.Memory, at: number, tile: BlurTile): void {
  const { source, sourceStride, target, targetStride, frameWidth, frameHeight } = tile;
  const { left, top, mirror, weightsY, spectra } = tile;
  new Uint32Array(memory.buffer, at, BLUR_TILE_BYTES / 4).set([
    source,
    sourceStride,
    target,
    targetStride,
    frameWidth,
    frameHeight,
    left,
    top,
    mirror,
    weightsY,
    spectra,
  ]);
}

let compiled: WebAssembly.Module | undefined;

/** The compiled kernels, read from the build. Compiled once in each thread, or sent to workers, who then share the machine code.
 * @throws {Error} where the build is missing */
export function kernelModule(): WebAssembly.Module {
  if (compiled === undefined) {
    const file = new URL('../../dist/kernels/foreglass.wasm', import.meta.url);
    let bytes: Uint8Array;
    try {
      bytes = readFileSync(file);
    } catch (cause) {
      throw new Error(`the compiled kernels are missing (${file.pathname}); run 'npm run build'`, { cause });
    }
    compiled = new WebAssembly.Module(bytes);
  }
  return compiled;
}

/** An instance of the kernels on a shared memory, at once; `prepare` is left to the caller. Each thread needs its own. */
export function instantiateKernels(
  memory: WebAssembly.Memory,
  module: WebAssembly.Module = kernelModule(),
): Kernels {
  const instance = new WebAssembly.Instance(module, {
    env: { memory, 'Math.sin': Math.sin, 'Math.cos': Math.cos },
  });
  return instance.exports as unknown as Kernels;
}
