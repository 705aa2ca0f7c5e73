/** How a picture was made. */
import { basename } from 'node:path';
import type { RawLevels } from '../camera/converter.js';
import type { FormedImage } from '../imaging/form-image.js';
import type { Raster } from '../imaging/raster.js';
import { colourWarnings, fieldWarning, lensWarnings } from '../optics/limits.js';
import type { Rig } from '../optics/rig.js';
import type { RenderOptions, Settings } from './render-options.js';

type PictureOutputs = Pick<RenderOptions, 'out' | 'raw' | 'linear'>;

export interface RenderRecord {
  foreglass: string;
  rig: Rig;
  seed: number;
  cameraSeed: number;
  threads: number;
  oversample: number;
  image: { width: number; height: number; bands: string[] };
  accuracy: { blendBound: number; energyOutsideKernel: number; cells: [number, number]; kernelPx: number };
  /** The pictures written, without their folders, and how light became numbers; left out where none was. */
  files?: { out?: { name: string; encoding: 'srgb' | 'linear' }; raw?: { name: string } };
  /** What the raw numbers mean, where `raw` was asked for. */
  rawLevels?: { blackLevel: number; whiteLevel: number; sceneWhite: number; gainDnPerE: number };
  /** `total` leaves out decode and encode. */
  seconds: {
    decode: number;
    psf: number;
    warp: number;
    blur: number;
    camera: number;
    encode: number;
    total: number;
  };
  warnings: string[];
}

export interface RenderResult {
  record: RenderRecord;
  /** The recorded picture in linear light, one plane a band; not clipped where there is noise. */
  picture: Raster;
  /** The sensor's own numbers, one plane with a mosaic, else one a band; where `raw` or `keepRaw` asked for them. */
  raw?: Uint16Array[];
}

/** The pictures that a job writes, for its record. */
export function recordedFiles({ out, raw, linear }: PictureOutputs): RenderRecord['files'] {
  if (out === undefined && raw === undefined) return undefined;
  return {
    out: out === undefined ? undefined : { name: basename(out), encoding: linear ? 'linear' : 'srgb' },
    raw: raw === undefined ? undefined : { name: basename(raw) },
  };
}

/** What the raw numbers of a picture mean, for its record. */
export function recordedLevels(levels: RawLevels): RenderRecord['rawLevels'] {
  return {
    blackLevel: levels.blackLevelDn,
    whiteLevel: levels.whiteLevelDn,
    sceneWhite: levels.sceneWhiteDn,
    gainDnPerE: levels.gainDnPerE,
  };
}

/** What the user must be told of a picture. */
export function warningsFor({ rig, tolerances }: Settings, accuracy: FormedImage['accuracy']): string[] {
  const [width, height] = rig.camera.pixels;
  const [axisX, axisY] = rig.mount.axisPx;
  const pitchMm = rig.camera.pixelPitchUm / 1000;
  const cornerMm =
    pitchMm * Math.hypot(Math.max(axisX, width - 1 - axisX), Math.max(axisY, height - 1 - axisY));
  const warnings = [...lensWarnings(rig), ...fieldWarning(rig, cornerMm), ...colourWarnings(rig)];
  if (accuracy.energyOutsideKernel > tolerances.kernel) {
    warnings.push(
      `${(100 * accuracy.energyOutsideKernel).toFixed(2)} % of a PSF's light falls outside the largest kernel ` +
        `(${accuracy.kernelPx} pixels) and is spread evenly by normalising: wide veils look weaker than they are.`,
    );
  }
  if (accuracy.blendBound > tolerances.blend) {
    warnings.push(
      `blending PSFs may be wrong by ${accuracy.blendBound.toPrecision(2)} of full scale: no grid of cells meets --tolerance.`,
    );
  }
  return warnings;
}
