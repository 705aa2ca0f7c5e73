/** Pictures formed from planes in memory, for tests of the imaging: workers are kept between the tests of a file. */
import { afterAll, beforeAll, vi } from 'vitest';
import { Crew } from '../../src/imaging/crew.js';
import { type FormedImage, formImage, prepareBands } from '../../src/imaging/form-image.js';
import type { Engine } from '../../src/imaging/work.js';
import type { Rig } from '../../src/optics/rig.js';

export interface FormOptions {
  oversample?: number;
  /** Largest blending error. Default 0.004. */
  blend?: number;
  /** Largest share of light outside the kernel. Default 0.005. */
  kernel?: number;
}

/** Time that a test may take on a busy machine; on an idle one each takes a second or two at most. */
export const BUSY_MS = 60_000;

export interface Former {
  /** The crew, for tests of single jobs. */
  crew(): Crew;
  /** Form a picture; the planes returned are copies. */
  form(rig: Rig, scene: readonly Float32Array[], options?: FormOptions): Promise<FormedImage>;
}

/** Workers for the tests of the file, ended after the last one. */
export function useFormer(threads = 2, engine: Engine = 'simd'): Former {
  vi.setConfig({ testTimeout: BUSY_MS });
  let crew: Crew | undefined;
  beforeAll(() => {
    crew = new Crew(threads, engine);
  });
  afterAll(() => crew?.close());
  const started = () => {
    if (crew === undefined) throw new Error('the workers start with the first test');
    return crew;
  };
  return { crew: started, form: (rig, scene, options) => formWith(started(), rig, scene, options) };
}

/** Form a picture with workers at hand. The planes returned are copies; the crew's memory is given back. */
export async function formWith(
  crew: Crew,
  rig: Rig,
  scene: readonly Float32Array[],
  { oversample = 1, blend = 0.004, kernel = 0.005 }: FormOptions = {},
): Promise<FormedImage> {
  const { arena } = crew;
  const mark = arena.mark();
  try {
    const bands = await prepareBands(crew, rig, oversample, { blend, kernel });
    const planes = scene.map((plane) => {
      const shared = arena.floats(arena.allocateFloats(plane.length), plane.length);
      shared.set(plane);
      return shared;
    });
    const formed = await formImage(crew, rig, planes, oversample, bands);
    return { ...formed, planes: formed.planes.map((plane) => Float32Array.from(plane)) };
  } finally {
    arena.release(mark);
  }
}
