/** From how near to how far away an object may lie. */

import { InputError } from '../errors.js';
import type { Rig } from '../optics/rig.js';
import { pixelPitchMm } from '../optics/rig.js';
import { endOfRange } from './end-of-range.js';
import { withShift } from './lens-parts.js';
import type { MetCheck } from './met-check.js';
import { objectPixelMm } from './object-scale.js';

export interface DepthRange {
  /** Image size over object size at the distance in focus. */
  magnification: number;
  /** Distance in focus and the range in which the task is met, from the front principal plane, in mm. Left out without a focal length. */
  objectDistanceMm?: number;
  nearestMm?: number;
  /** null: as far as one likes. */
  farthestMm?: number | null;
  /** How much nearer and how much farther than the distance in focus the object may lie, in mm. */
  nearerMm: number;
  /** null: as far as one likes. */
  fartherMm: number | null;
  /** The two together; null where there is no end. */
  depthMm: number | null;
  /** The same on the image side: how far the focus moves, in um, + away from the lens, from the farthest to the nearest object. */
  focusUm: [farthest: number, nearest: number];
}

/** The depth in which a task is met on a rig that meets it; null where it does not meet it as it stands.
 *
 * An object that comes nearer by dz moves its image away from the lens by m^2 dz, the longitudinal magnification. With a focal length f the
 * lens equation is used in full, 1/s' = 1/f - 1/s, and sizes on the object grow with the distance. The aberrations are held as they are.
 * Source: Born and Wolf, Principles of Optics, 4.4.2 (cited from memory)
 * @throws {InputError} where the rig states no scale on the object
 */
export async function depthOf(rig: Rig, check: MetCheck): Promise<DepthRange | null> {
  const magnification = magnificationOf(rig);
  if (!(await check.isMet(rig))) return null;
  const focalMm = rig.lens.focalLengthMm;
  const geometry = focalMm === undefined ? longitudinal(magnification) : thinLens(focalMm, magnification);
  const nearest = await endOfDepth(rig, 1, geometry, check);
  const farthest = await endOfDepth(rig, -1, geometry, check);
  const nearerMm = geometry.nearerMm(nearest);
  const fartherMm = farthest <= geometry.farthestFocusUm ? null : -geometry.nearerMm(farthest);
  const range: DepthRange = {
    magnification,
    nearerMm,
    fartherMm,
    depthMm: fartherMm === null ? null : nearerMm + fartherMm,
    focusUm: [farthest, nearest],
  };
  if (geometry.distanceMm === undefined) return range;
  const { distanceMm } = geometry;
  return {
    ...range,
    objectDistanceMm: distanceMm,
    nearestMm: distanceMm - nearerMm,
    farthestMm: fartherMm === null ? null : distanceMm + fartherMm,
  };
}

/** How the focus and the object's distance go together. */
interface Geometry {
  /** Distance in focus, where it is known. */
  distanceMm?: number;
  /** Where the focus of an object at infinity lies, against that of the object in focus, in um. */
  farthestFocusUm: number;
  /** How much nearer an object lies whose focus has moved. */
  nearerMm(focusUm: number): number;
}

function longitudinal(magnification: number): Geometry {
  return {
    farthestFocusUm: Number.NEGATIVE_INFINITY,
    nearerMm: (focusUm) => focusUm / 1000 / magnification ** 2,
  };
}

function thinLens(focalMm: number, magnification: number): Geometry {
  const distanceMm = focalMm * (1 + 1 / magnification);
  const imageMm = focalMm * (1 + magnification);
  return {
    distanceMm,
    farthestFocusUm: -1000 * focalMm * magnification,
    nearerMm: (focusUm) => {
      const movedMm = imageMm + focusUm / 1000;
      return distanceMm - (focalMm * movedMm) / (movedMm - focalMm);
    },
  };
}

function magnificationOf(rig: Rig): number {
  const objectPixel = objectPixelMm(rig);
  if (objectPixel !== undefined) return pixelPitchMm(rig.camera) / objectPixel;
  throw new InputError({
    key: 'mount.object_pixel_mm',
    message: 'is missing, and the depth needs the scale on the object',
    advice: 'State mount.object_pixel_mm, mount.magnification or mount.object_distance_mm.',
  });
}

/** The rig looking at an object whose focus has moved: the sensor then stands before its focus by as much. */
function rigFocusedAt(rig: Rig, focusUm: number, { distanceMm, nearerMm }: Geometry): Rig {
  const moved = withShift(rig, rig.mount.sensorShiftUm - focusUm);
  if (distanceMm === undefined) return moved;
  const scale = (distanceMm - nearerMm(focusUm)) / distanceMm;
  const objectScale = { objectPixelMm: objectPixelMm(rig)! * scale };
  return { ...moved, mount: { ...moved.mount, objectScale } };
}

/** How far the focus may move in one direction, in um with its sign. */
async function endOfDepth(rig: Rig, sign: number, geometry: Geometry, check: MetCheck): Promise<number> {
  // a tenth of the defocus of Rayleigh's quarter wave, 2 N^2 lambda
  const step = 0.2 * rig.mount.fNumber ** 2 * (rig.lens.wavelengthNm / 1000);
  // an object at infinity has no size to be judged: the last finite distance stands for it
  const reach = sign < 0 ? -0.999 * geometry.farthestFocusUm : LARGEST_MOVE_UM;
  const rigAt = (um: number) => rigFocusedAt(rig, sign * um, geometry);
  const distance = await endOfRange({ rigAt, step, reach: Math.min(reach, LARGEST_MOVE_UM) }, check);
  if (distance !== null) return sign * distance;
  return sign < 0 ? geometry.farthestFocusUm : LARGEST_MOVE_UM;
}

/** Where no focus is looked for any more. */
const LARGEST_MOVE_UM = 1e5;
