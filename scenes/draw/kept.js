// @ts-check
/** Redraw the pictures that the repository keeps: the scenes of `foreglass start`, and the README's, which the demo has made.
 *
 *     npm run demo && npm run demo:dataset && node scenes/draw/kept.js
 */
import { copyFile, writeFile } from 'node:fs/promises';
import { fileURLToPath } from 'node:url';
import sharp from 'sharp';
import { START_SCENES, writeScenes } from './pictures.js';

const here = (/** @type {string} */ path) => fileURLToPath(new URL(path, import.meta.url));

await writeScenes(START_SCENES, here('../start/'));
await copyFile(here('../packhouse/out/showcase.png'), here('../packhouse/showcase.png'));
const training = await sharp(here('../packhouse/out/training/sheet.png'))
  .resize({ width: 1240 })
  .png({ compressionLevel: 9, palette: true, colours: 128, dither: 0.5, effort: 10 })
  .toBuffer();
await writeFile(here('../packhouse/training.png'), training);
