/** Contrast by field zone: what the lens, and lens and camera together, do at a field point in a band. */
import { InputError } from '../errors.js';
import { bandShiftUm, distortionPercent } from './distortion.js';
import { defaultFields, type FieldPoint, type FieldSpec, fieldPoint } from './field-points.js';
import { bestFocusUm, mtf50LpPerMm } from './focus.js';
import { relativeIllumination } from './illumination.js';
import { colourWarnings, lensWarnings } from './limits.js';
import { bandDiffractionMtf, bandLines, bandMtf, pixelMtf } from './otf.js';
import type { WavefrontLine } from './psf.js';
import { type Band, pixelPitchMm, type Rig } from './rig.js';
import { refuseTooSteep } from './sampling.js';
import { strehlRatio } from './strehl.js';
import { wavefrontAt, wavefrontRmsWaves } from './wavefront.js';

/** A figure along the radius (tangential) and across it (sagittal). */
export interface BothDirections<T = number> {
  tangential: T;
  sagittal: T;
}

/** Contrast at one frequency, 0..1. */
export interface ZoneMtf {
  lpPerMm: number;
  /** Of a lens without aberrations at the same stop, in the same band. */
  diffractionLimit: number;
  lens: BothDirections;
  /** Lens and pixel together. */
  camera: BothDirections;
}

/** One field point in one band. */
export interface Zone {
  field: number;
  azimuthDeg: number;
  place: string | null;
  imageHeightMm: number;
  band: string;
  /** Height of the PSF's true peak over the one without aberration. */
  strehl: number;
  /** At the lens's own wavelength, piston and tilt taken out. */
  wavefrontRmsWaves: number;
  /** Of W311 at the lens's own wavelength: changes of scale are no distortion. */
  distortionPercent: number;
  /** Shift of the band's image against the lens's own wavelength, + outward. */
  lateralColourUm: number;
  /** Light that arrives, 1 on the axis. */
  relativeIllumination: number;
  mtf: ZoneMtf[];
  /** The first frequency at which lens and camera together keep half of the contrast. */
  mtf50LpPerMm: BothDirections;
  /** Sensor shift, from where the sensor stands, of the highest contrast at the middle frequency; null at
   * frequencies that the stop cuts off. */
  bestFocusUm: BothDirections<number | null>;
}

export interface ZonesReport {
  /** Name of the lens. */
  rig: string;
  fNumber: number;
  model: 'third-order';
  warnings: string[];
  /** Field points in the order asked for, and for each the bands of the camera. */
  zones: Zone[];
}

export interface ZonesOptions {
  /** Left out: axis, top, right and top_right of a symmetric rig, all nine places of another. */
  fields?: readonly FieldSpec[];
  /** Frequencies on the sensor; left out: 1/8, 1/4 and 1/2 of a cycle a pixel. Focus is judged at the middle
   * one in size, of an even number at the lower of the two middle ones. */
  lpPerMm?: readonly number[];
}

/** All figures of `zones` for a rig.
 *
 * With the camera's MTF goes the sinc of its pixels along their rows and columns, in every direction of the
 * field.
 * @throws {InputError} for a field point or frequency that is none, and for a wavefront too steep to be
 *   computed
 */
export function zonesOf(rig: Rig, options: ZonesOptions = {}): ZonesReport {
  const { camera, lens, mount } = rig;
  const frequencies = checkedFrequencies(options.lpPerMm ?? defaultFrequencies(rig));
  const points = checkedFields(options.fields ?? defaultFields(rig)).map((spec) => fieldPoint(rig, spec));
  refuseTooSteep(
    rig,
    points.map(({ xMm, yMm }) => [xMm, yMm] as const),
    0.5e-3 * shortestNm(camera.bands) * mount.fNumber,
  );
  return {
    rig: lens.name,
    fNumber: mount.fNumber,
    model: 'third-order',
    warnings: warningsFor(rig, points, frequencies),
    zones: points.flatMap((point) => camera.bands.map((band) => zoneAt(rig, point, band, frequencies))),
  };
}

function zoneAt(rig: Rig, point: FieldPoint, band: Band, frequencies: readonly number[]): Zone {
  const { lens, camera, mount } = rig;
  const { fNumber } = mount;
  const { xMm, yMm, field } = point;
  const lines = bandLines(rig, xMm, yMm, band);
  const both = directionsOf(lines);
  const focusLpPerMm = middleOf(frequencies);
  return {
    field,
    azimuthDeg: point.azimuthDeg,
    place: point.place,
    imageHeightMm: Math.hypot(xMm, yMm),
    band: band.name,
    strehl: strehlRatio(lines, fNumber),
    wavefrontRmsWaves: wavefrontRmsWaves(wavefrontAt(rig, xMm, yMm, lens.wavelengthNm)),
    distortionPercent: distortionPercent(lens, field),
    lateralColourUm: bandShiftUm(lens, field, band),
    relativeIllumination: relativeIllumination(lens)(Math.hypot(xMm, yMm)),
    mtf: frequencies.map((lpPerMm) => {
      const pixel = pixelMtf(camera, lpPerMm);
      const ofLens = both((direction) => bandMtf(lines, fNumber, lpPerMm, direction));
      return {
        lpPerMm,
        diffractionLimit: bandDiffractionMtf(band, fNumber, lpPerMm),
        lens: ofLens,
        camera: { tangential: ofLens.tangential * pixel, sagittal: ofLens.sagittal * pixel },
      };
    }),
    mtf50LpPerMm: both((direction) => mtf50LpPerMm(lines, fNumber, camera, direction)),
    bestFocusUm: both((direction) => bestFocusUm(lines, fNumber, focusLpPerMm, direction)),
  };
}

/** How a figure is taken in both directions: once where the wavefront is round. */
function directionsOf(
  lines: readonly WavefrontLine[],
): <T>(figure: (direction: 'tangential' | 'sagittal') => T) => BothDirections<T> {
  const isRound = lines.every(({ wavefront: { w31, w22, w11 } }) => w31 === 0 && w22 === 0 && w11 === 0);
  return (figure) => {
    const tangential = figure('tangential');
    return { tangential, sagittal: isRound ? tangential : figure('sagittal') };
  };
}

/** 1/8, 1/4 and 1/2 of a cycle a pixel, in line pairs per mm. */
function defaultFrequencies(rig: Rig): number[] {
  return [1 / 8, 1 / 4, 1 / 2].map((cycles) => cycles / pixelPitchMm(rig.camera));
}

/** The middle one in size; of an even number the lower of the two middle ones. */
function middleOf(frequencies: readonly number[]): number {
  return frequencies.toSorted((a, b) => a - b)[(frequencies.length - 1) >> 1];
}

function checkedFrequencies(frequencies: readonly number[]): readonly number[] {
  const faults = frequencies
    .filter((lpPerMm) => !(lpPerMm > 0 && lpPerMm < Number.POSITIVE_INFINITY))
    .map((lpPerMm) => ({
      key: 'frequency',
      message: 'no frequency in line pairs per mm',
      found: String(lpPerMm),
      allowed: 'finite numbers above 0',
    }));
  if (frequencies.length === 0)
    faults.push({
      key: 'frequency',
      message: 'the list of frequencies is empty',
      found: 'none',
      allowed: 'one number above 0 or more',
    });
  if (faults.length > 0) throw new InputError(faults);
  return frequencies;
}

function checkedFields(fields: readonly FieldSpec[]): readonly FieldSpec[] {
  if (fields.length > 0) return fields;
  throw new InputError({
    key: 'field point',
    message: 'the list of field points is empty',
    allowed: 'one point or more',
  });
}

function shortestNm(bands: readonly Band[]): number {
  return Math.min(...bands.flatMap(({ lines }) => lines.map(({ nm }) => nm)));
}

function warningsFor(rig: Rig, points: readonly FieldPoint[], frequencies: readonly number[]): string[] {
  const { camera, lens } = rig;
  const warnings = lensWarnings(rig);
  const past = points.filter(({ field }) => field > 1 + 1e-9);
  if (past.length > 0)
    warnings.push(
      `${past.map(({ place, field }) => place ?? `h = ${field}`).join(', ')}: the image height is past ` +
        `full_field_mm = ${lens.fullFieldMm}, so the lens is used past the field that its figures cover.`,
    );
  warnings.push(...colourWarnings(rig));
  const nyquist = 0.5 / pixelPitchMm(camera);
  const above = frequencies.filter((lpPerMm) => lpPerMm > nyquist * (1 + 1e-9));
  if (above.length > 0)
    warnings.push(
      `${above.map((lpPerMm) => `${lpPerMm} lp/mm`).join(', ')}: above half a cycle a pixel ` +
        `(${nyquist.toFixed(1)} lp/mm), where the camera shows aliases and not the detail itself.`,
    );
  return warnings;
}
