/** Where image points land: third-order distortion, the scale term W111 and lateral colour, and the way back. */
import { bandLateralColourUm } from './colour.js';
import type { Band, Lens } from './rig.js';

/** The radial map of one band, r' = a r + c r^3, in mm from the axis: r is where a point lands ideally, r' where it lands. */
export class DistortionMap {
  /** Linear part: 1, the scale term W111 and the band's lateral colour. */
  readonly a: number;
  /** Cubic part in 1/mm^2: negative for barrel. */
  readonly c: number;

  constructor(a: number, c: number) {
    this.a = a;
    this.c = c;
  }

  /** r' = a r + c r^3. */
  distorted(idealMm: number): number {
    return idealMm * (this.a + this.c * idealMm * idealMm);
  }

  /** The exact inverse of `distorted` on its rising branch, by the closed form of the cubic (Viete; hyperbolic where c > 0).
   * NaN past the radius where the map folds. */
  ideal(distortedMm: number): number {
    const { a, c } = this;
    const scale = 2 * Math.sqrt(a / (3 * Math.abs(c)));
    if (scale === Number.POSITIVE_INFINITY) return distortedMm / a; // c is 0, or so small that it might as well be
    const ratio = (3 * distortedMm) / (a * scale);
    return c > 0 ? scale * Math.sinh(Math.asinh(ratio) / 3) : scale * Math.sin(Math.asin(ratio) / 3);
  }

  /** The largest r' that the map reaches before it folds back: infinity where it never does. */
  get foldMm(): number {
    if (this.a <= 0) return 0;
    return this.c >= 0 ? Number.POSITIVE_INFINITY : (2 / 3) * this.a * Math.sqrt(this.a / (-3 * this.c));
  }

  /** Whether the map leaves every picture as it is. */
  get isIdentity(): boolean {
    return this.a === 1 && this.c === 0;
  }
}

/** The distortion map of a lens for one band (left out: at the lens's own wavelength).
 *
 * r' = r - 2 N0 lambda (W311 h^3 + W111 h) + lateral h, from eps = -2 N lambda grad W with W311 and W111 as pure image shifts.
 * A change of the stop changes neither: it scales the two coefficients by N0/N and eps by N/N0.
 */
export function distortionMap(lens: Lens, band?: Band): DistortionMap {
  const wavesToMm = -2 * lens.fNumber * lens.wavelengthNm * 1e-6;
  const lateralMm = band === undefined ? 0 : bandLateralColourUm(lens, band) / 1000;
  const linearMm = wavesToMm * lens.waves.W111 + lateralMm;
  const cubicMm = wavesToMm * lens.waves.W311;
  return new DistortionMap(1 + linearMm / lens.fullFieldMm, cubicMm / lens.fullFieldMm ** 3);
}

/** Third-order distortion 100 (r' - r) / r at a field h, in percent. Scale changes (W111, lateral colour) are not counted. */
export function distortionPercent(lens: Lens, h: number): number {
  return (-100 * 2 * lens.fNumber * lens.wavelengthNm * 1e-6 * lens.waves.W311 * h * h) / lens.fullFieldMm;
}

/** W311 of a lens whose distortion at h = 1 is known: the inverse of `distortionPercent`. */
export function distortionWaves(
  percent: number,
  fNumber: number,
  wavelengthNm: number,
  fullFieldMm: number,
): number {
  return (-percent * fullFieldMm) / (100 * 2 * fNumber * wavelengthNm * 1e-6);
}
