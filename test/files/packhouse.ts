/** Texts of the packing hall, one of each file kind, and what the tests of files share. */
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, expect } from 'vitest';
import { type Fault, InputError } from '../../src/errors.js';

export const LENS = `name: 12 mm, packing hall
focal_length_mm: 12
f_number: 2.8
full_field_mm: 4.6
wavelength_nm: 550
waves: { W040: 0.8, W131: 1.1, W222: 0.9, W220: 0.6, W311: 6 }
colour:
  axial_um: { 650: -5, 450: 12 }
  lateral_um: { 450: 1.4, 650: -0.8 }
relative_illumination: cos4
`;

export const CAMERA = `pixels: [2448, 2048]
pixel_pitch_um: 3.45
fill_factor: 0.9
bands_nm: { mono: [550] }
mosaic: none
sensor: { white_e: 8000, full_well_e: 10000, dark_noise_e: 5, dark_e: 0, prnu_percent: 0.7, dsnu_e: 1.5, bit_depth: 10 }
`;

export const MOUNT = `f_number: 4
sensor_shift_um: 3
sensor_tilt_deg: [0.1, -0.2]
object_pixel_mm: 0.12
axis_px: [1200, 1000.5]
`;

const indented = (text: string) => text.replaceAll(/^(?=.)/gm, '  ');

/** Lens in lines 1 to 11, camera in 12 to 18, mount in 19 to 24. */
export const RIG = `lens:\n${indented(LENS)}camera:\n${indented(CAMERA)}mount:\n${indented(MOUNT)}`;

export const TASK = `name: read the crate tag
zones: [axis, 0.7, 0.7@90, top_right]
require:
  - contrast: { feature_mm: 0.6, at_least: 0.30 }
  - placement: { at_most_px: 1.5 }
  - edge_blur: { at_most_px: 2.5 }
  - decode: { symbol: qr, module_mm: 0.6, success_at_least: 0.98, trials: 20 }
  - detect: { feature_mm: 0.8, contrast: 0.2, ratio_at_least: 4 }
`;

export const RECIPE = `rig: packhouse.rig.yaml
scenes: { images: scenes/, labels: labels.json }
count: 2000
seed: 7
vary:
  lens.waves.W131: { normal: [1.1, 0.3], within: [0, 2] }
  mount.sensor_shift_um: { uniform: [-25, 25] }
  camera.sensor.white_e: { log_uniform: [1500, 8000] }
  mount.sensor_tilt_deg[0]: { choice: [0, 0.1] }
  lens.colour.axial_um.450: { fixed: 3 }
output: { size: [640, 480], format: jpeg, quality: 90, labels: coco }
`;

export const PRESCRIPTION = `name: three-element lens, packing hall
wavelength_nm: 550
surfaces:
  - { radius_mm: 30.1, thickness_mm: 3.2, glass: { nd: 1.62, vd: 60.3 }, semi_diameter_mm: 6 }
  - { radius_mm: infinity, thickness_mm: 4, conic: -1, aspheric_mm: { A4: 1.0e-5 } }
  - { stop: true, thickness_mm: 1 }
  - { radius_mm: -20, thickness_mm: 1, glass: 620603 }
  - { radius_mm: 22 , thickness_mm: 4 }
  - { radius_mm: 60, thickness_mm: 2, glass: { sellmeier: { B: [0.7, 0.4, 0.9], C_um2: [0.005, 0.013, 98] } } }
  - { radius_mm: -25 }
object_distance_mm: infinity
f_number: 2.8
full_field_mm: 4.6
scale_to_focal_length_mm: 12
`;

/** The faults of a refusal; the test fails where nothing is refused. */
export function faultsOf(run: () => unknown): readonly Fault[] {
  try {
    run();
  } catch (error) {
    expect(error).toBeInstanceOf(InputError);
    return (error as InputError).faults;
  }
  throw new Error('nothing was refused');
}

/** A fresh folder for each test of a file. */
export function useFolder(): {
  path(name: string): string;
  write(name: string, content: string | Uint8Array): string;
} {
  let folder = '';
  beforeEach(() => {
    folder = mkdtempSync(join(tmpdir(), 'files-'));
  });
  afterEach(() => rmSync(folder, { recursive: true, force: true }));
  const path = (name: string) => join(folder, name);
  return {
    path,
    write(name, content) {
      writeFileSync(path(name), content);
      return path(name);
    },
  };
}
