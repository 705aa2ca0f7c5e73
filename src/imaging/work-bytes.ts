/** How much work space a worker needs for a job. It depends on the job alone, so that the picture does not depend on the threads. */
import { WARP_REQUEST_BYTES } from '../numeric/kernel-requests.js';
import type { Kernels } from '../numeric/kernels.js';
import { rounded } from './scratch.js';
import { blurWorkBytes } from './simd-blur.js';
import { psfWorkBytes, ringsWorkBytes } from './simd-psf.js';
import { TABLE_STEPS } from './warp.js';
import type { Engine, Job } from './work.js';

export function workBytes(kernels: Kernels, engine: Engine, job: Job): number {
  if (engine === 'reference') return 0;
  switch (job.kind) {
    case 'extent':
    case 'outside':
      return ringsWorkBytes(kernels);
    case 'spans':
      return psfWorkBytes(kernels, job.largestGrid, job.kernelPx);
    case 'kernels':
    case 'tiles':
      return psfWorkBytes(kernels, job.largestGrid, job.grid.kernelPx);
    case 'warp':
      return rounded(WARP_REQUEST_BYTES) + 2 * rounded(8 * TABLE_STEPS);
    case 'blur':
      return blurWorkBytes(kernels, job.grid);
    case 'expose':
    case 'develop':
    case 'flatten':
    case 'clear':
      return 0;
  }
}
