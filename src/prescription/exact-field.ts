/** The exact wavefront of one field point, sampled over what of the stop is open. */
import type { Waves } from '../optics/rig.js';
import type { PupilSamples } from './clear-pupil.js';
import { clearPupil } from './clear-pupil.js';
import type { LensAt } from './lens-model.js';
import { FieldTracer } from './opd.js';

export interface ExactField {
  h: number;
  samples: PupilSamples;
  /** W at the samples, mm, as `FieldTracer.wavefrontMm` has it; empty where no light gets through. */
  wavefrontMm: Float64Array;
  /** Where the chief ray lands, mm, + outward, and where it would land ideally. */
  chiefHeightMm: number;
  idealHeightMm: number;
  /** Share of the stop that is open, 0..1. */
  openShare: number;
  /** Proportional to the illuminance at the image point under an even, diffuse object; 0 where no light gets
   * through. */
  illuminance: number;
}

/** Trace a field point.
 * @throws {InputError} where a ray that nothing cuts misses a surface or is totally reflected
 */
export function exactField(lens: LensAt, h: number): ExactField {
  const tracer = new FieldTracer(lens, h);
  const pupil = clearPupil(tracer);
  const empty = new Float64Array(0);
  const samples = pupil?.samples ?? { m: empty, s: empty, weight: empty };
  return {
    h,
    samples,
    wavefrontMm: wavefrontAtSamples(tracer, samples),
    chiefHeightMm: tracer.chiefHeightMm,
    idealHeightMm: h * lens.paraxial.imageHeightMm,
    openShare: pupil?.share ?? 0,
    illuminance: (pupil?.light ?? 0) / arealStretch(lens, tracer),
  };
}

/** The same field point at another wavelength, over the same part of the stop: only its wavefront and chief
 * ray are traced anew. */
export function recoloured(field: ExactField, lens: LensAt): ExactField {
  const tracer = new FieldTracer(lens, field.h);
  return {
    ...field,
    wavefrontMm: wavefrontAtSamples(tracer, field.samples),
    chiefHeightMm: tracer.chiefHeightMm,
    idealHeightMm: field.h * lens.paraxial.imageHeightMm,
  };
}

function wavefrontAtSamples(tracer: FieldTracer, { m, s }: PupilSamples): Float64Array {
  return m.map((along, i) => tracer.wavefrontMm(along, s[i]));
}

/** How much larger an element of area is imaged than without distortion: (r'/r) (dr'/dr). */
function arealStretch(lens: LensAt, tracer: FieldTracer): number {
  const { imageHeightMm } = lens.paraxial;
  if (tracer.h === 0) return 1;
  // one-sided, to stay inside the field: with a share D of distortion the slope 1 + 3 D is off by 3 D times 1e-3
  const step = 1e-3 * tracer.h;
  const inside = new FieldTracer(lens, tracer.h - step).chiefHeightMm;
  const radial = (tracer.chiefHeightMm - inside) / (step * imageHeightMm);
  return (tracer.chiefHeightMm / (tracer.h * imageHeightMm)) * radial;
}

/** What each of five terms and defocus adds to W at a place of the pupil and field, for a coefficient of 1.
 * Order of `FITTED_TERMS`. */
export function termValues(h: number, m: number, s: number, out: Float64Array): void {
  const rho2 = m * m + s * s;
  out[0] = rho2 * rho2;
  out[1] = h * rho2 * m;
  out[2] = h * h * m * m;
  out[3] = h * h * rho2;
  out[4] = rho2;
}

/** The terms that shape the spot: W311 and W111 only move it. */
export const FITTED_TERMS = ['W040', 'W131', 'W222', 'W220', 'W020'] as const;

/** W of the coefficients at the samples, in the unit of the coefficients; image shifts (W311, W111) left out.
 */
export function modelWavefront({ h, samples }: ExactField, waves: Waves): Float64Array {
  const values = new Float64Array(FITTED_TERMS.length);
  return samples.m.map((m, i) => {
    termValues(h, m, samples.s[i], values);
    return FITTED_TERMS.reduce((sum, name, term) => sum + waves[name] * values[term], 0);
  });
}

/** Take piston and tilt of best fit out of values at the samples, in place. @returns the tilt (slope along m)
 * that was taken out */
export function removePistonAndTilt({ samples }: ExactField, values: Float64Array): number {
  const { m, weight } = samples;
  let meanM = 0;
  let mean = 0;
  for (let i = 0; i < values.length; i++) {
    meanM += weight[i] * m[i];
    mean += weight[i] * values[i];
  }
  let product = 0;
  let square = 0;
  for (let i = 0; i < values.length; i++) {
    product += weight[i] * (m[i] - meanM) * (values[i] - mean);
    square += weight[i] * (m[i] - meanM) ** 2;
  }
  const tilt = square === 0 ? 0 : product / square;
  for (let i = 0; i < values.length; i++) values[i] -= mean + tilt * (m[i] - meanM);
  return tilt;
}

/** Mean square over the open pupil. */
export function meanSquare({ samples }: ExactField, values: Float64Array): number {
  return values.reduce((sum, value, i) => sum + samples.weight[i] * value * value, 0);
}
