/** A point of the field, as people write it. */
import { z } from 'zod';
import { InputError } from '../../errors.js';
import { LARGEST_FIELD, PLACES, parseFieldPoint } from '../../optics/field-points.js';
import { number } from './values.js';

const WORDS = `a field h, h@azimuth in degrees, or one of ${PLACES.join(', ')}`;

const word = z
  .string()
  .superRefine((text, context) => {
    try {
      parseFieldPoint(text);
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      const [{ message, advice }] = error.faults;
      context.addIssue({ code: 'custom', message, params: { message, allowed: WORDS, advice } });
    }
  })
  .meta({ anyOf: [{ enum: PLACES }, { pattern: '^[-+.0-9eE]+@[-+.0-9eE]+$' }] }); // for editors

export const fieldPoint = z
  .union([number({ min: 0, max: LARGEST_FIELD }, 'Field h, along +x.'), word], { error: WORDS })
  .describe('A field point: h along +x; h@azimuth in degrees from +x toward +y; or a place on the sensor.');
