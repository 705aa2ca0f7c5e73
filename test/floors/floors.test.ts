import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { floorFaults } from './floor-faults.js';

const SRC = new URL('../../src/', import.meta.url).pathname;

/** A made-up tree. */
function faultsOf(tree: Record<string, string>): string[] {
  return floorFaults(new Map(Object.entries(tree)));
}

describe('the house', () => {
  it('has imports that go down only, in no circle, and packages in their homes', () => {
    const names = readdirSync(SRC, { recursive: true, encoding: 'utf8' }).filter((name) =>
      name.endsWith('.ts'),
    );
    const sources = new Map(
      names.sort().map((name) => [name.replaceAll('\\', '/'), readFileSync(join(SRC, name), 'utf8')]),
    );
    expect(sources.size).toBeGreaterThan(10); // the tree was found
    expect(floorFaults(sources)).toEqual([]);
  });
});

describe('the check of the floors', () => {
  const ERRORS = 'export class Fault {}';

  it('lets imports down and within a folder pass', () => {
    expect(
      faultsOf({
        'errors.ts': ERRORS,
        'numeric/a.ts':
          "import { Fault } from '../errors.js'; import fft from 'fft.js'; import { b } from './b.js';",
        'numeric/b.ts': "import { join } from 'node:path';",
        'cli/main.ts': "import { a } from '../numeric/a.js'; await import('commander');",
      }),
    ).toEqual([]);
  });

  it.each([
    ['an import', "import { run } from '../cli/run.js';"],
    ['an import of a type', "import type { Run } from '../cli/run.js';"],
    ['an import for its effect', "import '../cli/run.js';"],
    ['a re-export', "export { run } from '../cli/run.js';"],
    ['a re-export of all', "export * from '../cli/run.js';"],
    ['an import in code', "export const load = () => import('../cli/run.js');"],
    ['an import in a type', "export type Run = import('../cli/run.js').Run;"],
    ['a worker file', "new Worker(new URL('../cli/run.js', import.meta.url));"],
    [
      'an import behind a text that looks like a comment',
      "const a = '/*'; import { run } from '../cli/run.js';",
    ],
  ])('finds %s that goes up', (_, text) => {
    expect(faultsOf({ 'optics/a.ts': text, 'cli/run.ts': '' })).toEqual([
      'optics/a.ts: imports up: cli/run (floor 5) from floor 2',
    ]);
  });

  it('finds an import to a neighbour on the same floor', () => {
    expect(faultsOf({ 'fit/a.ts': "import { b } from '../dataset/b.js';", 'dataset/b.ts': '' })).toEqual([
      'fit/a.ts: imports sideways: dataset/b (floor 4) from floor 4',
    ]);
  });

  it('lets every part name the model of the rig', () => {
    expect(
      faultsOf({ 'prescription/a.ts': "import type { Rig } from '../optics/rig.js';", 'optics/rig.ts': '' }),
    ).toEqual([]);
  });

  it('finds a circle, also one closed by a type or by import()', () => {
    expect(
      faultsOf({
        'optics/a.ts': "import type { B } from './b.js';",
        'optics/b.ts': "export const c = () => import('./c.js');",
        'optics/c.ts': "export { a } from './a.js';",
      }),
    ).toEqual(['circle: optics/a -> optics/b -> optics/c -> optics/a']);
  });

  it('finds a file that imports itself', () => {
    expect(faultsOf({ 'optics/a.ts': "import { b } from './a.js';" })).toEqual([
      'circle: optics/a -> optics/a',
    ]);
  });

  it('reads AssemblyScript, whose imports have no ending', () => {
    const kernel =
      "import { radix4 } from './radix4';\n@inline\nexport function f(x: f32): f32 {\n  return x;\n}\n";
    expect(
      faultsOf({
        'kernels/a.ts': kernel,
        'kernels/radix4.ts': "import { x } from '../imaging/x';",
        'imaging/x.ts': '',
      }),
    ).toEqual(['kernels/radix4.ts: imports up: imaging/x (floor 3) from floor 1']);
  });

  it('refuses what it cannot judge', () => {
    expect(faultsOf({ 'optics/a.ts': 'const name = "./b.js"; await import(name);' })).toEqual([
      'optics/a.ts: has an import() whose target is not a plain text',
    ]);
    expect(faultsOf({ 'attic/a.ts': '' })).toEqual(["attic/a.ts: the folder 'attic' has no floor"]);
    expect(faultsOf({ 'optics/a.ts': "import { x } from '../../test/x.js';" })).toEqual([
      'optics/a.ts: imports ../test/x, outside of src',
    ]);
    expect(faultsOf({ 'optics/a.ts': 'import {' })[0]).toMatch(/^optics\/a\.ts: cannot be read: /);
  });

  it('finds a package away from its home and a module of Node in the optics', () => {
    expect(
      faultsOf({ 'imaging/a.ts': "import sharp from 'sharp';", 'cli/b.ts': "import * as z from 'zod/v4';" }),
    ).toEqual([
      'imaging/a.ts: imports sharp, which only files may do',
      'cli/b.ts: imports zod/v4, which only files may do',
    ]);
    expect(faultsOf({ 'optics/a.ts': "import { readFileSync } from 'node:fs';" })).toEqual([
      'optics/a.ts: imports node:fs, but optics is to run anywhere',
    ]);
  });
});
