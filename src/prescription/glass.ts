/** The refractive index of glasses, relative to air. */
import type { Glass } from './prescription.js';

/** Fraunhofer lines in nm. Source: ISO 7944 for d, F, C, e (cited from memory); the others as glass
 * catalogues commonly list them. */
export const SPECTRAL_LINES_NM = {
  t: 1013.98,
  s: 852.11,
  C: 656.2725,
  d: 587.5618,
  e: 546.074,
  F: 486.1327,
  g: 435.8343,
} as const;

/** Where the index from n_d and V_d is worth using: measured against Sellmeier formulas of a crown, two
 * flints and fused silica the error is under 3e-4 from 436 to 1014 nm, but for a dense flint at 436 nm
 * (5e-4). */
export const ABBE_RANGE_NM: readonly [number, number] = [400, 1100];

/** Index of a glass at a wavelength, relative to air. NaN where Sellmeier's formula has no real value above
 * its resonance.
 *
 * @param nm wavelength in air
 */
export function refractiveIndex(glass: Glass, nm: number): number {
  if ('n' in glass) return glass.n;
  if ('sellmeier' in glass) return sellmeierIndex(glass.sellmeier.B, glass.sellmeier.CUm2, nm);
  const { nd, vd } = 'code' in glass ? fromGlassCode(glass.code) : glass;
  return abbeIndex(nd, vd, nm);
}

/** n^2 = 1 + sum of B L^2 / (L^2 - C), L in um. Source: W. Sellmeier (1871), in the form of glass catalogues.
 */
export function sellmeierIndex(B: readonly number[], CUm2: readonly number[], nm: number): number {
  const squareUm2 = (nm / 1000) ** 2;
  return Math.sqrt(B.reduce((sum, b, i) => sum + (b * squareUm2) / (squareUm2 - CUm2[i]), 1));
}

/** Index of a glass of which only n_d and V_d are known.
 *
 * n = n_d + (n_F - n_C) D(L), D being Cauchy's formula with a term for the infrared, a1 L^2 + a2 L^-2 + a3
 * L^-4 (L in um), less its value at d. Its three coefficients follow from n_F - n_C = (n_d - 1)/V_d, which so
 * holds exactly, and from two partial dispersions that are taken from the normal line of optical glasses,
 *
 *     (n_g - n_F)/(n_F - n_C) = 0.6438 - 0.001682 V_d,   (n_C - n_t)/(n_F - n_C) = 0.5450 + 0.004743 V_d.
 *
 * (Cauchy's two-term formula would give all glasses the same partial dispersions, and every achromat no
 * secondary spectrum.) Limits: a glass off the normal line (fluor crowns, dense flints, short flints,
 * plastics) differs by the amount it is off, and so does the secondary spectrum. Where that matters, give
 * Sellmeier's coefficients.
 * Source: Schott technical information TIE-29, normal line through K7 and F2 (cited from memory).
 */
export function abbeIndex(nd: number, vd: number, nm: number): number {
  const gF = 0.6438 - 0.001682 * vd;
  const Ct = 0.545 + 0.004743 * vd;
  const lambda = termsBetween(nm, SPECTRAL_LINES_NM.d);
  let sum = 0;
  for (let i = 0; i < 3; i++)
    sum += lambda[i] * (FROM_PARTIALS[i][0] + FROM_PARTIALS[i][1] * gF + FROM_PARTIALS[i][2] * Ct);
  return nd + ((nd - 1) / vd) * sum;
}

/** n_d and V_d of a six-digit glass code: 517642 is n_d 1.517, V_d 64.2. Source: MIL-G-174 and common
 * practice (from memory). */
export function fromGlassCode(code: number): { nd: number; vd: number } {
  const first = Math.floor(code / 1000);
  return { nd: 1 + first / 1000, vd: (code - first * 1000) / 10 };
}

/** The six-digit code of a glass: 1000 (n_d - 1), then 10 V_d, each rounded. */
export function glassCode(nd: number, vd: number): number {
  return Math.round((nd - 1) * 1000) * 1000 + Math.round(vd * 10);
}

/** V = (n_middle - 1)/(n_short - n_long), by default V_d from the lines d, F and C. Infinite for a glass
 * without dispersion. */
export function abbeNumber(
  glass: Glass,
  middleNm: number = SPECTRAL_LINES_NM.d,
  shortNm: number = SPECTRAL_LINES_NM.F,
  longNm: number = SPECTRAL_LINES_NM.C,
): number {
  const dispersion = refractiveIndex(glass, shortNm) - refractiveIndex(glass, longNm);
  return (refractiveIndex(glass, middleNm) - 1) / dispersion;
}

/** The terms L^2, L^-2, L^-4 at one wavelength less those at another. */
function termsBetween(nm: number, fromNm: number): [number, number, number] {
  const square = (nm / 1000) ** 2;
  const from = (fromNm / 1000) ** 2;
  return [square - from, 1 / square - 1 / from, 1 / square ** 2 - 1 / from ** 2];
}

/** Coefficients a1..a3 from (1, P_gF, P_Ct), each relative to n_F - n_C: the inverse of the three conditions
 * above. */
const FROM_PARTIALS = inverse3([
  termsBetween(SPECTRAL_LINES_NM.F, SPECTRAL_LINES_NM.C),
  termsBetween(SPECTRAL_LINES_NM.g, SPECTRAL_LINES_NM.F),
  termsBetween(SPECTRAL_LINES_NM.C, SPECTRAL_LINES_NM.t),
]);

/** Inverse by cofactors. */
function inverse3(m: readonly (readonly number[])[]): number[][] {
  const cofactor = (row: number, column: number) => {
    const [r0, r1] = [(row + 1) % 3, (row + 2) % 3];
    const [c0, c1] = [(column + 1) % 3, (column + 2) % 3];
    return m[r0][c0] * m[r1][c1] - m[r0][c1] * m[r1][c0];
  };
  const determinant = m[0][0] * cofactor(0, 0) + m[0][1] * cofactor(0, 1) + m[0][2] * cofactor(0, 2);
  return [0, 1, 2].map((row) => [0, 1, 2].map((column) => cofactor(column, row) / determinant));
}
