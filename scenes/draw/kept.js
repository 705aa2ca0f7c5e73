// @ts-check
/** Redraw the pictures that the repository keeps: the scenes of `foreglass start`, and the README's, which the demo has made.
 *
 *     npm run demo && node scenes/draw/kept.js
 */
import { copyFile } from 'node:fs/promises';
import { fileURLToPath } from 'node:url';
import { START_SCENES, writeScenes } from './pictures.js';

const here = (/** @type {string} */ path) => fileURLToPath(new URL(path, import.meta.url));

await writeScenes(START_SCENES, here('../start/'));
await copyFile(here('../packhouse/out/showcase.png'), here('../packhouse/showcase.png'));
