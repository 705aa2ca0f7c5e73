/** Third-order sums, surface by surface. */
import type { Waves } from '../optics/rig.js';
import type { LensAt } from './lens-model.js';

/** Seidel sums and the two chromatic sums, in mm at h = 1 and the full stop. */
export interface SeidelSums {
  S_I: number;
  S_II: number;
  S_III: number;
  S_IV: number;
  S_V: number;
  C_I: number;
  C_II: number;
}

export const SEIDEL_SUMS = ['S_I', 'S_II', 'S_III', 'S_IV', 'S_V', 'C_I', 'C_II'] as const;

export interface SeidelTable {
  surfaces: readonly SeidelSums[];
  total: SeidelSums;
}

/** The sums of each surface and of the lens.
 *
 * With A = n (u + y c), B = n (ubar + ybar c), H = n (ubar y - u ybar), d() the change at the surface and
 * E = (k c^3 + 8 A4) d(n) y^4 for a conic or aspheric surface:
 *
 *     S_I   = -A^2 y d(u/n) + E                    S_IV = -H^2 c d(1/n)
 *     S_II  = -A B y d(u/n) + E (ybar/y)           S_V  = -B [B^2 y d(1/n^2) - (H + B y) ybar c d(1/n)]
 *                                                          + E (ybar/y)^3
 *     S_III = -B^2 y d(u/n) + E (ybar/y)^2
 *     C_I   = A y d(dn/n)                          C_II = B y d(dn/n),   dn = n(short) - n(long)
 *
 * This form of S_V divides neither by A nor by B. The sign of n turns at a mirror. Positive: undercorrected
 * (S_I), flare toward the axis (S_II), barrel (S_V), short-wave focus nearer the lens (C_I).
 * Source: H. H. Hopkins, Wave Theory of Aberrations (1950); W. T. Welford, Aberrations of Optical Systems
 * (1986), ch. 8 (cited from memory).
 *
 * @param short,long  the lens at the two wavelengths between which the chromatic sums are taken (commonly F
 *   and C)
 */
export function seidelTable(lens: LensAt, short: LensAt, long: LensAt): SeidelTable {
  const { system, paraxial } = lens;
  const { curvature, conic, aspheric, index } = system;
  const { marginal, chief } = paraxial;
  const H = paraxial.lagrangeMm;
  const surfaces: SeidelSums[] = [];
  const relativeDispersion = (i: number) => (short.system.index[i] - long.system.index[i]) / index[i];
  for (let i = 0; i < system.count; i++) {
    const n = index[i];
    const nAfter = index[i + 1];
    const c = curvature[i];
    const y = marginal.y[i];
    const yBar = chief.y[i];
    const A = n * (marginal.u[i] + y * c);
    const B = n * (chief.u[i] + yBar * c);
    const dSlope = marginal.u[i + 1] / nAfter - marginal.u[i] / n;
    const dInverse = 1 / nAfter - 1 / n;
    const dInverseSquare = 1 / nAfter ** 2 - 1 / n ** 2;
    const dColour = relativeDispersion(i + 1) - relativeDispersion(i);
    const E = (conic[i] * c ** 3 + 8 * (aspheric[i]?.[0] ?? 0)) * (nAfter - n);
    surfaces.push({
      S_I: -A * A * y * dSlope + E * y ** 4,
      S_II: -A * B * y * dSlope + E * y ** 3 * yBar,
      S_III: -B * B * y * dSlope + E * y ** 2 * yBar ** 2,
      S_IV: -H * H * c * dInverse,
      S_V: -B * (B * B * y * dInverseSquare - (H + B * y) * yBar * c * dInverse) + E * y * yBar ** 3,
      C_I: A * y * dColour,
      C_II: B * y * dColour,
    });
  }
  const sum = (name: (typeof SEIDEL_SUMS)[number]) =>
    surfaces.reduce((total, surface) => total + surface[name], 0);
  const total = Object.fromEntries(SEIDEL_SUMS.map((name) => [name, sum(name)])) as unknown as SeidelSums;
  return { surfaces, total };
}

/** The five terms in waves: W040 = S_I/8, W131 = S_II/2, W222 = S_III/2, W220 = (S_III + S_IV)/4, W311 =
 * S_V/2. W020 and W111 are 0. */
export function wavesFromSums(sums: SeidelSums, wavelengthNm: number): Waves {
  const perMm = 1e6 / wavelengthNm;
  return {
    W040: (perMm * sums.S_I) / 8,
    W131: (perMm * sums.S_II) / 2,
    W222: (perMm * sums.S_III) / 2,
    W220: (perMm * (sums.S_III + sums.S_IV)) / 4,
    W311: (perMm * sums.S_V) / 2,
    W020: 0,
    W111: 0,
  };
}
