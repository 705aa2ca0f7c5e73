/** The diffraction pattern of a perfect lens, as the PSFs of the program show it. */
import { describe, expect, it } from 'vitest';
import { KernelMaker } from '../../src/optics/psf.js';
import { line } from '../optics/samples.js';

// Samples of lambda N / 16, out to 4.9 lambda N on each side
const N = 4;
const NM = 500;
const LAMBDA_N = (NM / 1000) * N;
const STEP = 1 / 16;
const SIDE = 157;
const MIDDLE = (SIDE - 1) / 2;

/** Intensity over that of the peak, along a row through the middle, at a radius in lambda N. */
function profile(): (radius: number) => number {
  // a spot that is light-sensitive over a thirtieth of lambda N changes nothing that is looked at here by more than 1e-3
  const sampling = {
    fNumber: N,
    pitchUm: STEP * LAMBDA_N,
    boxUm: LAMBDA_N / 30,
    shortestNm: NM,
    kernelPx: SIDE,
  };
  const kernel = new Float64Array(SIDE * SIDE);
  new KernelMaker(sampling).bandKernel(line({}, NM), kernel);
  const row = kernel.subarray(MIDDLE * SIDE + MIDDLE, (MIDDLE + 1) * SIDE);
  return (radius) => {
    // parabola through the three nearest samples
    const at = Math.max(1, Math.round(radius / STEP));
    const t = radius / STEP - at;
    const [a, b, c] = [row[at - 1], row[at], row[at + 1]];
    return (b + (t * (c - a)) / 2 + (t * t * (a - 2 * b + c)) / 2) / row[0];
  };
}

const intensity = profile();

/** Radius at which the profile is lowest (sign 1) or highest (sign -1) within 0.3 of a guess. */
function extreme(guess: number, sign: 1 | -1): number {
  let best = guess;
  for (let r = guess - 0.3; r < guess + 0.3; r += 1e-3) {
    if (sign * intensity(r) < sign * intensity(best)) best = r;
  }
  return best;
}

describe('Airy pattern', () => {
  // Source of all figures: Born and Wolf, Principles of Optics, 8.5.2 (from memory), recomputed to 15 digits. Radii in lambda N.
  it.each([1.21966989, 2.23313059, 3.23831548, 4.24106286])('has a dark ring at %f', (radius) => {
    expect(Math.abs(extreme(radius, 1) / radius - 1)).toBeLessThan(0.005); // a sampled PSF
    expect(intensity(radius)).toBeLessThan(2e-4); // the first bright ring has 1.7e-2; 1.1e-4 measured, which is the spot's size
  });

  it.each([
    [1.63471935, 0.0174978628],
    [2.67929202, 0.0041579964],
    [3.69871032, 0.0016006377],
  ])('has a bright ring at %f, %f of the peak', (radius, height) => {
    expect(Math.abs(extreme(radius, -1) / radius - 1)).toBeLessThan(0.02);
    expect(Math.abs(intensity(radius) / height - 1)).toBeLessThan(0.02);
  });

  it('is 1.02899 wide at half of its height', () => {
    let radius = 0.4;
    while (intensity(radius) > 0.5) radius += 1e-4;
    expect(Math.abs((2 * radius) / 1.02899397 - 1)).toBeLessThan(0.005);
  });

  it('shows two points at the Rayleigh distance with a dip of 0.735 between them', () => {
    // Source: Rayleigh 1879; Born and Wolf, 8.6.2 (from memory)
    const distance = 1.21966989;
    const dip = (2 * intensity(distance / 2)) / (intensity(0) + intensity(distance));
    expect(Math.abs(dip - 0.73503166)).toBeLessThan(0.005);
  });
});
