/** PSFs by the compiled kernels in the thread at hand, for those who want a few dozen and no crew. */
import { instantiateKernels, LARGEST_KERNEL_FFT } from '../numeric/kernels.js';
import {
  fineWindow,
  gridSize,
  KernelMaker,
  type KernelMaking,
  type KernelSampling,
  type WavefrontLine,
} from '../optics/psf.js';
import { Arena } from './arena.js';
import { Scratch } from './scratch.js';
import { psfWorkBytes, SimdKernelMaker } from './simd-psf.js';

/** @param lines all that will be asked for: they tell how large the grids become; past what the kernels know, PSFs are made in float64 */
export function loneKernelMaker(sampling: KernelSampling, lines: readonly WavefrontLine[]): KernelMaking {
  const window = fineWindow(sampling);
  const n = Math.max(...lines.map((line) => gridSize(window, line, sampling.fNumber)));
  if (n > LARGEST_KERNEL_FFT) return new KernelMaker(sampling);
  const arena = new Arena();
  const kernels = instantiateKernels(arena.memory);
  kernels.prepare(arena.allocate(kernels.tablesBytes()));
  const bytes = psfWorkBytes(kernels, n, sampling.kernelPx);
  return new SimdKernelMaker(kernels, new Scratch(arena.memory, arena.allocate(bytes), bytes), sampling, n);
}
