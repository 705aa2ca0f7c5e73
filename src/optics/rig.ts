/** The rig as the optics see it: lens, camera and mount, checked and with every default filled in. */

/** The terms of the third-order wavefront, in waves of the lens's own wavelength at h = 1 and rho = 1 (at the lens's f-number). */
export interface Waves {
  W040: number;
  W131: number;
  W222: number;
  W220: number;
  W311: number;
  W020: number;
  W111: number;
}

/** A quantity known at some wavelengths: [nm, value] in rising order of nm. */
export type SpectralTable = readonly (readonly [nm: number, value: number])[];

/** Fall-off of light with the field: the law cos^4, none, or a table of [h, value] in rising order of h. */
export type RelativeIllumination = 'cos4' | 'none' | readonly (readonly [h: number, value: number])[];

export interface Lens {
  name: string;
  /** Needed by the cos^4 law only. */
  focalLengthMm?: number;
  /** The aperture for which `waves` hold (N0). */
  fNumber: number;
  /** Image height at h = 1. */
  fullFieldMm: number;
  /** The wavelength in which waves are counted. */
  wavelengthNm: number;
  waves: Waves;
  /** Coefficients traced at several wavelengths (a lens given by its surfaces), in rising order: optical path in waves of `wavelengthNm`.
   * What counts is how they differ from the entry at `wavelengthNm`, so that a change of `waves` moves all wavelengths alike. */
  wavesByWavelength?: readonly { nm: number; waves: Waves }[];
  /** Paraxial focus against `wavelengthNm`, + away from the lens. Empty: no axial colour. */
  axialUm: SpectralTable;
  /** Image height at h = 1 against `wavelengthNm`, + outward. Empty: no lateral colour. */
  lateralUm: SpectralTable;
  relativeIllumination: RelativeIllumination;
  /** Where these figures mislead, in words, whatever is done with them (a lens given by its surfaces). */
  warnings?: readonly string[];
}

/** One wavelength of a band. The weights of a band sum to 1. */
export interface SpectralLine {
  nm: number;
  weight: number;
}

export interface Band {
  /** `mono`, `red`, `green` or `blue`. */
  name: string;
  lines: readonly SpectralLine[];
}

export type Mosaic = 'none' | 'rggb' | 'bggr' | 'grbg' | 'gbrg';

/** The sensor in the terms of EMVA 1288. */
export interface Sensor {
  /** Electrons of a scene value of 1 at full illumination. */
  whiteE: number;
  fullWellE: number;
  darkNoiseE: number;
  darkE: number;
  prnuPercent: number;
  dsnuE: number;
  bitDepth: number;
}

export interface Camera {
  /** Width and height. */
  pixels: readonly [width: number, height: number];
  pixelPitchUm: number;
  /** Side of the light-sensitive square as a share of the pitch, 0..1. */
  fillFactor: number;
  bands: readonly Band[];
  mosaic: Mosaic;
  /** Left out: no noise, no quantising before the picture is written. */
  sensor?: Sensor;
}

/** How large things are on the object: at most one of these is stated. */
export type ObjectScale =
  | { objectPixelMm: number }
  | { magnification: number }
  | { objectDistanceMm: number };

export interface Mount {
  /** The stop in use (N), not below the lens's. */
  fNumber: number;
  /** + away from the lens. */
  sensorShiftUm: number;
  /** About the x axis and about the y axis, right-handed, x right, y down, z away from the lens. */
  sensorTiltDeg: readonly [aboutX: number, aboutY: number];
  objectScale?: ObjectScale;
  /** Where the optical axis meets the sensor, in pixels; the middle of pixel (0, 0) is at (0, 0). */
  axisPx: readonly [x: number, y: number];
}

export interface Rig {
  lens: Lens;
  camera: Camera;
  mount: Mount;
}

export const COEFFICIENTS = ['W040', 'W131', 'W222', 'W220', 'W311', 'W020', 'W111'] as const;
export type Coefficient = (typeof COEFFICIENTS)[number];

/** The pitch of a pixel in mm. */
export function pixelPitchMm(camera: Camera): number {
  return camera.pixelPitchUm / 1000;
}

/** Whether everything that the lens does to the picture is the same in the four quadrants of the sensor. */
export function isSymmetric(rig: Rig): boolean {
  const [width, height] = rig.camera.pixels;
  const [axisX, axisY] = rig.mount.axisPx;
  const [aboutX, aboutY] = rig.mount.sensorTiltDeg;
  return aboutX === 0 && aboutY === 0 && axisX === (width - 1) / 2 && axisY === (height - 1) / 2;
}
