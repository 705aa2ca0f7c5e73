import { describe, expect, it } from 'vitest';
import { zoneCsv } from '../../src/report/zone-csv.js';
import { madeUpReport } from './made-up-report.js';

/** A reader of plain CSV: no quotes occur in these fields. */
function read(csv: string): Record<string, string>[] {
  const [head, ...lines] = csv.trimEnd().split('\n');
  return lines.map((line) =>
    Object.fromEntries(line.split(',').map((cell, at) => [head.split(',')[at], cell])),
  );
}

describe('zoneCsv', () => {
  it('has a line for each zone and frequency, with every figure in full', () => {
    const report = madeUpReport({ places: ['axis', null], bands: ['red', 'green'] });
    const rows = read(zoneCsv(report));
    expect(rows).toHaveLength(2 * 2 * 3);
    const zone = report.zones[3];
    const mtf = zone.mtf[2];
    expect(rows.at(-1)).toEqual({
      field: '0.25',
      azimuth_deg: '90',
      place: '',
      image_height_mm: '1.15',
      band: 'green',
      lp_per_mm: String(mtf.lpPerMm),
      diffraction_limit: String(mtf.diffractionLimit),
      lens_tangential: String(mtf.lens.tangential),
      lens_sagittal: String(mtf.lens.sagittal),
      camera_tangential: String(mtf.camera.tangential),
      camera_sagittal: String(mtf.camera.sagittal),
      mtf50_tangential_lp_per_mm: String(zone.mtf50LpPerMm.tangential),
      mtf50_sagittal_lp_per_mm: String(zone.mtf50LpPerMm.sagittal),
      strehl: String(zone.strehl),
      wavefront_rms_waves: String(zone.wavefrontRmsWaves),
      distortion_percent: String(zone.distortionPercent),
      lateral_colour_um: String(zone.lateralColourUm),
      relative_illumination: String(zone.relativeIllumination),
      best_focus_tangential_um: String(zone.bestFocusUm.tangential),
      best_focus_sagittal_um: '',
    });
  });

  it('quotes what CSV would tear apart', () => {
    const report = madeUpReport({ places: ['left, "outer"'], lpPerMm: [20] });
    expect(zoneCsv(report).split('\n')[1]).toMatch(/^0,0,"left, ""outer""",0,mono,20,/);
  });
});
