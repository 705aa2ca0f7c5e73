/** Where image points land: third-order distortion, the scale term W111 and lateral colour, and the way back. */
import { bandLateralColourUm, lateralColourUm, wavesAt } from './colour.js';
import type { Band, Lens, Waves } from './rig.js';

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
 * Where the coefficients differ by wavelength, the band moves by the weighted mean of its lines; what the lines differ from it stays in
 * the PSF of the band, as with lateral colour (`shiftWithinBandUm`).
 */
export function distortionMap(lens: Lens, band?: Band): DistortionMap {
  const wavesToMm = mmPerWave(lens);
  const { W311, W111 } = band === undefined ? lens.waves : bandShiftWaves(lens, band);
  const lateralMm = band === undefined ? 0 : bandLateralColourUm(lens, band) / 1000;
  const linearMm = wavesToMm * W111 + lateralMm;
  const cubicMm = wavesToMm * W311;
  return new DistortionMap(1 + linearMm / lens.fullFieldMm, cubicMm / lens.fullFieldMm ** 3);
}

/** How far a line of a band lands from the mean of the band at a field h, in um, + outward: what its lateral colour, W311 and W111 differ
 * from the band's. */
export function shiftWithinBandUm(lens: Lens, h: number, nm: number, band: Band): number {
  const colourUm = h * (lateralColourUm(lens, nm) - bandLateralColourUm(lens, band));
  if (lens.wavesByWavelength === undefined) return colourUm;
  return colourUm + 1000 * shiftDifferenceMm(lens, h, wavesAt(lens, nm), bandShiftWaves(lens, band));
}

/** How far the image of a band lands from that at the lens's own wavelength at a field h, in um, + outward: its lateral colour, and what
 * its W311 and W111 differ. */
export function bandShiftUm(lens: Lens, h: number, band: Band): number {
  const colourUm = h * bandLateralColourUm(lens, band);
  if (lens.wavesByWavelength === undefined) return colourUm;
  return colourUm + 1000 * shiftDifferenceMm(lens, h, bandShiftWaves(lens, band), lens.waves);
}

/** The coefficients that only move the image. */
type ShiftWaves = Pick<Waves, 'W311' | 'W111'>;

function bandShiftWaves(lens: Lens, band: Band): ShiftWaves {
  if (lens.wavesByWavelength === undefined) return lens.waves;
  const mean = { W311: 0, W111: 0 };
  for (const { nm, weight } of band.lines) {
    const { W311, W111 } = wavesAt(lens, nm);
    mean.W311 += weight * W311;
    mean.W111 += weight * W111;
  }
  return mean;
}

function shiftDifferenceMm(lens: Lens, h: number, one: ShiftWaves, other: ShiftWaves): number {
  return mmPerWave(lens) * ((one.W311 - other.W311) * h ** 3 + (one.W111 - other.W111) * h);
}

/** What a wave of W311 or W111 moves the image point of h = 1: eps = -2 N0 lambda dW/dm, for coefficients at the lens's own f-number. */
function mmPerWave(lens: Lens): number {
  return -2 * lens.fNumber * lens.wavelengthNm * 1e-6;
}

/** Third-order distortion 100 (r' - r) / r of the lens's own wavelength at a field h, in percent. Scale changes (W111, lateral colour) are not
 * counted. */
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
