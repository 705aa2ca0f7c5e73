/** The size of a picture file without decoding it. */
import { openPicture } from './open.js';

/** Width and height as `readScene` would give them: turned upright.
 * @throws {InputError} as `openPicture` */
export async function pictureSize(path: string): Promise<{ width: number; height: number }> {
  const { width, height, orientation = 1 } = (await openPicture(path)).metadata;
  // EXIF orientations from 5 on lie on their side. Source: CIPA DC-008, Exif 2.3, tag 274 (from memory)
  return orientation >= 5 ? { width: height, height: width } : { width, height };
}
