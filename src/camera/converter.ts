/** From electrons to raw numbers: the gain, the pedestal and what a reader of these numbers must know. */
import { InputError } from '../errors.js';
import type { Sensor } from '../optics/rig.js';

/** The analogue-digital converter: DN = round(offset + K electrons), clipped to 0..whiteLevel. */
export interface Converter {
  /** The system gain K of EMVA 1288, DN per electron. */
  gainDnPerE: number;
  /** The pedestal: the raw number of no electrons and no noise, a whole number. */
  offsetDn: number;
  /** The largest raw number. */
  whiteLevelDn: number;
}

/** What the raw numbers mean. */
export interface RawLevels {
  /** Mean raw number without light: the pedestal and the mean dark signal. Not always whole. */
  blackLevelDn: number;
  /** The raw number that a full well gives, which is the largest one. */
  whiteLevelDn: number;
  /** The raw number that develops to 1: the scene's white, or a full well where white_e is more than the well
   * holds. */
  sceneWhiteDn: number;
  /** The system gain K, DN per electron. */
  gainDnPerE: number;
}

/** The pedestal keeps this many standard deviations of the dark signal above 0. EMVA 1288 asks that the
 * offset be set so high that the dark image does not underflow to a noteworthy extent (it names 0.5 % of the
 * pixels; from memory), because clipped noise falsifies the dark mean and the dark noise. At 6 deviations one
 * pixel in 1e9 is clipped. */
const PEDESTAL_DEVIATIONS = 6;

/** A rig without a sensor has no electrons: the raw numbers are the linear values times 65535. */
const WITHOUT_SENSOR: Converter = { gainDnPerE: 65535, offsetDn: 0, whiteLevelDn: 65535 };

/** The converter of a sensor: a full well lands on the largest raw number, K = (2^bits - 1 - offset) /
 * full_well_e, and the pedestal stands 6 standard deviations of the dark signal (temporal and DSNU) above 0.
 * Without those two noises there is no pedestal.
 *
 * @throws {InputError} where the dark signal or its noise leaves no room in the well; bit depth past 16
 */
export function converterFor(sensor: Sensor | undefined): Converter {
  if (sensor === undefined) return WITHOUT_SENSOR;
  checkSensor(sensor);
  const whiteLevelDn = 2 ** sensor.bitDepth - 1;
  const swingE = PEDESTAL_DEVIATIONS * Math.hypot(sensor.darkNoiseE, sensor.dsnuE);
  // offset = K swing and white level = offset + K full well
  const offsetDn = Math.ceil((whiteLevelDn * swingE) / (sensor.fullWellE + swingE));
  return { gainDnPerE: (whiteLevelDn - offsetDn) / sensor.fullWellE, offsetDn, whiteLevelDn };
}

/** The levels of a sensor's raw numbers, for the record and for `developRows`. */
export function rawLevels(sensor: Sensor | undefined, converter: Converter): RawLevels {
  const { gainDnPerE, offsetDn, whiteLevelDn } = converter;
  const darkE = sensor?.darkE ?? 0;
  // An overexposed camera shows a full well as white, so the picture grows brighter with white_e from there
  // on, as on the bench.
  const whiteE = sensor === undefined ? 1 : Math.min(sensor.whiteE, sensor.fullWellE - darkE);
  const blackLevelDn = offsetDn + gainDnPerE * darkE;
  return { blackLevelDn, whiteLevelDn, sceneWhiteDn: blackLevelDn + gainDnPerE * whiteE, gainDnPerE };
}

function checkSensor(sensor: Sensor): void {
  const { bitDepth, darkE, darkNoiseE, dsnuE, fullWellE } = sensor;
  if (!Number.isInteger(bitDepth) || bitDepth < 1 || bitDepth > 16)
    throw new InputError({
      key: 'camera.sensor.bit_depth',
      message: 'raw numbers have 1 to 16 bits',
      found: String(bitDepth),
      allowed: 'a whole number from 1 to 16',
    });
  if (!(darkE < fullWellE))
    throw new InputError({
      key: 'camera.sensor.dark_e',
      message: 'the dark signal alone fills the well',
      found: String(darkE),
      allowed: `below full_well_e (${fullWellE})`,
      advice: 'Shorten the exposure (a smaller dark_e) or raise full_well_e.',
    });
  const swingE = PEDESTAL_DEVIATIONS * Math.hypot(darkNoiseE, dsnuE);
  if (!(swingE < fullWellE))
    throw new InputError({
      key: darkNoiseE >= dsnuE ? 'camera.sensor.dark_noise_e' : 'camera.sensor.dsnu_e',
      message: `${PEDESTAL_DEVIATIONS} standard deviations of the dark signal are as large as the well`,
      found: `${Number(swingE.toPrecision(6))} e for dark_noise_e ${darkNoiseE} and dsnu_e ${dsnuE}`,
      allowed: `below full_well_e (${fullWellE})`,
      advice: 'Lower the noise or raise full_well_e.',
    });
}
