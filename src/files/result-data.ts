/** Results of jobs in the names of the files: camelCase in code, snake_case with units outside, and a rig as a rig file holds it. */
import type { Lens, Rig, SpectralTable, Waves } from '../optics/rig.js';

/** A result with every key renamed, ready to be written as JSON or YAML.
 *
 * A key that begins with a capital or a digit is data (`W131`, a wavelength) and stays. A `Rig` becomes what its rig file would say
 * with every default filled in, so that a record can be cut back into a rig file. Keys without a value are left out.
 */
export function resultData(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(resultData);
  if (value === 0) return 0; // YAML would tell -0 from 0
  if (typeof value !== 'object' || value === null) return value;
  if (isRig(value)) return rigData(value);
  return Object.fromEntries(
    Object.entries(value)
      .filter(([, item]) => item !== undefined)
      .map(([key, item]) => [snakeCase(key), resultData(item)]),
  );
}

/** `mtf50LpPerMm` -> `mtf50_lp_per_mm`. */
export function snakeCase(key: string): string {
  return /^[a-z]/.test(key) ? key.replace(/[A-Z]/g, (capital) => `_${capital.toLowerCase()}`) : key;
}

/** A whole rig of the optics; not what `rigData` made of one, whose keys have underscores. */
function isRig(value: object): value is Rig {
  return 'lens' in value && 'camera' in value && 'mount' in value && 'axisPx' in Object(value.mount);
}

/** A rig as its file holds it. */
export function rigData({ lens, camera, mount }: Rig): object {
  const { objectScale, ...mounting } = mount;
  return {
    lens: lensData(lens),
    camera: resultData({ ...camera, bands: undefined, bandsNm: bandsData(camera.bands) }),
    mount: resultData({ ...mounting, ...objectScale }),
  };
}

/** A lens as the lens part of a rig holds it. Its warnings are no part of it. */
export function lensData({ axialUm, lateralUm, wavesByWavelength, warnings: _, ...lens }: Lens): object {
  const colour = {
    axialUm: axialUm.length > 0 ? tableData(axialUm) : undefined,
    lateralUm: lateralUm.length > 0 ? tableData(lateralUm) : undefined,
  };
  return resultData({
    ...lens,
    wavesByWavelength: wavesByWavelength && wavesData(wavesByWavelength),
    colour: axialUm.length + lateralUm.length > 0 ? colour : undefined,
  }) as object;
}

function bandsData(bands: Rig['camera']['bands']): object {
  return Object.fromEntries(
    bands.map(({ name, lines }) => [name, lines.map(({ nm, weight }) => [nm, weight])]),
  );
}

function tableData(table: SpectralTable): object {
  return Object.fromEntries(table);
}

function wavesData(table: readonly { nm: number; waves: Waves }[]): object {
  return Object.fromEntries(table.map(({ nm, waves }) => [nm, waves]));
}
