// @ts-check
/** The demo of data sets: 60 labelled pictures of apples and crate tags, and a sheet on which their labels are drawn. */
import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { contactSheet } from './draw/contact-sheet.js';
import { TRAINING_SCENES, writeScenes } from './draw/pictures.js';
import { foreglass, HALL, OUT, say, shown } from './draw/run.js';

const SHEET = join(OUT, 'training', 'sheet.png');
const SETS = [
  { recipe: join(HALL, 'training.recipe.yaml'), folder: join(OUT, 'training', 'apples') },
  { recipe: join(HALL, 'training-tags.recipe.yaml'), folder: join(OUT, 'training', 'tags') },
];

const begin = performance.now();
say('Drawing the scenes: apples on a belt, sheets of crate tags.');
await writeScenes(TRAINING_SCENES, OUT);
await mkdir(join(OUT, 'training'), { recursive: true });
for (const { recipe, folder } of SETS) {
  foreglass(['dataset', shown(recipe), '--out', shown(folder), '--limit', '30', '--fresh'], 'aloud');
}
await writeFile(SHEET, await contactSheet(SETS.map(({ folder }) => folder)));

say(`Done in ${((performance.now() - begin) / 1000).toFixed(0)} s. Open ${shown(SHEET)} at full size:

  60 pictures, each through a lens, a focus and a part of the field of its own. The outlines, boxes and stems lie where
  that lens puts the things: look for round apples in a corner, stretched or pressed by its distortion.

The pictures are in ${shown(join(SETS[0].folder, 'images'))} and ${shown(join(SETS[1].folder, 'images'))}, the labels beside them
in COCO files; records.jsonl says for every picture what was drawn, and for every label how sharp the picture is there.
Without --limit the same commands go on to the 500 pictures of the recipes.`);
