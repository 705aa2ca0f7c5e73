/** From surfaces to a lens that the rest of the program takes as it is, with an account of how far it can be
 * trusted. */
import { InputError } from '../errors.js';
import type { Lens, RelativeIllumination, Waves } from '../optics/rig.js';
import { bestFit } from './best-fit.js';
import {
  apertureRatio,
  axialColourMm,
  pathOfShift,
  referenceSums,
  spectralCoefficients,
  thirdOrderWaves,
} from './coefficients.js';
import type { ExactField } from './exact-field.js';
import { exactField, recoloured } from './exact-field.js';
import type { Explained } from './explained.js';
import { explain, explainedWarnings } from './explained.js';
import { ABBE_RANGE_NM } from './glass.js';
import type { LensAt, LensModel } from './lens-model.js';
import { lensModel } from './lens-model.js';
import type { Paraxial } from './paraxial.js';
import type { Prescription } from './prescription.js';
import type { SeidelSums } from './seidel.js';

/** Field points of the exact check where none are named: closer together where the beam is oblique. */
export const EXACT_FIELDS: readonly number[] = [0, 0.3, 0.5, 0.7, 0.8, 0.9, 1];

export interface DeriveOptions {
  /** At which the coefficients are traced, beside the lens's own. */
  wavelengthsNm?: readonly number[];
  /** h of the exact check, of the fit and of the table of relative illumination (0 and 1 are added to that).
   */
  fields?: readonly number[];
  /** Fit the terms to the exact wavefront instead of summing them up. */
  bestFit?: boolean;
}

/** What one surface adds to the sums. */
export interface SurfaceSums extends SeidelSums {
  /** Counted from 1. */
  surface: number;
  /** The stop lies here. */
  stop?: true;
}

export interface Derivation {
  /** For a rig: with the coefficients of each wavelength and, as relative illumination, what exact rays say.
   */
  lens: Lens;
  paraxial: Paraxial;
  /** The terms in `lens.waves`: from the sums, or from the fit. */
  method: 'sums' | 'best fit';
  /** The terms that the sums give, whatever the method. */
  wavesOfSums: Waves;
  seidelMm: SeidelSums;
  surfaces: readonly SurfaceSums[];
  explained: readonly Explained[];
  warnings: readonly string[];
}

/** Derive a lens from its surfaces.
 * @throws {InputError} for a faulty prescription, for surfaces that form no image, for exact rays that miss a
 *   surface or are totally reflected, and for fields or wavelengths that cannot be
 */
export function deriveLens(prescription: Prescription, options: DeriveOptions = {}): Derivation {
  checkOptions(options);
  const model = lensModel(prescription);
  const hs = [...(options.fields ?? EXACT_FIELDS)].sort((a, b) => a - b);
  const all = [...new Set([0, ...hs, 1])].sort((a, b) => a - b).map((h) => exactField(model.reference, h));
  const fields = hs.map((h) => all.find((field) => field.h === h) as ExactField);
  const fitted = options.bestFit ?? false;
  const lens: Lens = {
    ...lensOf(model, options.wavelengthsNm ?? [], fitted ? fitAt(fields) : thirdOrderWaves),
    relativeIllumination: illuminationTable(all),
  };
  const { surfaces, total } = referenceSums(model);
  const explained = explain(fields, all[0], lens, lens.waves);
  return {
    lens,
    paraxial: model.reference.paraxial,
    method: fitted ? 'best fit' : 'sums',
    wavesOfSums: thirdOrderWaves(model, model.reference),
    seidelMm: total,
    surfaces: surfaces.map((sums, i) => ({
      surface: i + 1,
      ...(i === model.reference.system.stop && { stop: true as const }),
      ...sums,
    })),
    explained,
    warnings: [...modelWarnings(model, options.wavelengthsNm ?? []), ...explainedWarnings(explained, fitted)],
  };
}

export interface ToLensOptions {
  /** `traced` (default): what exact rays say at `fNumber`; `cos4`: the law, no exact ray is traced. */
  relativeIllumination?: 'traced' | 'cos4';
  /** The stop in use, for vignetting and for what the lens is warned of: a smaller stop is cut less. Left out,
   * or wider than the lens's own: the lens's own. */
  fNumber?: number;
}

/** The lens of a rig that names a prescription: third-order terms at the wavelengths of the rig, and warnings
 * of what of them misleads at the stop in use.
 * @throws {InputError} as `deriveLens` does; exact rays are traced only for the illumination and the warnings
 *   that rest on them
 */
export function toLens(
  prescription: Prescription,
  wavelengthsNm: readonly number[],
  options: ToLensOptions = {},
): Lens {
  const model = lensModel(prescription);
  const lens = lensOf(model, wavelengthsNm, thirdOrderWaves);
  const warnings = modelWarnings(model, wavelengthsNm);
  if (options.relativeIllumination === 'cos4') return { ...lens, warnings };
  const fNumber = Math.max(options.fNumber ?? lens.fNumber, lens.fNumber);
  const stopped = lensModel({ ...model.prescription, aperture: { fNumber } });
  const fields = EXACT_FIELDS.map((h) => exactField(stopped.reference, h));
  const terms = thirdOrderWaves(stopped, stopped.reference);
  const explained = explain(fields, fields[0], { ...lens, fNumber }, terms);
  return {
    ...lens,
    relativeIllumination: illuminationTable(fields),
    warnings: [...warnings, ...explainedWarnings(explained, false)],
  };
}

/** A relay may be afocal, or come out with a focal length of kilometres and either sign by rounding: no figure
 * to go by. */
const LONGEST_FOCAL_MM = 1e5;

function lensOf(
  model: LensModel,
  wavelengthsNm: readonly number[],
  wavesAt: (model: LensModel, lens: LensAt) => Waves,
): Lens {
  const { name, wavelengthNm } = model.prescription;
  const { focalLengthMm, workingFNumber, imageHeightMm } = model.reference.paraxial;
  const spectral = spectralCoefficients(model, wavelengthsNm, wavesAt);
  const own = spectral.wavesByWavelength.find(({ nm }) => nm === wavelengthNm) as { waves: Waves };
  return {
    name,
    ...(focalLengthMm > 0 && focalLengthMm < LONGEST_FOCAL_MM && { focalLengthMm }),
    fNumber: workingFNumber,
    fullFieldMm: imageHeightMm,
    wavelengthNm,
    waves: own.waves,
    ...spectral,
    relativeIllumination: 'cos4',
  };
}

/** The fit at each wavelength, from the field points traced at the lens's own. What it finds of axial colour
 * is given back: that has its table. */
function fitAt(known: readonly ExactField[]): (model: LensModel, lens: LensAt) => Waves {
  return (model, lens) => {
    const fields = lens === model.reference ? known : known.map((field) => recoloured(field, lens));
    const waves = bestFit(fields, model.prescription.wavelengthNm);
    return {
      ...waves,
      W311: waves.W311 * apertureRatio(model, lens),
      W020: waves.W020 + pathOfShift(model, axialColourMm(model, lens)),
    };
  };
}

function checkOptions({ fields, wavelengthsNm }: DeriveOptions): void {
  const refuse = (key: string, message: string, found: unknown, allowed: string) => {
    throw new InputError({ key, message, found: String(found), allowed });
  };
  if (fields?.length === 0) refuse('--fields', 'no field point is named', '[]', 'at least one');
  for (const h of fields ?? [])
    if (!(Number.isFinite(h) && h >= 0))
      refuse('--fields', 'this field is not possible', h, '0 (axis) to 1 (full field), or a little more');
  for (const nm of wavelengthsNm ?? [])
    if (!(Number.isFinite(nm) && nm > 0))
      refuse('--wavelengths', 'this wavelength is not possible', nm, 'a number above 0, in nm');
}

/** @param fields the axis first: there the chief ray always gets through, so there is light */
function illuminationTable(fields: readonly ExactField[]): RelativeIllumination {
  const axis = fields[0].illuminance;
  return fields.map(({ h, illuminance }) => [h, illuminance / axis] as const);
}

/** What of the prescription itself the user should look at again. */
function modelWarnings(model: LensModel, wavelengthsNm: readonly number[]): string[] {
  const warnings: string[] = [];
  const { surfaces, wavelengthNm } = model.prescription;
  const { system, paraxial } = model.reference;
  const asked = [...new Set([...wavelengthsNm, wavelengthNm])];
  const constant = surfaces.flatMap(({ glass }, i) => (glass && 'n' in glass ? [i + 1] : []));
  if (constant.length > 0 && asked.length > 1)
    warnings.push(
      `Surface ${constant.join(', ')}: glass given as n alone has no dispersion, so its colour errors are left out.`,
    );
  const [low, high] = ABBE_RANGE_NM;
  const outside = asked.filter((nm) => nm < low || nm > high);
  if (outside.length > 0 && surfaces.some(({ glass }) => glass && ('nd' in glass || 'code' in glass)))
    warnings.push(
      `At ${outside.join(', ')} nm the index from n_d and V_d is an extrapolation (good from ${low} to ${high} nm): give Sellmeier coefficients.`,
    );
  for (let i = 0; i < system.count; i++)
    if (system.thickness[i] * system.index[i + 1] < 0 && system.index[i + 1] < 0)
      warnings.push(
        `Surface ${i + 1}: light runs to the left behind a mirror, but the thickness points to the right.`,
      );
  if (system.semiDiameter[system.stop] < paraxial.stopRadiusMm * (1 - 1e-9))
    warnings.push(
      `Surface ${system.stop + 1}: the stop's semi-diameter is smaller than the f-number asks for (${paraxial.stopRadiusMm.toFixed(3)} mm), so the beam is cut there.`,
    );
  return warnings;
}
