/** What can be taken out of a rig to see what it costs. */
import { COEFFICIENTS, type Coefficient, type Rig, type Waves } from '../optics/rig.js';

/** A part of the lens's or the mount's errors by its name. */
export type RigPart = Coefficient | 'axial_colour' | 'lateral_colour' | 'sensor_shift' | 'sensor_tilt';

/** The parts of a rig that are not zero. */
export function partsOf({ lens, mount }: Rig): RigPart[] {
  const parts: RigPart[] = COEFFICIENTS.filter((name) => lens.waves[name] !== 0);
  if (lens.axialUm.some(([, um]) => um !== 0)) parts.push('axial_colour');
  if (lens.lateralUm.some(([, um]) => um !== 0)) parts.push('lateral_colour');
  if (mount.sensorShiftUm !== 0) parts.push('sensor_shift');
  if (mount.sensorTiltDeg.some((degrees) => degrees !== 0)) parts.push('sensor_tilt');
  return parts;
}

/** The rig with a part set to zero. Coefficients traced at several wavelengths keep their differences. */
export function withoutPart(rig: Rig, part: RigPart): Rig {
  const { lens, mount } = rig;
  switch (part) {
    case 'axial_colour':
      return { ...rig, lens: { ...lens, axialUm: [] } };
    case 'lateral_colour':
      return { ...rig, lens: { ...lens, lateralUm: [] } };
    case 'sensor_shift':
      return withShift(rig, 0);
    case 'sensor_tilt':
      return { ...rig, mount: { ...mount, sensorTiltDeg: [0, 0] } };
    default:
      return withWaves(rig, { [part]: 0 });
  }
}

export function withWaves(rig: Rig, waves: Partial<Waves>): Rig {
  return { ...rig, lens: { ...rig.lens, waves: { ...rig.lens.waves, ...waves } } };
}

export function withShift(rig: Rig, sensorShiftUm: number): Rig {
  return { ...rig, mount: { ...rig.mount, sensorShiftUm } };
}

/** The rig at another stop, with the light that it lets through: the electrons of a white scene go with (N0 / N)^2 from those that the rig
 * states for its own stop N0. A wider stop fills the well and no more, since one would expose for a shorter time. */
export function withStop(rig: Rig, fNumber: number): Rig {
  const { camera, mount } = rig;
  const stopped = { ...rig, mount: { ...mount, fNumber } };
  const { sensor } = camera;
  if (sensor === undefined) return stopped;
  const most = Math.max(sensor.whiteE, sensor.fullWellE - sensor.darkE);
  const whiteE = Math.min(most, sensor.whiteE * (mount.fNumber / fNumber) ** 2);
  return { ...stopped, camera: { ...camera, sensor: { ...sensor, whiteE } } };
}

/** The same rig with a lens and a mount without any error: diffraction and the pixel are left. */
export function perfectRig(rig: Rig): Rig {
  const zero = Object.fromEntries(COEFFICIENTS.map((name) => [name, 0])) as unknown as Waves;
  const lens = { ...rig.lens, waves: zero, axialUm: [], lateralUm: [] };
  delete lens.wavesByWavelength;
  return { ...rig, lens, mount: { ...rig.mount, sensorShiftUm: 0, sensorTiltDeg: [0, 0] } };
}
