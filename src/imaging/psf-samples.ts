/** PSFs of a rig as small pictures, for people to look at. */
import { bandShiftUm } from '../optics/distortion.js';
import { bandLines } from '../optics/otf.js';
import type { WavefrontLine } from '../optics/psf.js';
import type { Band, Rig } from '../optics/rig.js';
import { largestSlope } from '../optics/sampling.js';
import { shortestWavelengthNm } from './kernel-source.js';
import { loneKernelMaker } from './lone-kernel-maker.js';

/** Where a PSF is looked at: an ideal image point, from the optical axis, + right and + down. */
export interface ImagePoint {
  xMm: number;
  yMm: number;
}

export interface PsfSamples {
  /** Side of each picture in pixels of the camera. */
  sidePx: number;
  sideUm: number;
  /** Side in samples; the middle one has the image point of the lens's own wavelength in its middle. */
  samples: number;
  /** For each point, a plane for each band: the light in each sample, row-major, x right and y down; each plane sums to 1 with what
   * falls outside of it. */
  psfs: Float32Array[][];
}

/** PSFs of the lens, the pixel left out, on one scale for all points, so that they can be compared. Bands lie where lateral colour puts
 * them.
 *
 * They are computed as far as the rays land from the image point (eps = -2 N lambda grad W), with room for diffraction around them, and
 * cut to the square that holds nearly all of the light.
 */
export function psfSamples(rig: Rig, points: readonly ImagePoint[]): PsfSamples {
  const { camera, mount } = rig;
  const lines = points.map((point) => camera.bands.map((band) => placedLines(rig, point, band)));
  const reachUm = Math.max(
    ...lines.flat(2).map(({ nm, wavefront }) => {
      const airyUm = (mount.fNumber * nm) / 1000;
      return airyUm * (2 * largestSlope(wavefront) + MARGIN);
    }),
  );
  const sidePx = Math.min(LARGEST_PX, Math.max(LEAST_PX, 2 * Math.ceil(reachUm / camera.pixelPitchUm)));
  const perPixel = Math.max(1, Math.round(SAMPLES / sidePx));
  const samples = sidePx * perPixel + 1 - ((sidePx * perPixel) % 2);
  const sampling = {
    fNumber: mount.fNumber,
    pitchUm: camera.pixelPitchUm / perPixel,
    boxUm: camera.pixelPitchUm / perPixel,
    shortestNm: shortestWavelengthNm(rig),
    kernelPx: samples,
  };
  const maker = loneKernelMaker(sampling, lines.flat(2));
  const psfs = lines.map((bands) =>
    bands.map((band) => {
      const out = new Float32Array(samples ** 2);
      maker.bandKernel(band, out);
      return out;
    }),
  );
  const least = LEAST_PX * perPixel;
  const kept = Math.max(...psfs.flat().map((psf) => sideOfShare(psf, samples, least)));
  return {
    sidePx: kept / perPixel,
    sideUm: (kept * camera.pixelPitchUm) / perPixel,
    samples: kept,
    psfs: psfs.map((bands) => bands.map((psf) => middleOf(psf, samples, kept))),
  };
}

/** Side of the smallest square about the middle that holds `SHOWN_SHARE` of the light, odd as the whole side is. */
function sideOfShare(psf: Float32Array, side: number, least: number): number {
  const middle = (side - 1) / 2;
  const rings = new Float64Array(middle + 1);
  for (let row = 0; row < side; row++) {
    for (let column = 0; column < side; column++)
      rings[Math.max(Math.abs(row - middle), Math.abs(column - middle))] += psf[row * side + column];
  }
  let inside = rings[0];
  let radius = 0;
  while (radius < middle && (inside < SHOWN_SHARE || 2 * radius + 1 < least)) inside += rings[++radius];
  return 2 * radius + 1;
}

function middleOf(psf: Float32Array, side: number, kept: number): Float32Array {
  const edge = (side - kept) / 2;
  const out = new Float32Array(kept ** 2);
  for (let row = 0; row < kept; row++) {
    const from = (row + edge) * side + edge;
    out.set(psf.subarray(from, from + kept), row * kept);
  }
  return out;
}

/** Room for diffraction, in units of lambda N: two dark rings of the perfect PSF. */
const MARGIN = 2.3;
const LEAST_PX = 4;
const LARGEST_PX = 96;
/** About so many samples a side before the cut: after it about as many as a page shows. */
const SAMPLES = 108;
/** Of the light of every PSF: the rest lies so thin that it would be black, and the middle the smaller for it. */
const SHOWN_SHARE = 0.97;

/** The lines of a band with the shift of the band's whole image in their tilt. */
function placedLines(rig: Rig, { xMm, yMm }: ImagePoint, band: Band): WavefrontLine[] {
  const shiftUm = bandShiftUm(rig.lens, Math.hypot(xMm, yMm) / rig.lens.fullFieldMm, band);
  return bandLines(rig, xMm, yMm, band).map(({ nm, weight, wavefront }) => ({
    nm,
    weight,
    // eps = -2 N lambda dW/dm
    wavefront: { ...wavefront, w11: wavefront.w11 - shiftUm / ((2 * rig.mount.fNumber * nm) / 1000) },
  }));
}
