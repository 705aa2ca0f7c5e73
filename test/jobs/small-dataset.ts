/** A small recipe with all that it names, in a folder of its own, for runs that are over soon. */
import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, relative } from 'node:path';
import type { PictureEntry } from '../../src/dataset/entry.js';
import { encodePicture } from '../../src/files/pictures/index.js';
import { CounterRandom } from '../../src/numeric/random.js';

export const RIG = `lens: { f_number: 4, full_field_mm: 0.6, wavelength_nm: 550, focal_length_mm: 8, waves: { W040: 0.1, W131: 0.2, W222: 0.1, W311: 3 } }
camera:
  pixels: [80, 60]
  pixel_pitch_um: 6
  bands_nm: { mono: [550] }
  sensor: { white_e: 8000, full_well_e: 10000, dark_noise_e: 5, prnu_percent: 0.7, bit_depth: 12 }
mount: { f_number: 5.6 }
`;

export const COLOUR_RIG = RIG.replace('mono: [550]', 'red: [620], green: [540], blue: [460]');

/** Pictures of so coarse a blur take a tenth of a second. */
export const RECIPE = `rig: a.rig.yaml
scenes: { images: scenes, labels: labels.json }
count: 8
seed: 7
vary:
  lens.waves.W131: { normal: [0.2, 0.05] }
  mount.sensor_shift_um: { uniform: [-20, 20] }
accuracy: { tolerance: 0.05, kernel_tolerance: 0.05 }
output: { size: [48, 32] }
`;

export interface Site {
  path(name: string): string;
  write(name: string, text: string): string;
  remove(): void;
}

/** Holds `a.rig.yaml`, `colour.rig.yaml`, `a.recipe.yaml`, three scenes in colour of 80 x 60 and their labels. */
export async function smallSite(): Promise<Site> {
  const folder = mkdtempSync(join(tmpdir(), 'dataset-'));
  const path = (name: string) => join(folder, name);
  const write = (name: string, text: string) => {
    writeFileSync(path(name), text);
    return path(name);
  };
  mkdirSync(path('scenes'));
  const random = new CounterRandom(2, 0);
  const [width, height] = [80, 60];
  for (const name of ['a', 'b', 'c']) {
    random.start(name.charCodeAt(0));
    const planes = [0, 1, 2].map(() => new Float32Array(width * height).map(() => random.uniform()));
    writeFileSync(path(`scenes/${name}.png`), await encodePicture({ width, height, planes }, 'png'));
  }
  const images = ['a', 'b', 'c'].map((name, index) => ({
    id: index + 1,
    file_name: `${name}.png`,
    width,
    height,
  }));
  const annotations = images.flatMap(({ id }) => [
    {
      id: 3 * id,
      image_id: id,
      category_id: 1,
      bbox: [10, 10, 20, 15],
      area: 300,
      iscrowd: 0,
      text: `box ${id}`,
    },
    {
      id: 3 * id + 1,
      image_id: id,
      category_id: 2,
      segmentation: [[30, 20, 60, 22, 50, 45]],
      keypoints: [45, 30, 2],
    },
    {
      id: 3 * id + 2,
      image_id: id,
      category_id: 1,
      iscrowd: 1,
      segmentation: { size: [60, 80], counts: [1000, 30, 30, 30, 3710] },
    },
  ]);
  const categories = [
    { id: 1, name: 'box' },
    { id: 2, name: 'leaf', keypoints: ['stem'], skeleton: [] },
  ];
  write('labels.json', JSON.stringify({ images, annotations, categories }));
  write('a.rig.yaml', RIG);
  write('colour.rig.yaml', COLOUR_RIG);
  write('a.recipe.yaml', RECIPE);
  return { path, write, remove: () => rmSync(folder, { recursive: true, force: true }) };
}

/** Every file below a folder with its bytes, by name. */
export function contents(folder: string): Map<string, string> {
  const found = new Map<string, string>();
  const visit = (path: string) => {
    for (const name of readdirSync(path).sort()) {
      const inner = join(path, name);
      if (statSync(inner).isDirectory()) visit(inner);
      else found.set(relative(folder, inner), readFileSync(inner, 'latin1'));
    }
  };
  visit(folder);
  return found;
}

export function records(folder: string): PictureEntry[] {
  const text = readFileSync(join(folder, 'records.jsonl'), 'utf8');
  return text
    .trim()
    .split('\n')
    .map((line) => JSON.parse(line) as PictureEntry);
}
