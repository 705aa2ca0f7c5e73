/** Rigs with some of their numbers changed by path. */
import { dirname } from 'node:path';
import { InputError } from '../errors.js';
import { parseRig } from '../files/load-rig.js';
import type { RigFile } from '../files/schemas/rig.js';
import { parseKeyPath } from '../files/source.js';
import type { Rig } from '../optics/rig.js';
import type { SampledValue } from './sampling.js';

/** A rig file of a recipe, with its parts in place. */
export interface RigBase {
  /** As it opens from the working folder. */
  path: string;
  file: RigFile;
}

/** Keys of which one gives way to the other. */
const RIVALS: Readonly<Record<string, readonly string[]>> = {
  'lens.waves.W311': ['lens.waves.distortion_percent', 'lens.distortion_percent'],
  'lens.waves.distortion_percent': ['lens.waves.W311', 'lens.distortion_percent'],
  'lens.distortion_percent': ['lens.waves.W311', 'lens.waves.distortion_percent'],
  'mount.object_pixel_mm': ['mount.magnification', 'mount.object_distance_mm'],
  'mount.magnification': ['mount.object_pixel_mm', 'mount.object_distance_mm'],
  'mount.object_distance_mm': ['mount.object_pixel_mm', 'mount.magnification'],
};

/** The rig with values at the paths of some of its keys.
 * @throws {InputError} values that make no rig, by key */
export function rigWith(base: RigBase, values: readonly SampledValue[]): Rig {
  const data = structuredClone(base.file) as Record<string, unknown>;
  for (const { key, value } of values) {
    for (const rival of RIVALS[key] ?? []) remove(data, parseKeyPath(rival));
    put(data, stepsOf(key), value);
  }
  return parseRig(data, { folder: dirname(base.path) });
}

/** The steps of a key; a wavelength at its end may have a decimal point: `lens.colour.axial_um.486.1`. */
function stepsOf(key: string): PropertyKey[] {
  const table = /^(.*[a-z])\.(\d+\.\d+)$/.exec(key);
  return table === null ? parseKeyPath(key) : [...parseKeyPath(table[1]), table[2]];
}

type Holder = Record<PropertyKey, unknown>;

function put(data: Holder, path: readonly PropertyKey[], value: number): void {
  let holder = data;
  for (const [at, step] of path.slice(0, -1).entries()) {
    if (typeof holder[step] !== 'object' || holder[step] === null) {
      // mount.axis_px may be left out, and then lies in the middle of the sensor
      holder[step] = path.slice(0, at + 1).join('.') === 'mount.axis_px' ? middleOfSensor(data) : {};
    }
    holder = holder[step] as Holder;
  }
  holder[path[path.length - 1]] = value;
}

function middleOfSensor(data: Holder): [number, number] {
  const { pixels } = (data as unknown as RigFile).camera;
  return [(pixels[0] - 1) / 2, (pixels[1] - 1) / 2];
}

function remove(data: Holder, path: readonly PropertyKey[]): void {
  let holder: unknown = data;
  for (const step of path.slice(0, -1)) {
    if (typeof holder !== 'object' || holder === null) return;
    holder = (holder as Holder)[step];
  }
  if (typeof holder === 'object' && holder !== null) delete (holder as Holder)[path[path.length - 1]];
}

/** The faults of a refusal, for a rig that chance has made. */
export function refusalOf(make: () => Rig): InputError | Rig {
  try {
    return make();
  } catch (error) {
    if (error instanceof InputError) return error;
    throw error;
  }
}
