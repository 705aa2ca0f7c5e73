/** A folder with a small rig, for runs of the program that are over soon. */
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import sharp from 'sharp';

export const RIG = `lens:
  name: 12 mm, packing hall
  focal_length_mm: 12
  f_number: 2.8
  full_field_mm: 2
  wavelength_nm: 550
  waves: { W040: 0.1, W131: 0.2, W222: 0.1, W311: 1 }
camera:
  pixels: [96, 64]
  pixel_pitch_um: 6
  bands_nm: { mono: [550] }
  sensor: { white_e: 8000, full_well_e: 10000, dark_noise_e: 5, prnu_percent: 0.7, dsnu_e: 1.5, bit_depth: 12 }
mount: { f_number: 5.6 }
`;

/** The same in colour, with several bands at each pixel. */
export const COLOUR_RIG = RIG.replace('mono: [550]', 'red: [620], green: [540], blue: [460]');

export interface Folder {
  path: string;
  at(name: string): string;
  remove(): void;
}

/** Holds `a.rig.yaml`, `colour.rig.yaml` and `scene.png` (a ramp in colour, 80 x 60). */
export async function folderWithRig(): Promise<Folder> {
  const path = mkdtempSync(join(tmpdir(), 'cli-'));
  const at = (name: string) => join(path, name);
  writeFileSync(at('a.rig.yaml'), RIG);
  writeFileSync(at('colour.rig.yaml'), COLOUR_RIG);
  const [width, height] = [80, 60];
  const ramp = Uint8Array.from({ length: width * height * 3 }, (_, i) => (7 * i) % 256);
  await sharp(ramp, { raw: { width, height, channels: 3 } })
    .png()
    .toFile(at('scene.png'));
  return { path, at, remove: () => rmSync(path, { recursive: true, force: true }) };
}
