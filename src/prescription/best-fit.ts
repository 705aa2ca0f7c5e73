/** The five terms and defocus, fitted to the exact wavefront. */
import { InputError } from '../errors.js';
import type { Waves } from '../optics/rig.js';
import type { ExactField } from './exact-field.js';
import { FITTED_TERMS, meanSquare, removePistonAndTilt, termValues } from './exact-field.js';

/** Least-squares coefficients for the exact wavefronts of several field points.
 *
 * Each field point counts with what it leaves against what it has, 1 / (variance + (wavelength / 14)^2): so a
 * corner with ten waves does not settle the terms at the expense of a middle with a tenth of one. The 1/14
 * wave, Marechal's limit, is where a wavefront starts to be good enough not to matter.
 *
 * Piston and tilt of each field point are free, so that distortion beyond the third order does not leak into
 * coma. W311 then comes from those tilts: the best a h^3 for what the fit leaves of tilt, so that the image
 * point lies where the spot is. W111 stays 0.
 *
 * @param fields        at least two different ones that light reaches, of which one is not the axis
 * @param wavelengthNm  in whose waves the result is counted
 * @throws {InputError} for too few fields
 */
export function bestFit(fields: readonly ExactField[], wavelengthNm: number): Waves {
  const seen = fields.filter(({ wavefrontMm }) => wavefrontMm.length > 0);
  if (new Set(seen.map(({ h }) => h)).size < 2)
    throw new InputError({
      key: '--fields',
      message: 'a fit over the field needs at least two field points that light reaches',
      found: seen.map(({ h }) => h).join(', ') || 'none',
    });
  const terms = FITTED_TERMS.length;
  const perField = seen.map((field) => basisOf(field));
  const rows = seen.reduce((sum, { wavefrontMm }) => sum + wavefrontMm.length, 0);
  const columns = Array.from({ length: terms }, () => new Float64Array(rows));
  const right = new Float64Array(rows);
  const tiltsOfTerms: number[][] = [];
  const tilts: number[] = [];
  let row = 0;
  seen.forEach((field, at) => {
    const exact = field.wavefrontMm.slice();
    tilts.push(removePistonAndTilt(field, exact));
    const importance = 1 / (meanSquare(field, exact) + (wavelengthNm / 14e6) ** 2);
    tiltsOfTerms.push(perField[at].map((values) => removePistonAndTilt(field, values)));
    for (let i = 0; i < exact.length; i++, row++) {
      const root = Math.sqrt(importance * field.samples.weight[i]);
      right[row] = root * exact[i];
      for (let term = 0; term < terms; term++) columns[term][row] = root * perField[at][term][i];
    }
  });
  const solution = leastSquares(columns, right);
  let product = 0;
  let square = 0;
  seen.forEach(({ h }, at) => {
    const left = tilts[at] - tiltsOfTerms[at].reduce((sum, tilt, term) => sum + tilt * solution[term], 0);
    product += left * h ** 3;
    square += h ** 6;
  });
  const perMm = 1e6 / wavelengthNm;
  const fitted = Object.fromEntries(FITTED_TERMS.map((name, term) => [name, perMm * solution[term]]));
  return { ...(fitted as unknown as Waves), W311: (perMm * product) / square, W111: 0 };
}

function basisOf({ h, samples }: ExactField): Float64Array[] {
  const columns = FITTED_TERMS.map(() => new Float64Array(samples.m.length));
  const values = new Float64Array(FITTED_TERMS.length);
  for (let i = 0; i < samples.m.length; i++) {
    termValues(h, samples.m[i], samples.s[i], values);
    for (let term = 0; term < values.length; term++) columns[term][i] = values[term];
  }
  return columns;
}

/** Solve columns * x = right by orthogonal columns (modified Gram-Schmidt, the right side carried along).
 * Source: A. Bjorck, "Solving linear least squares problems by Gram-Schmidt orthogonalization", BIT 7 (1967)
 * 1 (cited from memory).
 */
function leastSquares(columns: Float64Array[], right: Float64Array): Float64Array {
  const count = columns.length;
  const triangle = Array.from({ length: count }, () => new Float64Array(count));
  const rotated = new Float64Array(count);
  const q = columns.map((column) => column.slice());
  const rest = right.slice();
  for (let j = 0; j < count; j++) {
    const norm = Math.sqrt(dot(q[j], q[j]));
    triangle[j][j] = norm;
    for (let i = 0; i < rest.length; i++) q[j][i] /= norm;
    for (let k = j + 1; k < count; k++) {
      triangle[j][k] = dot(q[j], q[k]);
      subtract(q[k], q[j], triangle[j][k]);
    }
    rotated[j] = dot(q[j], rest);
    subtract(rest, q[j], rotated[j]);
  }
  const x = new Float64Array(count);
  for (let j = count - 1; j >= 0; j--) {
    let sum = rotated[j];
    for (let k = j + 1; k < count; k++) sum -= triangle[j][k] * x[k];
    x[j] = sum / triangle[j][j];
  }
  return x;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}

function subtract(from: Float64Array, what: Float64Array, times: number): void {
  for (let i = 0; i < from.length; i++) from[i] -= times * what[i];
}
