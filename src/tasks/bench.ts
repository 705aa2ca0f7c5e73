/** What the rules need to know of a rig, worked out once. */
import { converterFor } from '../camera/converter.js';
import { type MosaicSites, mosaicSites } from '../camera/mosaic.js';
import { relativeIllumination } from '../optics/illumination.js';
import { bandLines } from '../optics/otf.js';
import type { WavefrontLine } from '../optics/psf.js';
import type { Band, Rig } from '../optics/rig.js';
import { RadialModels } from './radial-model.js';

/** A place of the ideal picture, from the optical axis, + right and + down. */
export interface Place {
  xMm: number;
  yMm: number;
}

/** A rig laid out for judging. */
export interface Bench {
  rig: Rig;
  /** Light that arrives at an image height in mm, 1 on the axis. */
  illumination: (radiusMm: number) => number;
  /** Which band each pixel of a 2 x 2 square sees; undefined: every pixel sees every band. */
  sites: MosaicSites | undefined;
  models: RadialModels;
}

/** @throws {InputError} for a sensor without range or a mosaic without its bands */
export function benchFor(rig: Rig): Bench {
  converterFor(rig.camera.sensor); // its refusals
  return {
    rig,
    illumination: relativeIllumination(rig.lens),
    sites: mosaicSites(
      rig.camera.mosaic,
      rig.camera.bands.map(({ name }) => name),
    ),
    models: new RadialModels(rig),
  };
}

/** One band at one place, the wavefronts worked out. */
export interface BandView {
  band: Band;
  lines: WavefrontLine[];
  fNumber: number;
  /** Whether the wavefront is the same in all directions. */
  isRound: boolean;
}

export function bandViews({ rig }: Bench, { xMm, yMm }: Place): BandView[] {
  return rig.camera.bands.map((band) => {
    const lines = bandLines(rig, xMm, yMm, band);
    const isRound = lines.every(({ wavefront: { w31, w22, w11 } }) => w31 === 0 && w22 === 0 && w11 === 0);
    return { band, lines, fNumber: rig.mount.fNumber, isRound };
  });
}
