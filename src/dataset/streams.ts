/** What is drawn by chance, and from which stream of random numbers: so that no draw depends on another, and a key added to a recipe
 * leaves the values of the others as they are. */
import { createHash } from 'node:crypto';

/** Streams of the recipe's seed. The camera's own noise has the streams 1 and 2 of a picture's seed. */
export const STREAM = {
  scene: 16,
  window: 17,
  place: 18,
  scale: 19,
  turn: 20,
  noise: 21,
  camera: 22,
  split: 23,
} as const;

/** The stream of a key of the rig: from 2^31 up, by its name. */
export function streamOfKey(key: string): number {
  return createHash('sha256').update(key).digest().readUInt32LE(0) | 0x80000000;
}
