/** The rig file: lens, camera, mount. */
import { z } from 'zod';
import { cameraPart } from './camera.js';
import { crossChecked, isMapping, numberIn, type Report, type Unchecked } from './cross-check.js';
import { lensPart } from './lens.js';
import { mountPart } from './mount.js';
import { fileName, mapping } from './values.js';

const about = {
  title: 'Rig',
  description: 'A lens, a camera and how they are put together.',
};
const mount = mountPart.prefault({});

/** The file as people write it: a part may be the name of another file. */
export const rigFile = mapping({
  lens: z
    .union([fileName('A file that holds the lens.'), lensPart], {
      error: 'a lens, or the name of a file that holds one',
    })
    .describe('The lens, or the name of a file that holds one.'),
  camera: z
    .union([fileName('A file that holds the camera.'), cameraPart], {
      error: 'a camera, or the name of a file that holds one',
    })
    .describe('The camera, or the name of a file that holds one.'),
  mount,
}).meta(about);

/** The rig with its parts in place. */
export const wholeRig = crossChecked(
  mapping({ lens: lensPart, camera: cameraPart, mount }),
  (rig, report) => {
    if (!isMapping(rig.lens) || !isMapping(rig.mount)) return;
    checkStop(rig.lens, rig.mount, report);
    checkObjectDistance(rig.lens, rig.mount, report);
  },
).meta(about);

/** A rig as a file or an object of the caller states it, with its parts in place and the fixed defaults filled in. */
export type RigFile = z.output<typeof wholeRig>;

function checkStop(lens: Unchecked, mount: Unchecked, report: Report): void {
  const widest = numberIn(lens.f_number);
  const stop = numberIn(mount.f_number);
  if (widest === undefined || stop === undefined || stop <= 0 || stop >= widest) return;
  report(['mount', 'f_number'], stopBelowLens(widest));
}

/** The fault of a stop wider than the one for which the coefficients hold. */
export function stopBelowLens(lensFNumber: number) {
  return {
    message: "is below the lens's f-number, so the coefficients do not hold",
    allowed: `${lensFNumber} (lens.f_number) or more`,
  };
}

function checkObjectDistance(lens: Unchecked, mount: Unchecked, report: Report): void {
  const distance = numberIn(mount.object_distance_mm);
  if (distance === undefined || lens.prescription !== undefined) return;
  const focal = numberIn(lens.focal_length_mm);
  if (lens.focal_length_mm === undefined) {
    const message = 'needs lens.focal_length_mm';
    report(['mount', 'object_distance_mm'], {
      message,
      advice: 'State it, or give object_pixel_mm or magnification.',
    });
  } else if (focal !== undefined && focal > 0 && distance <= focal) {
    const allowed = `more than ${focal} (lens.focal_length_mm)`;
    report(['mount', 'object_distance_mm'], { message: 'is too near for a real image', allowed });
  }
}
