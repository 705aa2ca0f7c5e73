// @ts-check
/** The demo: draw the scenes of the packing hall, render each with the command line, and say what to look at. */
import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { DEMO_SCENES, writeScenes } from './draw/pictures.js';
import { foreglass, HALL, OUT, PROGRAM, say, shown } from './draw/run.js';
import { showcase } from './draw/showcase.js';
import { closeTheLoop, SHEET as LOOP } from './loop.js';
import { BARS, compareSurfaces, SHEET } from './surfaces.js';

/** What is rendered, and where in the pictures to look. */
const TAGS = { scene: scene('tags/crate-tags'), rig: rig('tags-green'), picture: picture('crate-tags') };
const BELT = { scene: scene('belt/apple-belt'), rig: rig('belt-colour'), picture: picture('apple-belt') };
const CHART = { scene: scene('chart/test-chart'), rig: rig('tags-green'), picture: picture('test-chart') };
const SHOWCASE = join(OUT, 'showcase.png');

const begin = performance.now();
say('Drawing the scenes: crate tags, apples on a belt, a test chart.');
await writeScenes(DEMO_SCENES, OUT);
await mkdir(join(OUT, 'pictures'), { recursive: true });
for (const { scene, rig, picture } of [TAGS, BELT, CHART]) {
  foreglass(['render', shown(scene), '--rig', shown(rig), '--out', shown(picture)], 'quiet');
}
await writeFile(
  SHOWCASE,
  await showcase([
    { ...TAGS, middle: [1060, 1090], corner: [2250, 1780] },
    { ...BELT, middle: [1080, 450], corner: [16, 930] },
  ]),
);
foreglass(['zones', '--rig', shown(TAGS.rig)], 'aloud');
const { isSame } = await compareSurfaces();
const { worst } = await closeTheLoop();

say(`Done in ${((performance.now() - begin) / 1000).toFixed(0)} s. Open these, at full size:

  ${shown(SHOWCASE)}
      the whole story on one page: what is sharp in the middle and what is left of it in a corner
  ${shown(TAGS.picture)}
      a tag reader under green light: read the small print of a tag in the middle, then of one in a corner;
      the straight lines between the tags bend (barrel distortion), and the corners are darker
  ${shown(BELT.picture)}
      an apple belt in colour: the rule along the rails shows lateral colour, blue on one side and orange on the
      other, more the farther out; the row of lamps in each apple turns from points into smears
  ${shown(CHART.picture)}
      the same panel 30 times: bars on the radius and bars across it blur by different amounts (astigmatism)
  ${shown(SHEET)}
      a lens from its surfaces and from the coefficients that were derived from them: ${isSame ? 'the same picture, byte for byte' : 'the pictures DIFFER, which is a fault'}
  ${shown(BARS)}
      which surface of that lens contributes what: long bars to both sides that all but cancel
  ${shown(LOOP)}
      a chart, its picture, and the contrast measured in the picture as points on the predicted curves (${worst.toFixed(3)} apart at most)

The ideal scenes are in ${shown(join(OUT, 'scenes'))}; what the rigs are made of is in ${join(shown(HALL), '*.rig.yaml')}.
Stop the lens down and see the corners sharpen:

  node ${shown(PROGRAM)} render ${shown(TAGS.scene)} --rig ${shown(TAGS.rig)} --f-number 5.6 --out ${shown(join(OUT, 'pictures', 'crate-tags-f5.6.png'))}`);

/** @param {string} name */
function scene(name) {
  return join(OUT, 'scenes', `${name}.png`);
}

/** @param {string} name */
function rig(name) {
  return join(HALL, `${name}.rig.yaml`);
}

/** @param {string} name */
function picture(name) {
  return join(OUT, 'pictures', `${name}.png`);
}
