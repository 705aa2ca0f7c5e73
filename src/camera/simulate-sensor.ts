/** The camera's whole part of a picture in one call. */
import { type RawLevels, rawLevels } from './converter.js';
import { demosaicRows } from './demosaic.js';
import { developRows } from './develop.js';
import { exposeRows } from './expose.js';
import type { Exposure } from './exposure.js';
import { sampleMosaicRows } from './mosaic.js';

export interface SensorPicture {
  /** The sensor's own numbers: one plane with a mosaic, else one a band. */
  raw: Uint16Array[];
  levels: RawLevels;
  /** Linear light, one plane a band, not clipped. Without a sensor it is never quantised. */
  picture: Float32Array[];
}

/** Expose and develop all rows on this thread. Many threads share the work by calling `exposeRows` and, when
 * every row is exposed, `developRows`, each on rows of its own; the numbers are the same.
 *
 * @param light  linear light 0..1, one plane a band, row-major, width x height of `exposure`; not changed
 */
export function simulateSensor(light: readonly Float32Array[], exposure: Exposure): SensorPicture {
  const { width, height, sites } = exposure;
  const pixels = width * height;
  const raw = Array.from({ length: sites === undefined ? light.length : 1 }, () => new Uint16Array(pixels));
  exposeRows(light, exposure, 0, height, raw);
  const picture: Float32Array[] = light.map(() => new Float32Array(pixels));
  if (exposure.sensor !== undefined) {
    developRows(raw, exposure, 0, height, picture);
  } else if (sites !== undefined) {
    const mosaic = new Float32Array(pixels);
    sampleMosaicRows(light, width, sites, 0, height, mosaic);
    demosaicRows(mosaic, width, height, sites, 0, 1, 0, height, picture);
  } else {
    light.forEach((plane, i) => {
      picture[i].set(plane);
    });
  }
  return { raw, levels: rawLevels(exposure.sensor, exposure.converter), picture };
}
