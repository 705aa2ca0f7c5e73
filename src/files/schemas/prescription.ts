/** A lens as its surfaces. */
import { z } from 'zod';
import { checkOneOf, crossChecked, isMapping, type Report, type Unchecked } from './cross-check.js';
import { flag, fNumber, list, mapping, number, text, wavelengthNm } from './values.js';

const infinity = z.literal('infinity', { error: 'infinity' });
const length = (description: string) => number({ min: -1e9, max: 1e9, unit: 'mm' }, description);
const positive = (description: string) => number({ above: 0, max: 1e6, unit: 'mm' }, description);

const sellmeierTerms = (what: string) =>
  z
    .array(number({ min: -1e6, max: 1e6 }, 'A coefficient.'), { error: 'a list of 1 to 6 numbers' })
    .min(1)
    .max(6)
    .describe(what);

const sellmeier = crossChecked(
  mapping({
    B: sellmeierTerms('Numerators.'),
    C_um2: sellmeierTerms('Squared resonance wavelengths. Unit: um^2.'),
  }),
  ({ B, C_um2 }, report) => {
    if (!Array.isArray(B) || !Array.isArray(C_um2) || B.length === C_um2.length) return;
    report(['C_um2'], { message: 'is not as long as B', allowed: `${B.length} numbers` });
  },
).describe('n^2 = 1 + sum of B L^2 / (L^2 - C), L the wavelength in um.');

const glassData = crossChecked(
  mapping({
    n: number({ min: 1, max: 6 }, 'Refractive index at every wavelength.').optional(),
    nd: number({ above: 1, max: 6 }, 'Refractive index at 587.5618 nm.').optional(),
    vd: number({ above: 0, max: 300 }, 'Abbe number, beside nd.').optional(),
    sellmeier: sellmeier.optional(),
  }),
  (glass, report) => {
    checkOneOf(glass, ['n', 'nd', 'sellmeier'], report, { needed: glass.vd === undefined });
    if (glass.nd !== undefined && glass.vd === undefined)
      report(['vd'], { message: 'is missing beside nd', missing: true });
    if (glass.nd === undefined && glass.vd !== undefined)
      report(['nd'], { message: 'is missing beside vd', missing: true });
  },
);

const CODE_WORDS = 'a six-digit glass code, such as 517642';

const glass = z
  .union(
    [
      z.int({ error: CODE_WORDS }).min(100000).max(999999),
      z.string({ error: CODE_WORDS }).regex(/^\d{6}$/),
      glassData,
    ],
    { error: `${CODE_WORDS}, or a mapping with nd and vd, with n, or with sellmeier` },
  )
  .describe('Medium behind the surface: a six-digit code, {nd, vd}, {n} or {sellmeier}. Left out: air.');

const ASPHERIC_ORDERS = [4, 6, 8, 10, 12, 14, 16, 18, 20] as const;
const asphericTerms = Object.fromEntries(
  ASPHERIC_ORDERS.map((order) => [
    `A${order}`,
    number({}, `Sag per r^${order}. Unit: mm^${1 - order}.`).optional(),
  ]),
) as Record<`A${(typeof ASPHERIC_ORDERS)[number]}`, z.ZodOptional<z.ZodNumber>>;

const surface = crossChecked(
  mapping({
    radius_mm: z
      .union([length('Radius of curvature.'), infinity], { error: 'a number other than 0 (mm), or infinity' })
      .describe('Radius of curvature, + with its centre to the right. Left out or infinity: flat. Unit: mm.')
      .optional(),
    thickness_mm: length(
      'Distance to the next surface. On the last one left out: to the paraxial focus.',
    ).optional(),
    glass: glass.optional(),
    mirror: flag('The surface reflects.').optional(),
    stop: flag('The aperture stop lies here.').optional(),
    semi_diameter_mm: positive('Half of the free diameter.').optional(),
    conic: number({ min: -1e6, max: 1e6 }, 'Conic constant: 0 sphere, -1 paraboloid.').optional(),
    aspheric_mm: mapping(asphericTerms).describe('Even aspheric terms of the sag, in mm.').optional(),
  }),
  (value, report) => {
    if (value.radius_mm === 0)
      report(['radius_mm'], { message: 'is 0', allowed: 'a number other than 0 (mm), or infinity' });
    if (value.mirror !== undefined && value.glass !== undefined) {
      report(['glass'], {
        message: 'stands beside mirror: behind a mirror is what was before it',
        inKey: true,
      });
    }
  },
).describe('A surface, or the stop alone.');

const APERTURES = ['f_number', 'entrance_pupil_mm', 'object_na'] as const;
const FIELDS = ['full_field_mm', 'half_field_deg', 'object_height_mm'] as const;

export const prescriptionFile = crossChecked(
  mapping({
    name: text('Name of the lens, for reports.').default('lens'),
    wavelength_nm: wavelengthNm
      .describe('The wavelength in which waves are counted. Unit: nm.')
      .default(587.5618),
    surfaces: list(surface, 'a list of surfaces, light from the left').describe('Light comes from the left.'),
    object_distance_mm: z
      .union([length('Distance of the object from the first surface.'), infinity], {
        error: 'a number other than 0 (mm), or infinity',
      })
      .describe('Distance of the object before the first surface. Unit: mm.')
      .default('infinity'),
    f_number: fNumber('Aperture as the working f-number.').optional(),
    entrance_pupil_mm: positive('Aperture as the diameter of the entrance pupil.').optional(),
    object_na: number({ above: 0, below: 1 }, 'Aperture as the numerical aperture at the object.').optional(),
    full_field_mm: number(
      { above: 0, max: 1000, unit: 'mm' },
      'Field as the image height at h = 1.',
    ).optional(),
    half_field_deg: number(
      { above: 0, below: 90, unit: 'deg' },
      'Field as the half angle at h = 1.',
    ).optional(),
    object_height_mm: positive('Field as the object height at h = 1.').optional(),
    scale_to_focal_length_mm: positive('The whole lens is scaled to this focal length.').optional(),
  }),
  (prescription, report) => {
    checkOneOf(prescription, APERTURES, report, { needed: true });
    checkOneOf(prescription, FIELDS, report, { needed: true });
    checkObject(prescription, report);
    if (Array.isArray(prescription.surfaces)) checkSurfaces(prescription.surfaces, report);
  },
).meta({
  title: 'Prescription',
  description: 'A lens as its surfaces, light from the left.',
  allOf: [APERTURES, FIELDS].map((keys) => ({ oneOf: keys.map((key) => ({ required: [key] })) })),
});

export type PrescriptionFile = z.output<typeof prescriptionFile>;

function checkObject(prescription: Unchecked, report: Report): void {
  const distance = prescription.object_distance_mm;
  if (distance === 0) {
    report(['object_distance_mm'], { message: 'is 0', allowed: 'a number other than 0 (mm), or infinity' });
  }
  if (distance !== 'infinity') return;
  for (const key of ['object_na', 'object_height_mm']) {
    if (prescription[key] === undefined) continue;
    const advice = 'State object_distance_mm, or another aperture or field.';
    report([key], { message: 'needs an object at a finite distance', inKey: true, advice });
  }
}

function checkSurfaces(surfaces: readonly unknown[], report: Report): void {
  const stops = surfaces.flatMap((one, index) => (isMapping(one) && one.stop !== undefined ? [index] : []));
  if (stops.length === 0 && surfaces.length > 0) {
    report(['surfaces'], {
      message: 'has no stop',
      found: `${surfaces.length} surfaces`,
      inKey: true,
      advice: 'Write stop: true on the surface that limits the aperture, or give it an entry of its own.',
    });
  }
  for (const index of stops.slice(1)) {
    report(['surfaces', index, 'stop'], {
      message: `is a second stop beside surfaces[${stops[0]}]`,
      allowed: 'one stop',
      inKey: true,
    });
  }
  for (const [index, one] of surfaces.slice(0, -1).entries()) {
    if (!isMapping(one) || one.thickness_mm !== undefined) continue;
    const allowed = 'a number (mm); only the last surface may leave it out';
    report(['surfaces', index, 'thickness_mm'], { message: 'is missing', allowed, missing: true });
  }
}
