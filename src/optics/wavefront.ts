/** The wavefront of one field point, at one wavelength, at the stop in use. */
import { axialColourUm, wavesAt } from './colour.js';
import { shiftWithinBandUm } from './distortion.js';
import type { Band, Rig } from './rig.js';

/** The third-order wavefront at one field point, in waves of the wavelength at hand, over the unit pupil of the stop in use:
 *
 *     W(m, s) = w40 rho^4 + w31 rho^2 m + w22 m^2 + w20 rho^2 + w11 m,   rho^2 = m^2 + s^2
 *
 * m runs along the field, outward; s across it. Distortion and lateral colour of the band as a whole are not in w11: the warp
 * applies them.
 */
export interface LocalWavefront {
  w40: number;
  w31: number;
  w22: number;
  w20: number;
  w11: number;
  /** Outward direction of the field on the sensor, x right, y down. On the axis, where it is free, +x. */
  cos: number;
  sin: number;
}

/** The wavefront at an ideal image point.
 *
 * @param xMm    ideal image point, from the optical axis, + right
 * @param yMm    the same, + down
 * @param nm     wavelength
 * @param band   the band that the wavelength belongs to: its mean distortion and lateral colour are left to the warp. Left out: `nm` is all of the band
 * Source: W. T. Welford, Aberrations of Optical Systems (1986), ch. 7 for the expansion (cited from memory); scaling with stop and
 * wavelength follows from the powers of rho and from optical path being a length.
 */
export function wavefrontAt(rig: Rig, xMm: number, yMm: number, nm: number, band?: Band): LocalWavefront {
  const { lens, mount } = rig;
  const radiusMm = Math.hypot(xMm, yMm);
  const h = radiusMm / lens.fullFieldMm;
  const waves = wavesAt(lens, nm);
  const q = lens.fNumber / mount.fNumber; // the old rim of the pupil, rho = 1, is the new one's 1/q
  const lambdaUm = nm / 1000;
  const toWavesHere = lens.wavelengthNm / nm; // the optical path stays, the number of waves changes
  const defocusUm = mount.sensorShiftUm + tiltShiftUm(rig, xMm, yMm) - axialColourUm(lens, nm);
  const shiftUm = band === undefined ? 0 : shiftWithinBandUm(lens, h, nm, band);
  return {
    w40: toWavesHere * waves.W040 * q ** 4,
    w31: toWavesHere * waves.W131 * h * q ** 3,
    w22: toWavesHere * waves.W222 * h ** 2 * q ** 2,
    w20:
      toWavesHere * (waves.W220 * h ** 2 + waves.W020) * q ** 2 +
      defocusWaves(defocusUm, mount.fNumber, lambdaUm),
    w11: -shiftUm / (2 * mount.fNumber * lambdaUm), // eps = -2 N lambda dW/dm
    cos: radiusMm === 0 ? 1 : xMm / radiusMm,
    sin: radiusMm === 0 ? 0 : yMm / radiusMm,
  };
}

/** W at a point of the unit pupil, in waves. */
export function opticalPathWaves(wavefront: LocalWavefront, m: number, s: number): number {
  const { w40, w31, w22, w20, w11 } = wavefront;
  const rho2 = m * m + s * s;
  return rho2 * (w40 * rho2 + w31 * m + w20) + m * (w22 * m + w11);
}

/** The largest slope of W over the pupil (an upper bound), in waves per pupil radius: each term's own largest, added up. */
export function slopeBound(wavefront: LocalWavefront): number {
  const { w40, w31, w22, w20, w11 } = wavefront;
  return 4 * Math.abs(w40) + 3 * Math.abs(w31) + 2 * Math.abs(w22 + w20) + 2 * Math.abs(w20) + Math.abs(w11);
}

/** RMS of W over the pupil with piston and tilt taken out, in waves.
 *
 * Tilt of best fit takes 2/3 w31 out of coma and all of w11; the rest is the closed form of the variance over a uniform pupil.
 * Source: V. N. Mahajan, JOSA 73 (1983) 860 and Born and Wolf, Principles of Optics, 9.3 (cited from memory).
 */
export function wavefrontRmsWaves(wavefront: LocalWavefront): number {
  const { w40, w31, w22, w20 } = wavefront;
  const variance =
    (4 / 45) * w40 ** 2 +
    w31 ** 2 / 72 +
    w22 ** 2 / 16 +
    w20 ** 2 / 12 +
    (w40 * w20) / 6 +
    (w40 * w22) / 12 +
    (w22 * w20) / 12;
  return Math.sqrt(Math.max(0, variance));
}

/** W020 of a sensor that stands `defocusUm` behind the focus: delta / (8 N^2 lambda), in waves.
 * Source: Born and Wolf, Principles of Optics, 8.8 (cited from memory). */
export function defocusWaves(defocusUm: number, fNumber: number, lambdaUm: number): number {
  return defocusUm / (8 * fNumber ** 2 * lambdaUm);
}

/** How far a tilted sensor stands behind its untilted place at an image point, in um.
 * Right-handed turns with z away from the lens: about x brings +y away, about y brings +x nearer. */
export function tiltShiftUm(rig: Rig, xMm: number, yMm: number): number {
  const [aboutX, aboutY] = rig.mount.sensorTiltDeg;
  const slope = (degrees: number) => Math.tan((degrees * Math.PI) / 180);
  return 1000 * (yMm * slope(aboutX) - xMm * slope(aboutY));
}
