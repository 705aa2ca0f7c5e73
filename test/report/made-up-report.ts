import type { ZonesReport } from '../../src/optics/zones.js';

/** A report with made-up figures, each of them different, so that one in the wrong place shows. */
export function madeUpReport({
  places = ['axis', 'top', 'right', 'top_right'] as (string | null)[],
  bands = ['mono'],
  lpPerMm = [18.115942, 36.231884, 72.463768],
} = {}): ZonesReport {
  let last = 0;
  const next = (): number => ++last / 1000;
  return {
    rig: '12 mm, packing hall',
    fNumber: 4,
    model: 'third-order',
    warnings: [],
    zones: places.flatMap((place, at) =>
      bands.map((band) => ({
        field: at / 4,
        azimuthDeg: place === null ? 90 : 0,
        place,
        imageHeightMm: at * 1.15,
        band,
        strehl: next(),
        wavefrontRmsWaves: next(),
        distortionPercent: -next(),
        lateralColourUm: 1 + next(),
        relativeIllumination: next(),
        mtf: lpPerMm.map((frequency) => ({
          lpPerMm: frequency,
          diffractionLimit: next(),
          lens: { tangential: next(), sagittal: next() },
          camera: { tangential: next(), sagittal: next() },
        })),
        mtf50LpPerMm: { tangential: 55 + next(), sagittal: 44 + next() },
        bestFocusUm: { tangential: -31 - next(), sagittal: null },
      })),
    ),
  };
}
