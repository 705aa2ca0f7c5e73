/** The sensor: light in, raw numbers out. */
import { CounterRandom } from '../numeric/random.js';
import type { Sensor } from '../optics/rig.js';
import type { Converter } from './converter.js';
import type { Exposure } from './exposure.js';

/** Streams of random numbers: what a pixel draws for itself once, and what it draws for each picture. */
const FIXED_PATTERN_STREAM = 1;
const TEMPORAL_STREAM = 2;

/** Expose rows rowStart <= row < rowEnd: the linear camera model of EMVA 1288 (release 4.0 Linear; cited from
 * memory).
 *
 *     charge  = min(full_well_e, Poisson(white_e value (1 + PRNU) + dark_e))
 *     DN      = round(offset + K (charge + DSNU + dark_noise_e N(0, 1))), clipped to 0..white level
 *
 * PRNU is a spread of the photo-response, so it multiplies the light and not the dark signal. DSNU is a
 * spread of the dark signal's mean; it may be negative, so it is added as an offset behind the well rather
 * than to the mean of a Poisson count, which leaves its size free of the temporal noise. The dark signal
 * dark_e has its shot noise; dark_noise_e is the read-out's.
 *
 * The noise of a pixel depends on (seed, plane, row, column) alone, and its fixed pattern on (camera seed,
 * plane, row, column): any split into rows gives the same numbers, and a mosaic gives at each site the very
 * number of the full-colour picture.
 *
 * @param light  linear light 0..1, relative illumination applied; one plane a band, row-major, width x
 *               height; values below 0 and NaN count as dark
 * @param raw    one plane with a mosaic, else one a band; width x height; only these rows are written
 */
export function exposeRows(
  light: readonly Float32Array[],
  exposure: Exposure,
  rowStart: number,
  rowEnd: number,
  raw: readonly Uint16Array[],
): void {
  const { width, height, sites } = exposure;
  const exposePixels =
    exposure.sensor === undefined
      ? quantiser(exposure.converter)
      : noisyPixels(exposure.sensor, exposure, width * height);
  for (let row = rowStart; row < rowEnd; row++) {
    const start = row * width;
    const end = start + width;
    if (sites === undefined)
      for (let plane = 0; plane < light.length; plane++)
        exposePixels(light[plane], plane, start, end, 1, raw[plane]);
    else
      for (let phase = 0; phase < 2; phase++) {
        const plane = sites[2 * (row & 1) + phase];
        exposePixels(light[plane], plane, start + phase, end, 2, raw[0]);
      }
  }
}

/** Expose the pixels start, start + step, ... below end of one plane. */
type ExposePixels = (
  light: Float32Array,
  plane: number,
  start: number,
  end: number,
  step: number,
  raw: Uint16Array,
) => void;

function quantiser({ gainDnPerE, offsetDn, whiteLevelDn }: Converter): ExposePixels {
  return (light, _plane, start, end, step, raw) => {
    for (let i = start; i < end; i += step) raw[i] = quantise(offsetDn + gainDnPerE * light[i], whiteLevelDn);
  };
}

function noisyPixels(sensor: Sensor, exposure: Exposure, pixelsPerPlane: number): ExposePixels {
  const { whiteE, fullWellE, darkE, darkNoiseE, dsnuE } = sensor;
  const { gainDnPerE, offsetDn, whiteLevelDn } = exposure.converter;
  const prnu = sensor.prnuPercent / 100;
  const hasFixedPattern = prnu > 0 || dsnuE > 0;
  const surelyFullE = 4 * fullWellE + 100; // chance leaves such a well unfilled once in 1e40 pixels
  const fixed = new CounterRandom(exposure.cameraSeed, FIXED_PATTERN_STREAM);
  const temporal = new CounterRandom(exposure.seed, TEMPORAL_STREAM);
  return (light, plane, start, end, step, raw) => {
    const firstItem = plane * pixelsPerPlane;
    for (let i = start; i < end; i += step) {
      let response = 1;
      let readoutE = 0;
      if (hasFixedPattern) {
        fixed.start(firstItem + i);
        response += prnu * fixed.normal();
        readoutE = dsnuE * fixed.normal();
      }
      temporal.start(firstItem + i);
      readoutE += darkNoiseE * temporal.normal();
      // a pixel cannot answer light with fewer electrons than none
      const meanE = Math.min(surelyFullE, darkE + Math.max(0, whiteE * light[i] * response));
      const charge = Math.min(fullWellE, temporal.poisson(meanE));
      raw[i] = quantise(offsetDn + gainDnPerE * (charge + readoutE), whiteLevelDn);
    }
  };
}

/** The whole number next to dn (halves go up), from 0 to the white level; 0 for NaN. */
function quantise(dn: number, whiteLevelDn: number): number {
  if (!(dn > 0)) return 0;
  return dn < whiteLevelDn ? Math.floor(dn + 0.5) : whiteLevelDn;
}
