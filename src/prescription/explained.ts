/** How far the five terms carry: the exact wavefront against them, field point by field point. */
import type { Lens, Waves } from '../optics/rig.js';
import type { ExactField } from './exact-field.js';
import { meanSquare, modelWavefront, removePistonAndTilt } from './exact-field.js';

export interface Explained {
  field: number;
  /** Share of the exact wavefront's variance over the open pupil that the terms explain: 1 all of it, below 0
   * worse than no terms at all. Piston and tilt are taken out of both. Null where no light gets through. */
  share: number | null;
  /** RMS that the terms leave, in waves. */
  rmsLeftWaves: number | null;
  /** RMS of the exact wavefront, in waves. */
  rmsWaves: number | null;
  /** Of the real chief ray, and of the terms; percent of the ideal image height. 0 on the axis. */
  distortionPercent: number;
  distortionOfTermsPercent: number;
  /** Open share of the stop. */
  openShare: number;
  /** Illuminance on the sensor against the axis, under an even, diffuse object. */
  relativeIllumination: number;
}

/** Compare the exact wavefronts with the terms.
 * @param fields  at the lens's own wavelength
 * @param waves   of the lens's own wavelength
 */
export function explain(
  fields: readonly ExactField[],
  onAxis: ExactField,
  lens: Pick<Lens, 'fNumber' | 'fullFieldMm' | 'wavelengthNm'>,
  waves: Waves,
): Explained[] {
  const mmToWaves = 1e6 / lens.wavelengthNm;
  return fields.map((field) => {
    const { h, wavefrontMm, chiefHeightMm, idealHeightMm } = field;
    const exact = wavefrontMm.map((value) => value * mmToWaves);
    const model = modelWavefront(field, waves);
    const left = exact.map((value, i) => value - model[i]);
    removePistonAndTilt(field, exact);
    removePistonAndTilt(field, left);
    const variance = meanSquare(field, exact);
    const varianceLeft = meanSquare(field, left);
    const dark = wavefrontMm.length === 0;
    const shift = -2 * lens.fNumber * lens.wavelengthNm * 1e-6 * waves.W311 * h * h;
    return {
      field: h,
      share: dark ? null : variance === 0 ? 1 : 1 - varianceLeft / variance,
      rmsLeftWaves: dark ? null : Math.sqrt(varianceLeft),
      rmsWaves: dark ? null : Math.sqrt(variance),
      distortionPercent: h === 0 ? 0 : (100 * (chiefHeightMm - idealHeightMm)) / idealHeightMm,
      distortionOfTermsPercent: (100 * shift) / lens.fullFieldMm,
      openShare: field.openShare,
      relativeIllumination: field.illuminance / onAxis.illuminance,
    };
  });
}

/** RMS of Marechal's criterion, 1/14 wave: what is left below it costs less than a fifth of the Strehl ratio.
 * Source: Born and Wolf, Principles of Optics, 9.3 (cited from memory). */
const MARECHAL_WAVES = 1 / 14;

/** Where the third-order picture misleads, in words: one warning a matter, with all field points that it
 * concerns. */
export function explainedWarnings(explained: readonly Explained[], fitted: boolean): string[] {
  return [
    ...shareWarnings(explained, fitted),
    ...distortionWarnings(explained),
    ...vignettingWarnings(explained),
  ];
}

const percent = (share: number) => `${(100 * share).toFixed(0)} %`;

function shareWarnings(explained: readonly Explained[], fitted: boolean): string[] {
  const poor = explained.flatMap(({ field, share, rmsLeftWaves, rmsWaves }) => {
    const isDark = share === null || rmsLeftWaves === null || rmsWaves === null;
    return isDark || rmsLeftWaves <= MARECHAL_WAVES || share >= 0.9
      ? []
      : [{ field, share, rms: rmsWaves.toFixed(2), left: rmsLeftWaves.toFixed(2) }];
  });
  const cure = fitted
    ? 'Higher orders matter there: lower the aperture or the field, or take the figures as a rough guide.'
    : 'Higher orders matter there: fit the terms to the exact wavefront instead (derive --best-fit), or lower the aperture or the field.';
  const partly = poor
    .filter(({ share }) => share > 0)
    .map(({ field, share, rms, left }, i) =>
      i === 0
        ? `At field ${field} the five terms explain ${percent(share)} of the exact wavefront's variance (${rms} waves RMS in truth, ${left} of them unexplained)`
        : `at field ${field} ${percent(share)} (${rms}, ${left})`,
    );
  const wrong = poor.filter(({ share }) => share <= 0);
  const warnings = partly.length === 0 ? [] : [`${partly.join(', ')}. ${cure}`];
  if (wrong.length > 0) {
    const list = (of: 'field' | 'rms' | 'left') => wrong.map((at) => at[of]).join(', ');
    warnings.push(
      `At field ${list('field')} the five terms describe the exact wavefront worse than no aberration at all would ` +
        `(${list('rms')} waves RMS in truth, ${list('left')} left over). ${cure}`,
    );
  }
  return warnings;
}

function distortionWarnings(explained: readonly Explained[]): string[] {
  const worst = explained.reduce(
    (most, { distortionPercent, distortionOfTermsPercent, field }) => {
      const off = Math.abs(distortionPercent - distortionOfTermsPercent);
      return off > most.off ? { off, field, distortionPercent, distortionOfTermsPercent } : most;
    },
    { off: 0, field: 0, distortionPercent: 0, distortionOfTermsPercent: 0 },
  );
  if (!(worst.off > 0.1)) return [];
  return [
    `At field ${worst.field} the real chief ray shows ${worst.distortionPercent.toFixed(2)} % distortion, the terms ${worst.distortionOfTermsPercent.toFixed(2)} %: ` +
      'places in the picture are off by the difference.',
  ];
}

function vignettingWarnings(explained: readonly Explained[]): string[] {
  const warnings: string[] = [];
  const cut = explained.filter(({ openShare }) => openShare > 0 && openShare < 0.9);
  if (cut.length > 0)
    warnings.push(
      `At field ${cut.map(({ field }) => field).join(', ')} the surfaces cut ${cut.map(({ openShare }) => percent(1 - openShare)).join(', ')} of the beam: ` +
        'the sharpness there is computed as if the stop were open.',
    );
  const dark = explained.filter(({ openShare }) => openShare === 0);
  if (dark.length > 0)
    warnings.push(
      `At field ${dark.map(({ field }) => field).join(', ')} no light reaches the sensor: the semi-diameters of the surfaces cut all of it.`,
    );
  return warnings;
}
