/** Which colour each pixel of a mosaic sees. */
import { InputError } from '../errors.js';
import type { Mosaic } from '../optics/rig.js';

/** The plane that each site of the repeating 2 x 2 square sees: the upper two from the left,
 * then the lower two. */
export type MosaicSites = readonly [number, number, number, number];

const BAND_OF_LETTER: Readonly<Record<string, string>> = { r: 'red', g: 'green', b: 'blue' };

/** The sites of a mosaic: its four letters name the colours of the top left 2 x 2 pixels row by row (common
 * practice).
 *
 * @param bandNames  names of the planes, in their order; three with `red`, `green` and `blue` where there is
 *                   a mosaic
 * @returns undefined without a mosaic
 * @throws {InputError} where the bands are not red, green and blue
 */
export function mosaicSites(mosaic: Mosaic, bandNames: readonly string[]): MosaicSites | undefined {
  if (mosaic === 'none') return undefined;
  const plane = (letter: string) => bandNames.indexOf(BAND_OF_LETTER[letter]);
  if (bandNames.length !== 3 || ['r', 'g', 'b'].some((letter) => plane(letter) < 0))
    throw new InputError({
      key: 'camera.mosaic',
      message: `the mosaic ${mosaic} needs three bands`,
      found: bandNames.join(', '),
      allowed: 'red, green and blue',
      advice: 'Name these bands in camera.bands_nm, or set mosaic: none.',
    });
  const [a, b, c, d] = mosaic;
  return [plane(a), plane(b), plane(c), plane(d)];
}

/** What a mosaic leaves of a full-colour picture: each pixel keeps the value of its own colour. For pictures
 * without noise; a sensor with noise is sampled by `exposeRows`.
 *
 * @param planes  row-major, `width` samples a row
 * @param out     one plane of the same size; only rows rowStart <= row < rowEnd are written
 */
export function sampleMosaicRows(
  planes: readonly Float32Array[],
  width: number,
  sites: MosaicSites,
  rowStart: number,
  rowEnd: number,
  out: Float32Array,
): void {
  for (let row = rowStart; row < rowEnd; row++)
    for (let phase = 0; phase < 2; phase++) {
      const plane = planes[sites[2 * (row & 1) + phase]];
      const end = (row + 1) * width;
      for (let i = row * width + phase; i < end; i += 2) out[i] = plane[i];
    }
}
