/** From the keys of a rig file to the rig of the optics: units in the names, defaults that depend on other keys, weights that sum to 1.
 * The only place in this folder that knows a formula of the optics. */
import { distortionWaves } from '../optics/distortion.js';
import type { Band, Camera, Lens, Mount, ObjectScale, Rig, SpectralTable, Waves } from '../optics/rig.js';
import type { CameraFile } from './schemas/camera.js';
import { isPrescribed, type PrescribedLens, type StatedLens } from './schemas/lens.js';
import type { MountFile } from './schemas/mount.js';
import type { RigFile } from './schemas/rig.js';

/** @param fromPrescription  makes the lens that is given by its surfaces, at the wavelengths of the bands and for the stop in use */
export function rigFromFile(
  file: RigFile,
  fromPrescription: (
    lens: PrescribedLens,
    inRig: { wavelengthsNm: readonly number[]; fNumber?: number },
  ) => Lens,
): Rig {
  const camera = cameraFromFile(file.camera);
  const lens = isPrescribed(file.lens)
    ? fromPrescription(file.lens, {
        wavelengthsNm: wavelengthsOf(camera.bands),
        fNumber: file.mount.f_number,
      })
    : lensFromFile(file.lens as StatedLens); // the schema tells the two apart
  return { lens, camera, mount: mountFromFile(file.mount, lens, camera) };
}

/** A lens that is stated by its coefficients. */
export function lensFromFile(file: StatedLens): Lens {
  const lens: Lens = {
    name: file.name ?? 'lens',
    fNumber: file.f_number,
    fullFieldMm: file.full_field_mm,
    wavelengthNm: file.wavelength_nm,
    waves: wavesFromFile(file),
    axialUm: spectralTable(file.colour?.axial_um),
    lateralUm: spectralTable(file.colour?.lateral_um),
    relativeIllumination: file.relative_illumination ?? 'cos4',
  };
  if (file.focal_length_mm !== undefined) lens.focalLengthMm = file.focal_length_mm;
  if (file.waves_by_wavelength !== undefined) {
    lens.wavesByWavelength = Object.entries(file.waves_by_wavelength)
      .map(([nm, waves]) => ({ nm: Number(nm), waves }))
      .sort((a, b) => a.nm - b.nm);
  }
  return lens;
}

export function cameraFromFile(file: CameraFile): Camera {
  const camera: Camera = {
    pixels: file.pixels,
    pixelPitchUm: file.pixel_pitch_um,
    fillFactor: file.fill_factor,
    bands: bandsFromFile(file.bands_nm),
    mosaic: file.mosaic,
  };
  if (file.sensor !== undefined) {
    camera.sensor = {
      whiteE: file.sensor.white_e,
      fullWellE: file.sensor.full_well_e,
      darkNoiseE: file.sensor.dark_noise_e,
      darkE: file.sensor.dark_e,
      prnuPercent: file.sensor.prnu_percent,
      dsnuE: file.sensor.dsnu_e,
      bitDepth: file.sensor.bit_depth,
    };
  }
  return camera;
}

function mountFromFile(file: MountFile, lens: Lens, camera: Camera): Mount {
  const [width, height] = camera.pixels;
  const mount: Mount = {
    fNumber: file.f_number ?? lens.fNumber,
    sensorShiftUm: file.sensor_shift_um,
    sensorTiltDeg: file.sensor_tilt_deg,
    axisPx: file.axis_px ?? [(width - 1) / 2, (height - 1) / 2],
  };
  const objectScale = objectScaleFromFile(file);
  if (objectScale !== undefined) mount.objectScale = objectScale;
  return mount;
}

function objectScaleFromFile(file: MountFile): ObjectScale | undefined {
  if (file.object_pixel_mm !== undefined) return { objectPixelMm: file.object_pixel_mm };
  if (file.magnification !== undefined) return { magnification: file.magnification };
  if (file.object_distance_mm !== undefined) return { objectDistanceMm: file.object_distance_mm };
  return undefined;
}

function wavesFromFile(file: StatedLens): Waves {
  const { W311, distortion_percent: inWaves, ...others } = file.waves;
  const percent = inWaves ?? file.distortion_percent;
  const fromPercent = (value: number) =>
    distortionWaves(value, file.f_number, file.wavelength_nm, file.full_field_mm);
  return { ...others, W311: W311 ?? (percent === undefined ? 0 : fromPercent(percent)) };
}

function spectralTable(table: Readonly<Record<string, number>> = {}): SpectralTable {
  return Object.entries(table)
    .map(([nm, value]) => [Number(nm), value] as const)
    .sort(([a], [b]) => a - b);
}

function bandsFromFile(file: CameraFile['bands_nm']): Band[] {
  const names = ['mono', 'red', 'green', 'blue'] as const;
  return names.flatMap((name) => {
    const lines = file[name];
    return lines === undefined ? [] : [{ name, lines: linesFromFile(lines) }];
  });
}

function linesFromFile(entries: NonNullable<CameraFile['bands_nm']['mono']>): Band['lines'] {
  const lines = entries.map((entry) =>
    typeof entry === 'number' ? { nm: entry, weight: 1 } : { nm: entry[0], weight: entry[1] },
  );
  const sum = lines.reduce((total, { weight }) => total + weight, 0);
  // weights that sum to 1 but for rounding are a rig written by the program: they stay, so that it reads back as the same rig
  if (Math.abs(sum - 1) <= lines.length * Number.EPSILON) return lines;
  return lines.map(({ nm, weight }) => ({ nm, weight: weight / sum }));
}

function wavelengthsOf(bands: readonly Band[]): number[] {
  return [...new Set(bands.flatMap(({ lines }) => lines.map(({ nm }) => nm)))].sort((a, b) => a - b);
}
