/** The figures by field zone as CSV: a line for each zone and frequency. What belongs to the zone as a whole stands on each of its lines. */
import type { Zone, ZonesReport } from '../optics/zones.js';
import { type Cell, csvText } from './csv.js';

interface Row {
  zone: Zone;
  mtf: Zone['mtf'][number];
}

/** Columns in order; the names are those of the JSON. */
const COLUMNS: readonly (readonly [name: string, cell: (row: Row) => Cell])[] = [
  ['field', ({ zone }) => zone.field],
  ['azimuth_deg', ({ zone }) => zone.azimuthDeg],
  ['place', ({ zone }) => zone.place],
  ['image_height_mm', ({ zone }) => zone.imageHeightMm],
  ['band', ({ zone }) => zone.band],
  ['lp_per_mm', ({ mtf }) => mtf.lpPerMm],
  ['diffraction_limit', ({ mtf }) => mtf.diffractionLimit],
  ['lens_tangential', ({ mtf }) => mtf.lens.tangential],
  ['lens_sagittal', ({ mtf }) => mtf.lens.sagittal],
  ['camera_tangential', ({ mtf }) => mtf.camera.tangential],
  ['camera_sagittal', ({ mtf }) => mtf.camera.sagittal],
  ['mtf50_tangential_lp_per_mm', ({ zone }) => zone.mtf50LpPerMm.tangential],
  ['mtf50_sagittal_lp_per_mm', ({ zone }) => zone.mtf50LpPerMm.sagittal],
  ['strehl', ({ zone }) => zone.strehl],
  ['wavefront_rms_waves', ({ zone }) => zone.wavefrontRmsWaves],
  ['distortion_percent', ({ zone }) => zone.distortionPercent],
  ['lateral_colour_um', ({ zone }) => zone.lateralColourUm],
  ['relative_illumination', ({ zone }) => zone.relativeIllumination],
  ['best_focus_tangential_um', ({ zone }) => zone.bestFocusUm.tangential],
  ['best_focus_sagittal_um', ({ zone }) => zone.bestFocusUm.sagittal],
];

export function zoneCsv({ zones }: ZonesReport): string {
  return csvText(
    zones.flatMap((zone) => zone.mtf.map((mtf) => ({ zone, mtf }))),
    COLUMNS,
  );
}
