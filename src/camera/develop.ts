/** From raw numbers back to a picture in linear light. */
import { rawLevels } from './converter.js';
import { demosaicRows } from './demosaic.js';
import type { Exposure } from './exposure.js';

/** Develop rows rowStart <= row < rowEnd: subtract the black level, scale so that the scene's white is 1, and
 * fill in the colours of a mosaic. A mosaic needs two rows more of `raw` on either side, so expose every row
 * first.
 *
 * The scale is that of the light that went in, so without noise the picture is the scene to within half a raw
 * number. Only where white_e is more than the well holds does the scale follow the well, and a saturated
 * pixel is white.
 *
 * @param raw      from `exposeRows`, with the same `exposure`
 * @param picture  one plane a band, width x height, linear; not clipped: noise goes a little below 0 and
 *                 above 1, and cutting it off would falsify means; whoever encodes the picture clips it; only
 *                 these rows are written
 * @throws {InputError} for a mosaic on fewer than 2 x 2 pixels
 */
export function developRows(
  raw: readonly Uint16Array[],
  exposure: Exposure,
  rowStart: number,
  rowEnd: number,
  picture: readonly Float32Array[],
): void {
  const { width, height, sites } = exposure;
  const { blackLevelDn, sceneWhiteDn } = rawLevels(exposure.sensor, exposure.converter);
  const scale = 1 / (sceneWhiteDn - blackLevelDn);
  if (sites !== undefined) {
    demosaicRows(raw[0], width, height, sites, blackLevelDn, scale, rowStart, rowEnd, picture);
    return;
  }
  for (let plane = 0; plane < picture.length; plane++) {
    const from = raw[plane];
    const to = picture[plane];
    for (let i = rowStart * width; i < rowEnd * width; i++) to[i] = (from[i] - blackLevelDn) * scale;
  }
}
