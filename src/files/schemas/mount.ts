/** How lens and camera are put together, and how far away the object is. */
import type { z } from 'zod';
import { checkOneOf, crossChecked } from './cross-check.js';
import { fNumber, mapping, number, pair } from './values.js';

const tilt = (axis: string) =>
  number({ above: -45, below: 45, unit: 'deg' }, `Tilt about the ${axis} axis, right-handed.`);
const axisPixel = (axis: string) => number({ min: -1e6, max: 1e6 }, `Place along ${axis}.`);

const OBJECT_SCALES = ['object_pixel_mm', 'magnification', 'object_distance_mm'] as const;

export const mountPart = crossChecked(
  mapping({
    f_number: fNumber('The stop in use. Not below lens.f_number, which is the default.').optional(),
    sensor_shift_um: number(
      { min: -1e5, max: 1e5, unit: 'um' },
      'Shift of the sensor along the axis, + away from the lens.',
    ).default(0),
    sensor_tilt_deg: pair(tilt('x'), tilt('y'), 'a pair [about x, about y] in degrees')
      .describe('Tilt of the sensor about the x axis and about the y axis. Unit: deg.')
      .default([0, 0]),
    object_pixel_mm: number({ above: 0, max: 1e6, unit: 'mm' }, 'Size of a pixel on the object.').optional(),
    magnification: number({ above: 0, max: 1e4 }, 'Image size over object size, without a sign.').optional(),
    object_distance_mm: number(
      { above: 0, max: 1e12, unit: 'mm' },
      'Distance of the object from the front principal plane. Needs lens.focal_length_mm.',
    ).optional(),
    axis_px: pair(axisPixel('x'), axisPixel('y'), 'a pair [x, y] in pixels')
      .describe(
        'Where the optical axis meets the sensor; the middle of the first pixel is at [0, 0]. Left out: the middle of the sensor. Unit: pixels.',
      )
      .optional(),
  }),
  (mount, report) => checkOneOf(mount, OBJECT_SCALES, report),
).meta({
  description: 'The stop in use, the place of the sensor and the scale on the object.',
  not: { anyOf: pairsOf(OBJECT_SCALES).map((both) => ({ required: both })) },
});

export type MountFile = z.output<typeof mountPart>;

function pairsOf<Word>(words: readonly Word[]): Word[][] {
  return words.flatMap((first, index) => words.slice(index + 1).map((second) => [first, second]));
}
