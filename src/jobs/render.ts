/** `render`: what the camera will record of a scene. */

import { checkOutputs, type RenderOptions, settle, settleCrew } from './render-options.js';
import type { RenderResult } from './render-record.js';
import { Renderer } from './renderer.js';

export type { RenderOptions } from './render-options.js';
export type { RenderRecord, RenderResult } from './render-record.js';

/** Render a scene through a rig.
 *
 * @returns the picture and how it was made
 * @throws {InputError}       before any work: options out of range, files that cannot be written, a scene that cannot be read, a lens whose
 *                            distortion folds or whose wavefront is too steep to sample
 * @throws {RunError}         out of memory, disk full
 * @throws {InterruptedError} when `signal` fires; nothing is half-written
 */
export async function render(options: RenderOptions): Promise<RenderResult> {
  settle(options);
  settleCrew(options);
  checkOutputs(options); // before threads are started
  const renderer = new Renderer(options);
  try {
    return await renderer.renderInPlace(options);
  } finally {
    await renderer.close();
  }
}
