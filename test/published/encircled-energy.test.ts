/** How much of a perfect lens's light lies within a circle. */
import { describe, expect, it } from 'vitest';
import { KernelMaker } from '../../src/optics/psf.js';
import { line } from '../optics/samples.js';

const LAMBDA_N = 2;
const STEP = 1 / 16;
const SIDE = 175;
const MIDDLE = (SIDE - 1) / 2;

/** Share of the light within a circle, in lambda N: the sum over small squares of which the middle lies within, out of all light. */
function within(): (radius: number) => number {
  const sampling = {
    fNumber: 4,
    pitchUm: STEP * LAMBDA_N,
    boxUm: STEP * LAMBDA_N,
    shortestNm: 500,
    kernelPx: SIDE,
  };
  const kernel = new Float64Array(SIDE * SIDE);
  new KernelMaker(sampling).bandKernel(line({}, 500), kernel);
  // The height of the peak is pi / (4 (lambda N)^2) of all light (Born and Wolf, 8.5.2, from memory): it tells what share the kernel holds
  const peak = (Math.PI / 4) * STEP ** 2;
  const all = kernel[MIDDLE * SIDE + MIDDLE] / peak;
  return (radius) => {
    let sum = 0;
    for (let row = 0; row < SIDE; row++) {
      for (let column = 0; column < SIDE; column++) {
        // squares on the rim count by how much of a soft edge one sample wide covers them
        const distance = Math.hypot(column - MIDDLE, row - MIDDLE) - radius / STEP;
        sum += kernel[row * SIDE + column] * Math.min(1, Math.max(0, 0.5 - distance));
      }
    }
    return sum / all;
  };
}

const energy = within();

describe('encircled energy', () => {
  // Source: 1 - J0^2 - J1^2; Rayleigh 1881; Born and Wolf, Principles of Optics, 8.5.2 (from memory), recomputed to 12 digits
  it.each([
    [0.5, 0.4559253],
    [1, 0.8264308],
    [1.21966989, 0.83778487],
    [2, 0.90637174],
    [2.23313059, 0.90993054],
    [3.23831548, 0.93764747],
    [4.24106286, 0.95231917],
    [5, 0.96073965],
  ])('within %f lambda N is %f', (radius, share) => {
    expect(Math.abs(energy(radius) - share)).toBeLessThan(0.003); // a sampled PSF
  });

  it.each([
    [0.5, 0.53483215],
    [0.8, 0.8969421],
  ])('of %f lies within %f lambda N', (share, radius) => {
    expect(Math.abs(energy(radius) - share)).toBeLessThan(0.003);
  });
});
