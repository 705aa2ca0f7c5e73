/** Axial and lateral colour: what a lens does differently at each wavelength. */
import { monotoneCubic } from '../numeric/monotone-cubic.js';
import type { Band, Lens, SpectralTable } from './rig.js';

/** Shift of the paraxial focus at a wavelength against the lens's own, in um, + away from the lens. */
export function axialColourUm(lens: Lens, nm: number): number {
  return spectralValue(lens.axialUm, lens.wavelengthNm, nm);
}

/** Change of the image height at h = 1 at a wavelength against the lens's own, in um, + outward. */
export function lateralColourUm(lens: Lens, nm: number): number {
  return spectralValue(lens.lateralUm, lens.wavelengthNm, nm);
}

/** Lateral colour of a whole band: the weighted mean of its lines, in um at h = 1. The warp applies it; what the single lines differ from
 * it stays in the PSF of the band. */
export function bandLateralColourUm(lens: Lens, band: Band): number {
  return band.lines.reduce((sum, { nm, weight }) => sum + weight * lateralColourUm(lens, nm), 0);
}

/** Wavelengths of the bands at which a colour table is held flat because it ends before them. */
export function wavelengthsOutsideTable(lens: Lens, bands: readonly Band[]): number[] {
  const wavelengths = [...new Set(bands.flatMap((band) => band.lines.map(({ nm }) => nm)))];
  const outside = (table: SpectralTable, nm: number) => {
    if (table.length === 0) return false;
    const known = [...table.map(([at]) => at), lens.wavelengthNm];
    return nm < Math.min(...known) || nm > Math.max(...known);
  };
  return wavelengths
    .filter((nm) => outside(lens.axialUm, nm) || outside(lens.lateralUm, nm))
    .sort((a, b) => a - b);
}

function spectralValue(table: SpectralTable, referenceNm: number, nm: number): number {
  if (table.length === 0) return 0;
  return monotoneCubic(withReference(table, referenceNm))(nm);
}

/** The table counts from the lens's own wavelength, so 0 there is one of its points. */
function withReference(table: SpectralTable, referenceNm: number): SpectralTable {
  if (table.some(([nm]) => nm === referenceNm)) return table;
  return [...table, [referenceNm, 0] as const].sort((a, b) => a[0] - b[0]);
}
