/** The figures by field zone as CSV (RFC 4180, with line feeds alone): a line for each zone and frequency, so that a spreadsheet or a data
 * frame takes it as it is. What belongs to the zone as a whole stands on each of its lines. */
import type { Zone, ZonesReport } from '../optics/zones.js';

type Cell = string | number | null;
type Mtf = Zone['mtf'][number];

/** Columns in order; the names are those of the JSON. */
const COLUMNS: readonly (readonly [name: string, cell: (zone: Zone, mtf: Mtf) => Cell])[] = [
  ['field', (zone) => zone.field],
  ['azimuth_deg', (zone) => zone.azimuthDeg],
  ['place', (zone) => zone.place],
  ['image_height_mm', (zone) => zone.imageHeightMm],
  ['band', (zone) => zone.band],
  ['lp_per_mm', (_, mtf) => mtf.lpPerMm],
  ['diffraction_limit', (_, mtf) => mtf.diffractionLimit],
  ['lens_tangential', (_, mtf) => mtf.lens.tangential],
  ['lens_sagittal', (_, mtf) => mtf.lens.sagittal],
  ['camera_tangential', (_, mtf) => mtf.camera.tangential],
  ['camera_sagittal', (_, mtf) => mtf.camera.sagittal],
  ['mtf50_tangential_lp_per_mm', (zone) => zone.mtf50LpPerMm.tangential],
  ['mtf50_sagittal_lp_per_mm', (zone) => zone.mtf50LpPerMm.sagittal],
  ['strehl', (zone) => zone.strehl],
  ['wavefront_rms_waves', (zone) => zone.wavefrontRmsWaves],
  ['distortion_percent', (zone) => zone.distortionPercent],
  ['lateral_colour_um', (zone) => zone.lateralColourUm],
  ['relative_illumination', (zone) => zone.relativeIllumination],
  ['best_focus_tangential_um', (zone) => zone.bestFocusUm.tangential],
  ['best_focus_sagittal_um', (zone) => zone.bestFocusUm.sagittal],
];

export function zoneCsv({ zones }: ZonesReport): string {
  const rows = zones.flatMap((zone) => zone.mtf.map((mtf) => COLUMNS.map(([, cell]) => cell(zone, mtf))));
  return `${[COLUMNS.map(([name]) => name), ...rows].map((row) => row.map(csvCell).join(',')).join('\n')}\n`;
}

function csvCell(cell: Cell): string {
  if (cell === null) return '';
  const text = String(cell);
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}
