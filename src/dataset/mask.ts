/** Masks of labels on their way through the lens. */
import type { RunLengths } from '../files/load-labels.js';

/** A mask in the picture, with what of it is there. */
export interface MovedMask {
  counts: number[];
  /** Pixels. */
  area: number;
  /** x, y, width, height in whole pixels; undefined where nothing is left. */
  box?: [number, number, number, number];
}

/** One byte a pixel, row-major: 1 inside. */
export function maskPixels({ width, height, counts }: RunLengths): Uint8Array {
  const pixels = new Uint8Array(width * height);
  forEachRun(counts, height, (x, top, bottom) => {
    for (let y = top; y < bottom; y++) pixels[y * width + x] = 1;
  });
  return pixels;
}

/** Goes through the runs of a mask's inside, a piece a column.
 * @param look  pixels (x, top) to (x, bottom - 1) are inside */
export function forEachRun(
  counts: readonly number[],
  height: number,
  look: (x: number, top: number, bottom: number) => void,
): void {
  let from = 0;
  for (const [index, count] of counts.entries()) {
    const end = from + count;
    while (index % 2 === 1 && from < end) {
      const x = Math.floor(from / height);
      const stop = Math.min(end, (x + 1) * height);
      look(x, from - x * height, stop - x * height);
      from = stop;
    }
    from = end;
  }
}

/** Take a mask into the picture: every pixel is inside whose middle comes from a pixel of the scene that is.
 *
 * @param mask    of the scene
 * @param width   of the picture
 * @param height  of the picture
 * @param region  left, top, right, bottom of the part of the picture where the mask can be, in sides of pixels
 * @param toScene the place of the scene that a place of the picture shows; pixels' middles lie on whole numbers
 */
export function movedMask(
  mask: RunLengths,
  width: number,
  height: number,
  region: readonly [number, number, number, number],
  toScene: (x: number, y: number) => [x: number, y: number],
): MovedMask {
  const pixels = maskPixels(mask);
  const left = Math.min(width, Math.max(0, Math.floor(region[0])));
  const top = Math.min(height, Math.max(0, Math.floor(region[1])));
  const right = Math.max(left, Math.min(width, Math.ceil(region[2])));
  const bottom = Math.max(top, Math.min(height, Math.ceil(region[3])));
  const counts: number[] = [];
  let run = 0;
  let isInside = false;
  let area = 0;
  const box = { left: right, top: bottom, right: left, bottom: top };
  const add = (inside: boolean, count: number) => {
    if (count === 0) return;
    if (inside !== isInside) {
      counts.push(run);
      run = 0;
      isInside = inside;
    }
    run += count;
  };
  add(false, left * height);
  for (let x = left; x < right; x++) {
    add(false, top);
    for (let y = top; y < bottom; y++) {
      const [sceneX, sceneY] = toScene(x, y);
      const column = Math.round(sceneX);
      const row = Math.round(sceneY);
      const inside =
        column >= 0 &&
        column < mask.width &&
        row >= 0 &&
        row < mask.height &&
        pixels[row * mask.width + column] === 1;
      add(inside, 1);
      if (!inside) continue;
      area++;
      box.left = Math.min(box.left, x);
      box.right = Math.max(box.right, x + 1);
      box.top = Math.min(box.top, y);
      box.bottom = Math.max(box.bottom, y + 1);
    }
    add(false, height - bottom);
  }
  add(false, (width - right) * height);
  counts.push(run);
  if (area === 0) return { counts, area };
  return { counts, area, box: [box.left, box.top, box.right - box.left, box.bottom - box.top] };
}
