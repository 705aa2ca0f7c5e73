/** The PSF of one place as kernels for a small piece of the picture, one a band. */
import { extentSteps, kernelSide } from '../../imaging/kernel-size.js';
import { kernelSampling } from '../../imaging/kernel-source.js';
import { sensorFrame } from '../../imaging/sensor-frame.js';
import { Fft2dPlan, nextPowerOfTwo } from '../../numeric/fft.js';
import { distortionMap } from '../../optics/distortion.js';
import { bandLines } from '../../optics/otf.js';
import { energyBySquareRing, KernelMaker } from '../../optics/psf.js';
import { pixelPitchMm, type Rig } from '../../optics/rig.js';
import type { Place } from '../bench.js';

export interface PatchKernels {
  /** Side in samples: odd for an odd oversampling, even for an even one. */
  side: number;
  /** One a band, side x side, row-major. */
  bands: Float64Array[];
}

/** Share of the light that may fall outside of a kernel: it is given back by normalising. */
const KERNEL_TOLERANCE = 0.01;

/** Samples around a kernel for what sharpening and moving it adds. */
const RIM = 8;

/** Kernels of a place for scenes that hold the means over their samples.
 *
 * Such a scene carries the sinc of the sample once already, on top of the pixel's own in the kernel; so the kernel's transform is divided
 * by it. Bands that land apart (lateral colour) are moved against their mean.
 * @param largest side that there is room for: a larger kernel is cut to it and normalised, for a blur that no symbol outlives
 */
export function patchKernels(rig: Rig, place: Place, oversample: number, largest: number): PatchKernels {
  const parity = oversample % 2;
  const wanted = kernelSide(rig, oversample, largestExtent(rig, place, oversample));
  const most = largest - 2 * RIM - ((largest + parity) % 2);
  const inner = Math.min(wanted, most);
  const maker = new KernelMaker(kernelSampling(rig, oversample, inner));
  const shifts = bandShifts(rig, place, oversample);
  const kernel = new Float64Array(inner * inner);
  const bands = rig.camera.bands.map((band, at) => {
    maker.bandKernel(bandLines(rig, place.xMm, place.yMm, band), kernel);
    return sharpened(kernel, inner, shifts[at]);
  });
  return { side: inner + 2 * RIM, bands };
}

function largestExtent(rig: Rig, { xMm, yMm }: Place, oversample: number): number {
  const idealMm = Math.hypot(xMm, yMm);
  const extents = rig.camera.bands.map((band) => {
    const frame = sensorFrame(rig, band, oversample);
    const scale = idealMm === 0 ? 1 : frame.map.distorted(idealMm) / idealMm;
    const x = frame.axisX + (xMm * scale) / frame.pitchMm;
    const y = frame.axisY + (yMm * scale) / frame.pitchMm;
    return extentSteps(energyBySquareRing, rig, band, oversample, x, y, KERNEL_TOLERANCE);
  });
  return Math.max(...extents);
}

/** A kernel divided by the sinc of its samples and moved, with a rim. Below the pixel's own zero nothing is raised by more than (pi/2)^2. */
function sharpened(
  kernel: Float64Array,
  inner: number,
  [shiftX, shiftY]: readonly [number, number],
): Float64Array {
  const side = inner + 2 * RIM;
  const n = Math.max(2, nextPowerOfTwo(side));
  const data = new Float64Array(2 * n * n);
  for (let row = 0; row < inner; row++)
    for (let column = 0; column < inner; column++)
      data[2 * ((row + RIM) * n + column + RIM)] = kernel[row * inner + column];
  const plan = new Fft2dPlan(n);
  plan.transform(data, 'minus');
  for (let row = 0; row < n; row++) {
    const v = (row < n / 2 ? row : row - n) / n;
    for (let column = 0; column < n; column++) {
      const u = (column < n / 2 ? column : column - n) / n;
      const phase = -2 * Math.PI * (u * shiftX + v * shiftY);
      const gain = 1 / (sinc(u) * sinc(v) * n * n);
      const at = 2 * (row * n + column);
      const [re, im] = [data[at], data[at + 1]];
      data[at] = gain * (re * Math.cos(phase) - im * Math.sin(phase));
      data[at + 1] = gain * (re * Math.sin(phase) + im * Math.cos(phase));
    }
  }
  plan.transform(data, 'plus');
  const out = new Float64Array(side * side);
  for (let row = 0; row < side; row++)
    for (let column = 0; column < side; column++) out[row * side + column] = data[2 * (row * n + column)];
  return out;
}

function sinc(x: number): number {
  return x === 0 ? 1 : Math.sin(Math.PI * x) / (Math.PI * x);
}

/** Where each band lands against the mean of the bands, in samples. */
function bandShifts(rig: Rig, { xMm, yMm }: Place, oversample: number): [x: number, y: number][] {
  const idealMm = Math.hypot(xMm, yMm);
  const landed = rig.camera.bands.map((band) => distortionMap(rig.lens, band).distorted(idealMm));
  const mean = landed.reduce((sum, mm) => sum + mm, 0) / landed.length;
  return landed.map((mm) => {
    const shift = ((mm - mean) * oversample) / pixelPitchMm(rig.camera);
    return idealMm === 0 ? [0, 0] : [(shift * xMm) / idealMm, (shift * yMm) / idealMm];
  });
}
