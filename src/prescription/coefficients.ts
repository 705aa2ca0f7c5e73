/** The five terms and the colour tables, traced at each wavelength. */
import type { SpectralTable, Waves } from '../optics/rig.js';
import { SPECTRAL_LINES_NM } from './glass.js';
import type { LensAt, LensModel } from './lens-model.js';
import { atWavelength } from './lens-model.js';
import type { SeidelTable } from './seidel.js';
import { seidelTable, wavesFromSums } from './seidel.js';

/** The sums at the lens's own wavelength, with the chromatic sums between the lines F and C. */
export function referenceSums(model: LensModel): SeidelTable {
  const { F, C } = SPECTRAL_LINES_NM;
  return seidelTable(model.reference, atWavelength(model, F), atWavelength(model, C));
}

/** The third-order terms at a wavelength, as optical path in waves of the lens's own wavelength.
 *
 * Stop and object are the same at all wavelengths, so rho and h mean the same everywhere. W020 is what the
 * sensor's place adds where the prescription states it, the same at all wavelengths: axial colour is a table
 * of its own.
 *
 * An image point moves by -2 N lambda W311 with the N of the wavelength at hand, but who uses a lens knows
 * its own N only: so W311 is given the factor N(wavelength)/N.
 */
export function thirdOrderWaves(model: LensModel, lens: LensAt): Waves {
  const waves = wavesFromSums(seidelTable(lens, lens, lens).total, model.prescription.wavelengthNm);
  return {
    ...waves,
    W311: waves.W311 * apertureRatio(model, lens),
    W020: pathOfShift(model, model.defocusMm),
  };
}

/** N of the wavelength at hand over the lens's own. */
export function apertureRatio(model: LensModel, lens: LensAt): number {
  return lens.paraxial.workingFNumber / model.reference.paraxial.workingFNumber;
}

/** Where the paraxial focus lies against that of the lens's own wavelength, mm, + away from the lens. */
export function axialColourMm(model: LensModel, lens: LensAt): number {
  const { system, paraxial } = model.reference;
  return (lens.paraxial.imageDistanceMm - paraxial.imageDistanceMm) * system.index[system.count];
}

/** How far the chief ray of h = 1 lands on the sensor from where it does at the lens's own wavelength, mm, +
 * outward. Taken in the plane of the sensor, not at each wavelength's own focus: there a defocused spot has
 * its middle. */
export function lateralColourMm(model: LensModel, lens: LensAt): number {
  return lens.paraxial.imageHeightMm - model.reference.paraxial.imageHeightMm;
}

/** W020 of a sensor `shiftMm` behind the focus: delta / (8 N^2 lambda), N and lambda the lens's own. */
export function pathOfShift(model: LensModel, shiftMm: number): number {
  const { workingFNumber } = model.reference.paraxial;
  return (1e6 * shiftMm) / (8 * workingFNumber ** 2 * model.prescription.wavelengthNm);
}

export interface SpectralCoefficients {
  wavesByWavelength: readonly { nm: number; waves: Waves }[];
  axialUm: SpectralTable;
  lateralUm: SpectralTable;
}

/** Coefficients and colour at several wavelengths, each traced, in rising order without repeats.
 * @param wavesAt  how the coefficients are found; left out: the third-order sums
 */
export function spectralCoefficients(
  model: LensModel,
  wavelengthsNm: readonly number[],
  wavesAt: (model: LensModel, lens: LensAt) => Waves = thirdOrderWaves,
): SpectralCoefficients {
  const sorted = [...new Set([...wavelengthsNm, model.prescription.wavelengthNm])].sort((a, b) => a - b);
  const lenses = sorted.map((nm) => atWavelength(model, nm));
  const um = (mm: (model: LensModel, lens: LensAt) => number) =>
    lenses.map((lens) => [lens.system.nm, 1000 * mm(model, lens)] as const);
  return {
    wavesByWavelength: lenses.map((lens) => ({ nm: lens.system.nm, waves: wavesAt(model, lens) })),
    axialUm: um(axialColourMm),
    lateralUm: um(lateralColourMm),
  };
}
