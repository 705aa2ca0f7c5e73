/** A picture in memory, as this folder gives and takes it. */
import { InputError, RunError } from '../../errors.js';

/** A picture in linear light, 1 being full scale: one plane (mono) or three (red, green, blue), row-major. */
export interface Picture {
  width: number;
  height: number;
  planes: Float32Array[];
}

/** Makes planes of width x height samples; their contents need not be zero. */
export type AllocatePlanes = (width: number, height: number, count: number) => Float32Array[];

/** Planes in shared memory of their own, for every worker to see.
 * @throws {RunError} where there is no memory left */
export const sharedPlanes: AllocatePlanes = (width, height, count) => {
  const bytes = 4 * width * height;
  try {
    return Array.from({ length: count }, () => new Float32Array(new SharedArrayBuffer(bytes)));
  } catch {
    const mebibytes = Math.ceil((count * bytes) / 2 ** 20);
    throw new RunError(
      `out of memory: ${width} x ${height} samples in ${count} planes take ${mebibytes} MiB`,
    );
  }
};

/** Refuse a picture that cannot be a scene: planes of another size or number, a single pixel, values that are
 * no numbers or negative.
 * @param name what to call it in the message: a file's name, or `scene`
 * @throws {InputError} with every fault found */
export function checkPicture(picture: Picture, name = 'scene'): void {
  const { width, height, planes } = picture;
  if (!Number.isSafeInteger(width) || !Number.isSafeInteger(height) || width < 1 || height < 1) {
    throw new InputError({
      file: name,
      message: 'has no such size',
      found: `${width} x ${height}`,
      allowed: 'whole numbers of pixels above 0',
    });
  }
  refuseOnePixel(width, height, name);
  if (planes.length !== 1 && planes.length !== 3) {
    throw new InputError({
      file: name,
      message: 'has the wrong number of planes',
      found: String(planes.length),
      allowed: '1 (mono) or 3 (red, green, blue)',
    });
  }
  for (const [at, plane] of planes.entries()) {
    if (plane.length !== width * height) {
      throw new InputError({
        file: name,
        key: `planes[${at}]`,
        message: 'has the wrong number of samples',
        found: String(plane.length),
        allowed: `${width * height}, for ${width} x ${height} pixels`,
      });
    }
    const wrong = firstWrongSample(plane);
    if (wrong >= 0) {
      throw new InputError({
        file: name,
        key: `planes[${at}]`,
        message: `holds no amount of light at column ${wrong % width}, row ${Math.floor(wrong / width)}`,
        found: String(plane[wrong]),
        allowed: 'finite numbers from 0 up, 1 being full scale',
      });
    }
  }
}

/** A picture of one pixel shows nothing: most likely the wrong file.
 * @throws {InputError} */
export function refuseOnePixel(width: number, height: number, name: string): void {
  if (width * height > 1) return;
  throw new InputError({
    file: name,
    message: 'is a single pixel and shows nothing to look at through a lens',
    found: '1 x 1',
    allowed: 'two pixels or more',
  });
}

function firstWrongSample(plane: Float32Array): number {
  for (let i = 0; i < plane.length; i++) {
    if (!(plane[i] >= 0 && plane[i] < Number.POSITIVE_INFINITY)) return i; // NaN fails every comparison
  }
  return -1;
}
