/** The lens of a rig: stated by its coefficients, or given by its surfaces. */
import { z } from 'zod';
import { crossChecked, isMapping, numberIn, type Report, type Unchecked } from './cross-check.js';
import { prescriptionFile } from './prescription.js';
import { choice, fileName, fNumber, list, mapping, number, pair, text, wavelengthNm } from './values.js';

const coefficient = (what: string) =>
  number({}, `${what} In waves at h = 1 and rho = 1. Left out: 0.`).default(0);

const distortionPercent = number(
  { above: -100, max: 100, unit: '%' },
  'Distortion at h = 1, in place of W311. Negative: barrel.',
);

const terms = {
  W040: coefficient('Spherical aberration. Positive: the marginal focus lies nearer the lens.'),
  W131: coefficient('Coma. Positive: the flare points toward the axis.'),
  W222: coefficient('Astigmatism.'),
  W220: coefficient('Field curvature. Positive: the field curves toward the lens.'),
  W020: coefficient('Defocus.'),
  W111: coefficient('Scale error.'),
};

const waves = mapping({
  ...terms,
  W311: number({}, 'Distortion. Positive: barrel. In waves at h = 1 and rho = 1. Left out: 0.').optional(),
  distortion_percent: distortionPercent.optional(),
}).describe(
  'The coefficients of the wavefront, in waves of wavelength_nm at f_number. An empty mapping {} is a perfect lens.',
);

const NM_KEY = /^\d+(\.\d+)?$/;

const nmKey = z.string().regex(NM_KEY, { error: 'a wavelength in nm, from 100 to 20000' });

const wavesByWavelength = z
  .record(nmKey, mapping({ ...terms, W311: coefficient('Distortion. Positive: barrel.') }), {
    error: 'a mapping from wavelengths in nm to coefficients',
  })
  .describe(
    'Coefficients that differ by wavelength (a traced lens): by wavelength in nm, in waves of wavelength_nm. What counts is how they ' +
      'differ from the entry at wavelength_nm: a change of waves moves all wavelengths alike.',
  );

const colourTable = (what: string) =>
  z
    .record(nmKey, number({ min: -1e5, max: 1e5, unit: 'um' }, 'Shift at this wavelength.'), {
      error: 'a mapping from wavelengths in nm to shifts in um',
    })
    .describe(`${what}, by wavelength in nm, against wavelength_nm. Unit: um.`);

const colour = mapping({
  axial_um: colourTable('Shift of the paraxial focus, + away from the lens').optional(),
  lateral_um: colourTable('Change of the image height at h = 1, + outward').optional(),
}).describe(
  'Axial and lateral colour. Left out: none. A lens with a prescription needs none: its colour is traced.',
);

/** Above 1 because pupil aberration can make a wide-angle lens a little brighter off the axis; a table in percent is caught. */
const MAX_RELATIVE_ILLUMINATION = 1.5;

const relativeIllumination = z
  .union(
    [
      choice(['cos4', 'none'], 'A law.'),
      list(
        pair(
          number({ min: 0, max: 10 }, 'Field h.'),
          number({ min: 0, max: MAX_RELATIVE_ILLUMINATION }, 'Illumination against the axis.'),
          'a pair [h, value]',
        ),
        'a list of pairs [h, value]',
      ),
    ],
    { error: 'cos4, none, or a list of pairs [h, value]' },
  )
  .describe(
    'Fall-off of light with the field: cos4 (needs focal_length_mm), none, or [[h, value], ...] with rising h. ' +
      'Left out beside a prescription: traced through its surfaces.',
  )
  .meta({ default: 'cos4' });

const fields = mapping({
  name: text('Name of the lens, for reports.').optional(),
  focal_length_mm: number({ above: 0, max: 1e5, unit: 'mm' }, 'Focal length.').optional(),
  f_number: fNumber('The aperture for which the coefficients hold.').optional(),
  full_field_mm: number({ above: 0, max: 1000, unit: 'mm' }, 'Image height at h = 1.').optional(),
  wavelength_nm: wavelengthNm.describe('The wavelength in which waves are counted. Unit: nm.').optional(),
  waves: waves.optional(),
  distortion_percent: distortionPercent.optional(),
  prescription: z
    .union([fileName('A prescription file.'), prescriptionFile], { error: 'the name of a prescription file' })
    .describe('The surfaces of the lens, in place of waves: a prescription file, relative to this file.')
    .optional(),
  colour: colour.optional(),
  waves_by_wavelength: wavesByWavelength.optional(),
  relative_illumination: relativeIllumination.optional(),
});

/** Keys that a lens without a prescription must have. */
const STATED_KEYS = ['f_number', 'full_field_mm', 'wavelength_nm', 'waves'] as const;
/** Keys for which a prescription leaves no room. */
const TRACED_KEYS = ['waves', 'distortion_percent', 'waves_by_wavelength', 'colour'] as const;

export const lensPart = crossChecked(fields, (lens, report) => {
  if (lens.prescription === undefined) checkStated(lens, report);
  else checkPrescribed(lens, report);
  checkDistortion(lens, report);
  checkColour(lens, report);
  checkWavelengths(lens.waves_by_wavelength, ['waves_by_wavelength'], report);
  checkIlluminationTable(lens.relative_illumination, report);
}).meta({
  title: 'Lens',
  description: 'A lens as its coefficients of the third-order wavefront, or as its surfaces.',
  if: { required: ['prescription'] },
  // biome-ignore lint/suspicious/noThenProperty: a keyword of JSON Schema
  then: { not: { anyOf: TRACED_KEYS.map((key) => ({ required: [key] })) } },
  else: { required: STATED_KEYS },
});

export type LensFile = z.output<typeof lensPart>;
/** A lens stated by its coefficients. */
export type StatedLens = LensFile & Required<Pick<LensFile, (typeof STATED_KEYS)[number]>>;
/** A lens given by its surfaces. */
export type PrescribedLens = LensFile & Required<Pick<LensFile, 'prescription'>>;

export function isPrescribed(lens: LensFile): lens is PrescribedLens {
  return lens.prescription !== undefined;
}

function checkStated(lens: Unchecked, report: Report): void {
  for (const key of STATED_KEYS) {
    if (lens[key] !== undefined) continue;
    const { description: allowed } = fields.shape[key].unwrap();
    const advice =
      key === 'waves'
        ? 'Write waves: {} for a perfect lens, or prescription: FILE for one given by its surfaces.'
        : undefined;
    report([key], {
      message: 'is missing',
      allowed: key === 'waves' ? undefined : allowed,
      advice,
      missing: true,
    });
  }
  const law = lens.relative_illumination ?? 'cos4';
  if (law === 'cos4' && lens.focal_length_mm === undefined) {
    report(['focal_length_mm'], {
      message: 'is missing, and the fall-off of light by the cos4 law needs it',
      advice: 'State it, or write relative_illumination: none or a table [[h, value], ...].',
      missing: true,
    });
  }
}

function checkPrescribed(lens: Unchecked, report: Report): void {
  for (const key of TRACED_KEYS) {
    if (lens[key] === undefined) continue;
    const message = 'stands beside prescription, from which it is computed';
    report([key], { message, advice: 'Delete one of the two.', inKey: true });
  }
}

function checkDistortion(lens: Unchecked, report: Report): void {
  const inWaves = isMapping(lens.waves) ? lens.waves : {};
  const places = [
    ['waves', 'W311', inWaves.W311],
    ['waves', 'distortion_percent', inWaves.distortion_percent],
    ['distortion_percent', '', lens.distortion_percent],
  ] as const;
  const there = places
    .filter(([, , value]) => value !== undefined)
    .map(([a, b]) => (b === '' ? [a] : [a, b]));
  for (const path of there.slice(1)) {
    report(path, {
      message: `stands beside ${there[0].join('.')}, which says the same thing`,
      advice: 'Delete one of the two.',
      inKey: true,
    });
  }
}

function checkColour(lens: Unchecked, report: Report): void {
  for (const [name, table] of Object.entries(isMapping(lens.colour) ? lens.colour : {})) {
    checkWavelengths(table, ['colour', name], report);
    for (const [key, value] of Object.entries(isMapping(table) ? table : {})) {
      if (Number(key) !== numberIn(lens.wavelength_nm) || value === 0) continue;
      const message = 'is the shift of wavelength_nm against itself';
      report(['colour', name, key], { message, allowed: '0, or leave it out' });
    }
  }
}

/** Keys that are wavelengths: in range, and none twice in two spellings (450 and 450.0). */
function checkWavelengths(table: unknown, path: readonly PropertyKey[], report: Report): void {
  const seen = new Set<number>();
  for (const key of Object.keys(isMapping(table) ? (table as Unchecked) : {})) {
    if (!NM_KEY.test(key)) continue; // the schema says it
    const nm = Number(key);
    if (nm < 100 || nm > 20000) {
      const message = 'is no wavelength that lenses are made for';
      report([...path, key], { message, found: key, allowed: 'from 100 to 20000 (nm)', inKey: true });
    }
    if (seen.has(nm)) {
      report([...path, key], {
        message: 'is a wavelength that stands twice',
        advice: 'Delete one of the two.',
        inKey: true,
      });
    }
    seen.add(nm);
  }
}

function checkIlluminationTable(table: unknown, report: Report): void {
  if (!Array.isArray(table)) return;
  for (let index = 1; index < table.length; index++) {
    const before = numberIn(table[index - 1]?.[0]);
    const h = numberIn(table[index]?.[0]);
    if (before === undefined || h === undefined || h > before) continue;
    report(['relative_illumination', index, 0], {
      message: 'does not rise',
      allowed: `a field h above the one before, ${before}`,
    });
  }
}
