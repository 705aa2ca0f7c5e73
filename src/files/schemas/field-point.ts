/** A point of the field, as people write it. */
import { z } from 'zod';
import { number } from './values.js';

/** Places on the rig's own sensor. */
export const FIELD_PLACES = [
  'axis',
  'top',
  'bottom',
  'left',
  'right',
  'top_left',
  'top_right',
  'bottom_left',
  'bottom_right',
] as const;

const WORDS = `a field h, h@azimuth in degrees, or one of ${FIELD_PLACES.join(', ')}`;

export const fieldPoint = z
  .union(
    [
      number({ min: 0, max: 10 }, 'Field h, along +x.'),
      z.enum(FIELD_PLACES, { error: WORDS }),
      z.string().regex(/^\d+(\.\d+)?@[+-]?\d+(\.\d+)?$/, { error: WORDS }),
    ],
    { error: WORDS },
  )
  .describe('A field point: h along +x; h@azimuth in degrees from +x toward +y; or a place on the sensor.');
