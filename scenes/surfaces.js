// @ts-check
/** A lens from its surfaces and the same lens from its coefficients: two pictures, side by side, that must be the same.
 *
 *     node scenes/surfaces.js
 */
import { mkdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { foreglass, HALL, hereIn, OUT, say, shown } from './draw/run.js';
import { showcase } from './draw/showcase.js';

const SCENE = hereIn('start/scenes/tags/crate-tags.png');
const PRESCRIPTION = join(HALL, 'three-element.lens.yaml');
const RIG = join(HALL, 'tags-surfaces.rig.yaml');
const FOLDER = join(OUT, 'surfaces');

/** What this makes, for those who point at it. */
export const SHEET = join(FOLDER, 'from-surfaces.png');
export const BARS = join(FOLDER, 'three-element.svg');

/** Derive the lens, render a scene through both descriptions of it and lay the pictures out on a sheet. */
export async function compareSurfaces() {
  await mkdir(FOLDER, { recursive: true });
  const part = join(FOLDER, 'derived.lens.yaml');
  const rig = await readFile(RIG, 'utf8');
  const wavelengths = [...rig.matchAll(/\[(\d+), 0\.\d+\]/g)].map(([, nm]) => nm).join(',');
  foreglass(
    [
      'derive',
      shown(PRESCRIPTION),
      '--wavelengths',
      wavelengths,
      '--out',
      shown(part),
      '--plot',
      shown(BARS),
    ],
    'quiet',
  );
  const derivedRig = join(FOLDER, 'derived.rig.yaml');
  await writeFile(derivedRig, rig.replace(/^lens:\n( .*\n)+/m, 'lens: derived.lens.yaml\n'));
  const pictures = [
    { rig: RIG, picture: join(FOLDER, 'picture-from-surfaces.png'), label: 'FROM ITS SURFACES' },
    {
      rig: derivedRig,
      picture: join(FOLDER, 'picture-from-coefficients.png'),
      label: 'FROM ITS COEFFICIENTS',
    },
  ];
  for (const { rig, picture } of pictures)
    foreglass(['render', shown(SCENE), '--rig', shown(rig), '--out', shown(picture), '--quiet'], 'quiet');
  const [one, other] = await Promise.all(pictures.map(({ picture }) => readFile(picture)));
  const details = {
    scene: SCENE,
    middle: /** @type {const} */ ([520, 430]),
    corner: /** @type {const} */ ([1030, 860]),
  };
  await writeFile(
    SHEET,
    await showcase(pictures.map(({ picture, label }) => ({ ...details, picture, label }))),
  );
  return { isSame: one.equals(other) };
}

if (import.meta.url === pathToFileURL(process.argv[1]).href) {
  const { isSame } = await compareSurfaces();
  say(
    `The two pictures are ${isSame ? 'the same, byte for byte' : 'NOT the same'}. Open\n\n  ${shown(SHEET)}\n  ${shown(BARS)}`,
  );
  process.exitCode = isSame ? 0 : 1;
}
