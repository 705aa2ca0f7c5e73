import {
  copyFileSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, describe, expect, it } from 'vitest';
import { cocoText, toCoco } from '../../scenes/draw/labels.js';
import { DEMO_SCENES, START_SCENES, TRAINING_SCENES } from '../../scenes/draw/pictures.js';
import { loadRecipe } from '../../src/files/load-recipe.js';
import { loadRig } from '../../src/files/load-rig.js';
import { loadTask } from '../../src/files/load-task.js';
import { derive } from '../../src/jobs/derive.js';
import { colourWarnings } from '../../src/optics/limits.js';
import type { Rig } from '../../src/optics/rig.js';
import { pixelPitchMm } from '../../src/optics/rig.js';

const folder = (name: string) => fileURLToPath(new URL(`../../scenes/${name}/`, import.meta.url));
const HALL = folder('packhouse');
const START = folder('start');
const scratch = mkdtempSync(join(tmpdir(), 'scenes-'));
afterAll(() => rmSync(scratch, { recursive: true }));

/** Which scene belongs to which rig. */
const PAIRS = [
  { rig: join(HALL, 'tags-green.rig.yaml'), scene: scene(DEMO_SCENES, 'crate-tags') },
  { rig: join(HALL, 'tags-green.rig.yaml'), scene: scene(DEMO_SCENES, 'test-chart') },
  { rig: join(HALL, 'belt-colour.rig.yaml'), scene: scene(DEMO_SCENES, 'apple-belt') },
  { rig: join(HALL, 'tags-surfaces.rig.yaml'), scene: scene(START_SCENES, 'crate-tags') },
  { rig: join(START, 'tags.rig.yaml'), scene: scene(START_SCENES, 'crate-tags') },
  { rig: join(START, 'belt.rig.yaml'), scene: scene(START_SCENES, 'apples-1') },
  { rig: join(START, 'belt.rig.yaml'), scene: scene(START_SCENES, 'apples-2') },
];

describe('the rigs of the packing hall', () => {
  it.each(PAIRS)('$scene.file has as many pixels as the camera', ({ rig, scene }) => {
    const { width, height } = scene.draw();
    expect(loadRig(rig).camera.pixels).toEqual([width, height]);
  });

  it.each(PAIRS)('no figure of the lens is used past its range ($rig)', ({ rig }) => {
    const loaded = loadRig(rig);
    expect(cornerField(loaded)).toBeLessThanOrEqual(1);
    expect(cornerField(loaded)).toBeGreaterThan(0.99); // so that h = 1 is the corner, as the comments say
    expect(colourWarnings(loaded)).toEqual([]);
  });
});

describe('the lenses that are given by their surfaces', () => {
  it.each([HALL, START])('are derived, and serve the rig beside them (%s)', (place) => {
    const { report, lens } = derive(join(place, 'three-element.lens.yaml'));
    expect(report.explained[0].share).toBeGreaterThan(0.99); // the terms carry in the middle
    const camera = loadRig(join(place, place === HALL ? 'tags-surfaces.rig.yaml' : 'tags.rig.yaml')).camera;
    const [width, height] = camera.pixels;
    const corner = Math.hypot((width - 1) / 2, (height - 1) / 2) * pixelPitchMm(camera);
    expect(corner / lens.fullFieldMm).toBeLessThanOrEqual(1);
    expect(corner / lens.fullFieldMm).toBeGreaterThan(0.99);
  });
});

describe('the tasks and recipes', () => {
  it('load', () => {
    expect(loadTask(join(HALL, 'read-tags.task.yaml')).rules).toHaveLength(5);
    expect(loadTask(join(START, 'read-tags.task.yaml')).rules).toHaveLength(5);
    expect(loadRecipe(join(START, 'training.recipe.yaml')).rigs).toEqual([join(START, 'belt.rig.yaml')]);
  });

  it.each([
    ['training', 'belt-colour', 'apples-1'],
    ['training-tags', 'tags-green', 'tags-1'],
  ])('%s.recipe.yaml loads beside what the demo draws for it', (name, rig, of) => {
    const { file, labels } = scene(TRAINING_SCENES, of);
    for (const needed of [`${name}.recipe.yaml`, `${rig}.rig.yaml`]) {
      copyFileSync(join(HALL, needed), join(scratch, needed));
    }
    mkdirSync(join(scratch, 'out', dirname(file)), { recursive: true });
    writeFileSync(join(scratch, 'out', labels!), '{}');
    const recipe = loadRecipe(join(scratch, `${name}.recipe.yaml`));
    expect(recipe.count).toBe(500);
    // values are spread about what the rig has
    const { waves } = loadRig(join(HALL, `${rig}.rig.yaml`)).lens;
    const w131 = recipe.vary.find(({ key }) => key === 'lens.waves.W131');
    expect(w131?.distribution).toMatchObject({ kind: 'normal', mean: waves.W131 });
  });

  it('vary a lens about the figures of its own rig', () => {
    const { vary } = loadRecipe(join(START, 'training.recipe.yaml'));
    const { waves } = loadRig(join(START, 'belt.rig.yaml')).lens;
    for (const name of ['W131', 'W222'] as const) {
      const entry = vary.find(({ key }) => key === `lens.waves.${name}`);
      expect(entry?.distribution).toMatchObject({ kind: 'normal', mean: waves[name] });
    }
  });
});

describe('the folder of `foreglass start`', () => {
  it('has labels that match its scenes', () => {
    const entries = START_SCENES.filter(({ labels }) => labels !== undefined).map(({ file, draw }) => {
      const { width, height, labels } = draw();
      return { file: file.slice(file.lastIndexOf('/') + 1), width, height, labels };
    });
    expect(readFileSync(join(START, 'belt-labels.json'), 'utf8')).toBe(cocoText(toCoco(entries)));
    expect(readdirSync(join(START, 'scenes/belt')).sort()).toEqual(entries.map(({ file }) => file));
  });

  it('is small enough to ship', () => {
    for (const { file } of START_SCENES) {
      expect(readFileSync(join(START, file)).length, file).toBeLessThan(300_000); // a tenth of a common picture of a phone
    }
  });
});

function scene(list: typeof DEMO_SCENES, name: string) {
  return list.find(({ file }) => file.endsWith(`/${name}.png`))!;
}

/** h of the sensor's corner. */
function cornerField({ camera, lens }: Rig): number {
  const [width, height] = camera.pixels;
  return (Math.hypot((width - 1) / 2, (height - 1) / 2) * pixelPitchMm(camera)) / lens.fullFieldMm;
}
