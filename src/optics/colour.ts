/** What a lens does differently at each wavelength: axial and lateral colour, and coefficients that were traced at several. */
import { monotoneCubic } from '../numeric/monotone-cubic.js';
import type { Band, Lens, SpectralTable, Waves } from './rig.js';
import { COEFFICIENTS } from './rig.js';

/** The coefficients at a wavelength, as optical path in waves of the lens's own wavelength.
 *
 * Where they were traced at several, they are interpolated linearly, held outside, and taken against what the table holds at the lens's
 * own wavelength: so a change of `lens.waves` moves all wavelengths alike.
 */
export function wavesAt(lens: Lens, nm: number): Waves {
  const { waves, wavesByWavelength: traced = [], wavelengthNm } = lens;
  if (traced.length === 0 || nm === wavelengthNm) return waves;
  const table = withOwnWaves(lens);
  const own = table.find((entry) => entry.nm === wavelengthNm)!.waves;
  const after = table.findIndex((entry) => entry.nm >= nm);
  const high = table[after < 0 ? table.length - 1 : after];
  const low = after <= 0 ? high : table[after - 1];
  const t = high === low ? 1 : (nm - low.nm) / (high.nm - low.nm);
  const entries = COEFFICIENTS.map((name) => {
    const here = t === 1 ? high.waves[name] : low.waves[name] * (1 - t) + high.waves[name] * t;
    return [name, own[name] === waves[name] ? here : waves[name] + (here - own[name])];
  });
  return Object.fromEntries(entries) as unknown as Waves;
}

/** The table of coefficients with the lens's own wavelength in it. */
function withOwnWaves({ waves, wavesByWavelength = [], wavelengthNm }: Lens): readonly TracedWaves[] {
  if (wavesByWavelength.some(({ nm }) => nm === wavelengthNm)) return wavesByWavelength;
  return [...wavesByWavelength, { nm: wavelengthNm, waves }].sort((a, b) => a.nm - b.nm);
}

type TracedWaves = NonNullable<Lens['wavesByWavelength']>[number];

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

/** Wavelengths of the bands at which a table (of colour, of coefficients) is held flat because it ends before them. */
export function wavelengthsOutsideTable(lens: Lens, bands: readonly Band[]): number[] {
  const wavelengths = [...new Set(bands.flatMap((band) => band.lines.map(({ nm }) => nm)))];
  const tables = [lens.axialUm, lens.lateralUm].map((table) => table.map(([at]) => at));
  tables.push((lens.wavesByWavelength ?? []).map(({ nm }) => nm));
  const isOutside = (table: readonly number[], nm: number) => {
    if (table.length === 0) return false;
    const known = [...table, lens.wavelengthNm];
    return nm < Math.min(...known) || nm > Math.max(...known);
  };
  return wavelengths.filter((nm) => tables.some((table) => isOutside(table, nm))).sort((a, b) => a - b);
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
