/** PSFs of a rig as small pictures, for people to look at. */
import { bandShiftUm } from '../optics/distortion.js';
import { bandLines } from '../optics/otf.js';
import { KernelMaker, type WavefrontLine } from '../optics/psf.js';
import type { Band, Rig } from '../optics/rig.js';
import { largestSlope } from '../optics/sampling.js';
import { shortestWavelengthNm } from './kernel-source.js';

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
  /** For each point, a plane for each band: the light in each sample, row-major, x right and y down; each plane sums to 1. */
  psfs: Float32Array[][];
}

/** PSFs of the lens, the pixel left out, on one scale for all points, so that they can be compared. Bands lie where lateral colour puts
 * them.
 *
 * The side follows the rays that land farthest from the image point (eps = -2 N lambda grad W), and leaves room for the diffraction around
 * them.
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
  const maker = new KernelMaker({
    fNumber: mount.fNumber,
    pitchUm: camera.pixelPitchUm / perPixel,
    boxUm: camera.pixelPitchUm / perPixel,
    shortestNm: shortestWavelengthNm(rig),
    kernelPx: samples,
  });
  return {
    sidePx: samples / perPixel,
    sideUm: (samples * camera.pixelPitchUm) / perPixel,
    samples,
    psfs: lines.map((bands) =>
      bands.map((band) => {
        const out = new Float32Array(samples ** 2);
        maker.bandKernel(band, out);
        return out;
      }),
    ),
  };
}

/** Room for diffraction, in units of lambda N: two dark rings of the perfect PSF. */
const MARGIN = 2.3;
const LEAST_PX = 4;
const LARGEST_PX = 96;
/** About so many samples a side, a picture of the size at which it is shown. */
const SAMPLES = 72;

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
