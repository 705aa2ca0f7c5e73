/** What the linear camera model predicts for a flat field, without drawing any noise. */
import type { Sensor } from '../optics/rig.js';
import type { Converter } from './converter.js';

export interface FlatFieldSignal {
  /** Mean raw number. */
  meanDn: number;
  /** Variance over time of one pixel, in DN squared: shot noise, dark noise, and 1/12 for the rounding. */
  temporalVarianceDn2: number;
  /** Variance over the pixels of their means, in DN squared: PRNU and DSNU. */
  spatialVarianceDn2: number;
  /** Signal over temporal noise. */
  snr: number;
  /** Signal over temporal and spatial noise together: that of one picture. */
  totalSnr: number;
}

/** Mean, variances and signal-to-noise ratios of a flat field below saturation.
 *
 * With mu_e photo-electrons and quantisation variance 1/12 DN^2:
 * mean = offset + K (dark + mu_e); temporal variance = K^2 (sigma_d^2 + dark + mu_e) + 1/12;
 * spatial variance = K^2 (DSNU^2 + PRNU^2 mu_e^2); SNR = mu_e / sqrt(sigma_d^2 + dark + 1/(12 K^2) + mu_e).
 * Source: EMVA 1288 release 3.1 section 2 and release 4.0 Linear (from memory). The 1/12 holds while the
 * total noise is above about 0.6 DN; the full well is not looked at.
 *
 * @param value  linear light 0..1, relative illumination included
 */
export function flatFieldSignal(sensor: Sensor, converter: Converter, value: number): FlatFieldSignal {
  const k = converter.gainDnPerE;
  const photoE = sensor.whiteE * value;
  const temporalE2 = sensor.darkNoiseE ** 2 + sensor.darkE + photoE + 1 / (12 * k * k);
  const spatialE2 = sensor.dsnuE ** 2 + ((sensor.prnuPercent / 100) * photoE) ** 2;
  return {
    meanDn: converter.offsetDn + k * (sensor.darkE + photoE),
    temporalVarianceDn2: k * k * temporalE2,
    spatialVarianceDn2: k * k * spatialE2,
    snr: photoE / Math.sqrt(temporalE2),
    totalSnr: photoE / Math.sqrt(temporalE2 + spatialE2),
  };
}
