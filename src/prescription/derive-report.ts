/** What a derivation has to tell, as plain data: no infinities, one entry a wavelength. */
import type { Lens, Waves } from '../optics/rig.js';
import type { Derivation, SurfaceSums } from './derive.js';
import type { Explained } from './explained.js';
import type { SeidelSums } from './seidel.js';

export interface DeriveReport {
  name: string;
  model: 'third-order';
  /** Where `waves` come from: the third-order sums, or a fit to the exact wavefront. */
  method: Derivation['method'];
  /** The wavelength in which waves are counted. */
  wavelengthNm: number;
  /** Null where the lens is afocal. */
  focalLengthMm: number | null;
  workingFNumber: number;
  /** Image height at h = 1. */
  fullFieldMm: number;
  paraxial: ParaxialReport;
  waves: Waves;
  /** What the sums alone give. */
  wavesOfSums: Waves;
  /** In total, at h = 1 and the full stop; C_I and C_II between the lines F and C. */
  seidelMm: SeidelSums;
  /** What each surface adds to the sums, mm. */
  surfaces: readonly SurfaceSums[];
  wavelengths: readonly WavelengthReport[];
  explained: readonly Explained[];
  warnings: readonly string[];
}

/** First-order properties, see `Paraxial`; null is infinite. */
export interface ParaxialReport {
  backFocusMm: number | null;
  frontFocusMm: number | null;
  frontPrincipalMm: number | null;
  rearPrincipalMm: number | null;
  entrancePupilMm: number | null;
  entrancePupilDiameterMm: number | null;
  exitPupilMm: number | null;
  exitPupilDiameterMm: number | null;
  stopDiameterMm: number;
  imageDistanceMm: number;
  magnification: number;
  objectHeightMm: number | null;
  halfFieldDeg: number;
  lagrangeMm: number;
  petzvalRadiusMm: number | null;
}

export interface WavelengthReport {
  nm: number;
  /** In waves of the lens's own wavelength. */
  waves: Waves;
  /** Paraxial focus against the lens's own wavelength, + away from the lens. */
  axialUm: number;
  /** Image height at h = 1 against the lens's own wavelength, + outward. */
  lateralUm: number;
}

export function deriveReport(derivation: Derivation): DeriveReport {
  const { lens, paraxial, method, wavesOfSums, seidelMm, surfaces, explained, warnings } = derivation;
  return {
    name: lens.name,
    model: 'third-order',
    method,
    wavelengthNm: lens.wavelengthNm,
    focalLengthMm: finite(paraxial.focalLengthMm),
    workingFNumber: paraxial.workingFNumber,
    fullFieldMm: lens.fullFieldMm,
    paraxial: {
      backFocusMm: finite(paraxial.backFocusMm),
      frontFocusMm: finite(paraxial.frontFocusMm),
      frontPrincipalMm: finite(paraxial.frontPrincipalMm),
      rearPrincipalMm: finite(paraxial.rearPrincipalMm),
      entrancePupilMm: finite(paraxial.entrancePupilMm),
      entrancePupilDiameterMm: finite(2 * paraxial.entrancePupilRadiusMm),
      exitPupilMm: finite(paraxial.exitPupilMm),
      exitPupilDiameterMm: finite(2 * paraxial.exitPupilRadiusMm),
      stopDiameterMm: 2 * paraxial.stopRadiusMm,
      imageDistanceMm: paraxial.imageDistanceMm,
      magnification: paraxial.magnification,
      objectHeightMm: finite(paraxial.objectHeightMm),
      halfFieldDeg: paraxial.halfFieldDeg,
      lagrangeMm: paraxial.lagrangeMm,
      petzvalRadiusMm: finite(paraxial.petzvalRadiusMm),
    },
    waves: lens.waves,
    wavesOfSums,
    seidelMm,
    surfaces,
    wavelengths: wavelengthReports(lens),
    explained,
    warnings,
  };
}

function wavelengthReports({ wavesByWavelength = [], axialUm, lateralUm }: Lens): WavelengthReport[] {
  return wavesByWavelength.map(({ nm, waves }, i) => ({
    nm,
    waves,
    axialUm: axialUm[i][1], // the three are traced together
    lateralUm: lateralUm[i][1],
  }));
}

function finite(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}
