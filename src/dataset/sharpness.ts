/** How sharp the picture is at a place, so that a trainer can weight or sort labels by difficulty. */
import { edgeWidthUm } from '../optics/edge-width.js';
import { mtf50LpPerMm } from '../optics/focus.js';
import { bandLines } from '../optics/otf.js';
import { type Band, pixelPitchMm, type Rig } from '../optics/rig.js';
import { rounded } from './rounding.js';
import type { View } from './view.js';

/** Figures of lens and camera together, along the radius and across it; of the green band, or the only one. */
export interface Sharpness {
  /** h of the place. */
  field: number;
  azimuth_deg: number;
  /** 10-90 % rise of an edge. */
  blur_px: { tangential: number; sagittal: number };
  mtf50_cycles_per_pixel: { tangential: number; sagittal: number };
}

/** @param place  ideal, on the sensor, in pixels */
export function sharpnessAt(rig: Rig, view: View, [x, y]: readonly [number, number]): Sharpness {
  const { camera, mount, lens } = rig;
  const [xMm, yMm] = view.lens.fieldMm(x, y);
  const lines = bandLines(rig, xMm, yMm, judgedBand(camera.bands));
  const pitchMm = pixelPitchMm(camera);
  const both = (figure: (direction: 'tangential' | 'sagittal') => number) => ({
    tangential: figure('tangential'),
    sagittal: figure('sagittal'),
  });
  return {
    field: rounded(Math.hypot(xMm, yMm) / lens.fullFieldMm, 4),
    azimuth_deg: rounded((180 / Math.PI) * Math.atan2(yMm, xMm), 1),
    blur_px: both((direction) =>
      rounded(edgeWidthUm(lines, mount.fNumber, camera, direction, 'rough') / (1000 * pitchMm), 2),
    ),
    mtf50_cycles_per_pixel: both((direction) =>
      rounded(mtf50LpPerMm(lines, mount.fNumber, camera, direction) * pitchMm, 4),
    ),
  };
}

function judgedBand(bands: readonly Band[]): Band {
  return bands.find(({ name }) => name === 'green') ?? bands[0];
}
