/** How large a kernel must be to hold the light of a PSF. */
import type { RingMaker } from '../optics/psf.js';
import type { Band, Rig } from '../optics/rig.js';
import { gridForPhase, LARGEST_GRID, samplesPerPixel } from '../optics/sampling.js';
import { wavefrontAt } from '../optics/wavefront.js';
import { kernelSampling } from './kernel-source.js';
import { idealPoint, sensorFrame } from './sensor-frame.js';

/** Kernels smaller than this gain nothing. */
const SMALLEST_KERNEL = 15;
const LARGEST_KERNEL = 1023;

/** Fine steps in one step of the rings. The fine grid holds the intensity at its Nyquist rate; added up over its samples, light is held by
 * the Nyquist rate of the amplitude, which is half of that: the sum over all samples is exact, and a square's is off by a part of what
 * falls on its border. */
const RING_STEPS = 2;

/** Cumulated energy of a band's PSF at a place of the picture.
 * @returns shares of the light within max(|x|, |y|) <= r ring steps, by r */
function energyWithin(
  ringsOf: RingMaker,
  rig: Rig,
  band: Band,
  oversample: number,
  x: number,
  y: number,
  enough: (cumulated: Float64Array) => boolean,
): Float64Array {
  const { pitchUm, shortestNm, fNumber } = kernelSampling(rig, oversample, 1);
  const stepUm = (RING_STEPS * pitchUm) / samplesPerPixel(pitchUm, shortestNm, fNumber);
  const [xMm, yMm] = idealPoint(sensorFrame(rig, band, oversample), x, y);
  const lines = band.lines.map(({ nm, weight }) => ({
    nm,
    weight,
    wavefront: wavefrontAt(rig, xMm, yMm, nm, band),
  }));
  let n = Math.max(
    LEAST_WINDOW,
    ...lines.map(({ nm, wavefront }) => gridForPhase(wavefront, stepUm, nm, fNumber)),
  );
  for (; ; n *= 2) {
    const cumulated = new Float64Array(n / 2 + 1);
    for (const { nm, weight, wavefront } of lines) {
      const rings = ringsOf(wavefront, n, stepUm, nm, fNumber);
      let sum = 0;
      for (let r = 0; r < rings.length; r++) {
        sum += rings[r];
        cumulated[r] += weight * sum;
      }
    }
    if (n >= LARGEST_GRID || enough(cumulated)) return cumulated;
  }
}

/** The smallest window, in ring steps. */
const LEAST_WINDOW = 256;

/** How far from the image point the square reaches that holds all but `tolerance` of the light, r: not rounded, and such that its side is
 * 2 r + 1 fine steps. */
export function extentSteps(
  ringsOf: RingMaker,
  rig: Rig,
  band: Band,
  oversample: number,
  x: number,
  y: number,
  tolerance: number,
): number {
  const cumulated = energyWithin(ringsOf, rig, band, oversample, x, y, isWideEnough(tolerance));
  const at = radiusHolding(cumulated, tolerance);
  const before = at === 0 ? 0 : cumulated[at - 1];
  const part = at === 0 || cumulated[at] <= before ? 1 : (1 - tolerance - before) / (cumulated[at] - before);
  // a ring of radius r reaches r + 1/2 steps out
  return RING_STEPS * (at - 0.5 + Math.min(1, part)) - 0.5;
}

/** Share of the light that falls outside a kernel at a place of the picture, seen in the same window as `extentSteps` does with the same
 * tolerance: a smaller one would lose more light to the pupil's soft rim, and the two would contradict each other. */
export function energyOutside(
  ringsOf: RingMaker,
  rig: Rig,
  band: Band,
  oversample: number,
  x: number,
  y: number,
  kernelPx: number,
  tolerance: number,
): number {
  const reach = (kernelPx * finePerSample(rig, oversample)) / (2 * RING_STEPS) - 0.5;
  const isEnough = isWideEnough(tolerance);
  const cumulated = energyWithin(
    ringsOf,
    rig,
    band,
    oversample,
    x,
    y,
    (sums) => isEnough(sums) && reach <= sums.length / 2,
  );
  const low = Math.min(cumulated.length - 1, Math.floor(reach));
  const high = Math.min(cumulated.length - 1, low + 1);
  return Math.max(0, 1 - (cumulated[low] + (reach - low) * (cumulated[high] - cumulated[low])));
}

function radiusHolding(cumulated: Float64Array, tolerance: number): number {
  const at = cumulated.findIndex((share) => share >= 1 - tolerance);
  return at < 0 ? cumulated.length - 1 : at;
}

/** Whether a window is at least twice as large as the square that holds the light, so that light from outside the window, folded back by
 * the sampling, does not count as inside. */
function isWideEnough(tolerance: number): (cumulated: Float64Array) => boolean {
  return (cumulated) => radiusHolding(cumulated, tolerance) <= cumulated.length / 2;
}

/** Side of the kernel for an extent: odd for odd oversampling, even for even (so that its samples lie on pixels' middles), within
 * the limits of kernel and pupil grid. */
export function kernelSide(rig: Rig, oversample: number, extent: number): number {
  const perSample = finePerSample(rig, oversample);
  const isEven = oversample % 2 === 0;
  const parity = (side: number) => (side % 2 === (isEven ? 0 : 1) ? side : side + 1);
  const wanted = parity(Math.max(SMALLEST_KERNEL, Math.ceil((2 * extent + 1) / perSample)));
  const largest = Math.min(LARGEST_KERNEL - (isEven ? 1 : 0), Math.floor(LARGEST_GRID / perSample) - 1);
  return wanted <= largest ? wanted : parity(largest - 1);
}

function finePerSample(rig: Rig, oversample: number): number {
  const { pitchUm, shortestNm, fNumber } = kernelSampling(rig, oversample, 1);
  return samplesPerPixel(pitchUm, shortestNm, fNumber);
}
