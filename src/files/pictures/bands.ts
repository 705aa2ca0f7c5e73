/** From the colours of a scene to the bands of a camera. */
import { InputError } from '../../errors.js';
import { type AllocatePlanes, type Picture, sharedPlanes } from './picture.js';

/** Share of linear red, green and blue in luminance. Source: ITU-R BT.709 (from memory). */
export const LUMINANCE_WEIGHTS = [0.2126, 0.7152, 0.0722] as const;

const PLANE_OF_BAND: Readonly<Record<string, number>> = { red: 0, green: 1, blue: 2 };

/** The planes of a scene in the order of a camera's bands.
 *
 * A mono scene gives every band the same plane (shared, not copied); a colour scene gives `red`, `green` and
 * `blue` their own and `mono` its luminance.
 *
 * @param scene      1 or 3 planes in linear light; not changed
 * @param bandNames  of the camera
 * @throws {InputError} a band of another name
 */
export function toBands(
  scene: Picture,
  bandNames: readonly string[],
  options: { allocate?: AllocatePlanes } = {},
): Picture {
  const { width, height, planes } = scene;
  const allocate = options.allocate ?? sharedPlanes;
  let luminance: Float32Array | undefined;
  const planeOf = (band: string): Float32Array => {
    if (band !== 'mono' && !(band in PLANE_OF_BAND)) {
      throw new InputError({
        key: 'camera.bands_nm',
        message: 'has a band that no colour of a scene belongs to',
        found: band,
        allowed: 'mono, or red, green and blue',
      });
    }
    if (planes.length === 1) return planes[0];
    if (band !== 'mono') return planes[PLANE_OF_BAND[band]];
    if (luminance === undefined) {
      [luminance] = allocate(width, height, 1);
      weighColours(luminance, planes);
    }
    return luminance;
  };
  return { width, height, planes: bandNames.map(planeOf) };
}

function weighColours(out: Float32Array, [red, green, blue]: readonly Float32Array[]): void {
  const [wr, wg, wb] = LUMINANCE_WEIGHTS;
  for (let i = 0; i < out.length; i++) out[i] = wr * red[i] + wg * green[i] + wb * blue[i];
}
