// @ts-check
/** What the scripts of the demo share: its folders, and the command line run as a user would. */
import { spawnSync } from 'node:child_process';
import { join, relative } from 'node:path';
import { fileURLToPath } from 'node:url';

/** A path within `scenes`. @param {string} path */
export function hereIn(path) {
  return fileURLToPath(new URL(`../${path}`, import.meta.url));
}

export const PROGRAM = hereIn('../bin/foreglass.js');
export const HALL = hereIn('packhouse/');
export const OUT = join(HALL, 'out');

/** Run the command line as a user would, and show the line.
 * @param {string[]} words @param {'quiet' | 'aloud'} results  of the command: shown or not (progress and warnings always are) */
export function foreglass(words, results) {
  say(`$ foreglass ${words.join(' ')}`);
  const { status } = spawnSync(process.execPath, [PROGRAM, ...words], {
    stdio: ['ignore', results === 'aloud' ? 'inherit' : 'ignore', 'inherit'],
  });
  if (status !== 0) process.exit(status ?? 130); // it has said what is wrong; without a status it was interrupted
}

/** A path as seen from where the script was started. @param {string} path */
export function shown(path) {
  return relative(process.cwd(), path) || '.';
}

/** @param {string} line */
export function say(line) {
  process.stdout.write(`\n${line}\n`);
}
