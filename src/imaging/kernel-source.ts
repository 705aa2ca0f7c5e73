/** The exact kernel of a band at any place of the picture. */
import type { KernelMaking, KernelSampling } from '../optics/psf.js';
import type { Band, Rig } from '../optics/rig.js';
import { pixelPitchMm } from '../optics/rig.js';
import { wavefrontAt } from '../optics/wavefront.js';
import { idealPoint, type SensorFrame, sensorFrame } from './sensor-frame.js';

/** The sampling of a rig's kernels. All bands share the fine grid of the shortest wavelength. */
export function kernelSampling(rig: Rig, oversample: number, kernelPx: number): KernelSampling {
  const { camera, mount } = rig;
  const pitchUm = pixelPitchMm(camera) * 1000;
  return {
    fNumber: mount.fNumber,
    pitchUm: pitchUm / oversample,
    boxUm: pitchUm * camera.fillFactor,
    shortestNm: shortestWavelengthNm(rig),
    kernelPx,
  };
}

export function shortestWavelengthNm(rig: Rig): number {
  return Math.min(...rig.camera.bands.flatMap((band) => band.lines.map(({ nm }) => nm)));
}

/** Kernels of one band. A kernel holds the whole pixel: convolved with the scene and taken at the pixels' middles it gives what the
 * pixels record. With an even oversampling the middles lie between samples, and so do the kernel's samples. */
export class KernelSource {
  readonly #rig: Rig;
  readonly #band: Band;
  readonly #frame: SensorFrame;
  readonly #maker: KernelMaking;

  /** @param maker of the sampling that `kernelSampling` gives */
  constructor(rig: Rig, band: Band, oversample: number, maker: KernelMaking) {
    this.#rig = rig;
    this.#band = band;
    this.#frame = sensorFrame(rig, band, oversample);
    this.#maker = maker;
  }

  /** The kernel of light that lands at (x, y), in samples of the picture.
   * @param out kernelPx x kernelPx, row-major, unit sum */
  kernelAt(x: number, y: number, out: Float32Array | Float64Array): void {
    const [xMm, yMm] = idealPoint(this.#frame, x, y);
    const lines = this.#band.lines.map(({ nm, weight }) => ({
      nm,
      weight,
      wavefront: wavefrontAt(this.#rig, xMm, yMm, nm, this.#band),
    }));
    this.#maker.bandKernel(lines, out);
  }
}
