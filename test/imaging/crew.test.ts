import { execFile } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { InterruptedError } from '../../src/errors.js';
import { Crew } from '../../src/imaging/crew.js';
import { extentSteps } from '../../src/imaging/kernel-size.js';
import type { Job } from '../../src/imaging/work.js';
import { energyBySquareRing } from '../../src/optics/psf.js';
import { sampleRig } from '../optics/samples.js';
import { BUSY_MS } from '../support/form.js';

vi.setConfig({ testTimeout: BUSY_MS });

let crew: Crew;
beforeAll(() => {
  crew = new Crew(2);
});
afterAll(() => crew.close());

const RIG = sampleRig({ waves: { W040: 0.5, W131: 2 }, lens: { fNumber: 2.8 } });
const BAND = RIG.camera.bands[0];

function extents(places: [number, number][], bandIndex = 0): Job {
  return { kind: 'extent', setup: { rig: RIG, bandIndex, oversample: 1 }, places, tolerance: 0.02 };
}

describe('Crew', () => {
  it('gives the number of each task in its place, whoever did it', async () => {
    const places = [0, 300, 700, 1100, 1500, 1999].map((x): [number, number] => [x, x / 2]);
    const found = await crew.run(extents(places));
    const expected = places.map(([x, y]) => extentSteps(energyBySquareRing, RIG, BAND, 1, x, y, 0.02));
    // the workers compute in float32
    for (const [task, extent] of expected.entries()) expect(found[task]).toBeCloseTo(extent, 3);
    expect(new Set(expected).size).toBeGreaterThan(2); // or order would not show
  });

  it('does a job without tasks', async () => {
    await expect(crew.run(extents([]))).resolves.toBeDefined();
  });

  it('hands on the error of a worker, and goes on with the next job', async () => {
    await expect(crew.run(extents([[0, 0]], 7))).rejects.toThrow(/undefined/); // there is no band 7
    await expect(crew.run(extents([[0, 0]]))).resolves.toBeDefined();
  });

  it('says how far it is, and at the end that it is done', async () => {
    const heard: [number, number][] = [];
    const places = Array.from({ length: 40 }, (_, i): [number, number] => [i, i]);
    await crew.run(extents(places), { onProgress: (done, total) => heard.push([done, total]) });
    expect(heard.at(-1)).toEqual([40, 40]);
    for (let i = 1; i < heard.length; i++) expect(heard[i][0]).toBeGreaterThanOrEqual(heard[i - 1][0]);
  });

  it('stops after the tasks at hand when interrupted, and can be used again', async () => {
    const places = Array.from({ length: 5000 }, (_, i): [number, number] => [i % 2000, i % 1500]);
    const stop = new AbortController();
    let done = 0;
    const running = crew.run(extents(places), {
      signal: stop.signal,
      onProgress: (now) => {
        done = now;
      },
    });
    setTimeout(() => stop.abort(), 150);
    await expect(running).rejects.toThrow(InterruptedError);
    expect(done).toBeLessThan(5000);
    await expect(crew.run(extents([[0, 0]]))).resolves.toBeDefined();
  });

  it('gives its work space back after every job, done or not', async () => {
    const mark = crew.arena.mark();
    await crew.run(extents([[0, 0]]));
    await crew.run(extents([[0, 0]], 7)).catch(() => undefined);
    await crew.run(extents([[0, 0]]), { signal: AbortSignal.abort() }).catch(() => undefined);
    expect(crew.arena.mark()).toBe(mark);
  });

  it('lets the process end once it is closed, interrupted or not', async () => {
    const script = `
      import { Crew } from '${new URL('../../dist/imaging/crew.js', import.meta.url)}';
      const crew = new Crew(2);
      const places = Array.from({ length: 5000 }, (_, i) => [i % 2000, i % 1500]);
      const job = { kind: 'extent', setup: { rig: ${JSON.stringify(RIG)}, bandIndex: 0, oversample: 1 }, places, tolerance: 0.02 };
      const stop = new AbortController();
      setTimeout(() => stop.abort(), 100);
      try {
        await crew.run(job, { signal: stop.signal });
      } catch (error) {
        console.log(error.name);
      } finally {
        await crew.close();
      }`;
    const folder = mkdtempSync(join(tmpdir(), 'crew-'));
    try {
      writeFileSync(join(folder, 'interrupted.mjs'), script);
      // a process that does not end by itself is killed, and the call rejects
      const { stdout } = await promisify(execFile)(process.execPath, [join(folder, 'interrupted.mjs')], {
        timeout: 30_000,
      });
      expect(stdout).toBe('InterruptedError\n');
    } finally {
      rmSync(folder, { recursive: true });
    }
  }, 40_000);
});
