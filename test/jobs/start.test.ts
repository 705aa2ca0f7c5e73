import {
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { InputError, InterruptedError } from '../../src/errors.js';
import { start, withSchemaBeside } from '../../src/jobs/start.js';

let base: string;
let sources: { templates: string; schemas: string };

/** Small stand-ins for the templates and schemas of the package. */
beforeEach(() => {
  base = mkdtempSync(join(tmpdir(), 'start-'));
  sources = { templates: join(base, 'templates'), schemas: join(base, 'schemas') };
  mkdirSync(join(sources.templates, 'parts'), { recursive: true });
  mkdirSync(sources.schemas);
  const comment = '# yaml-language-server: $schema=../../dist/schemas/rig.schema.json';
  writeFileSync(join(sources.templates, 'hall.rig.yaml'), `${comment}\n\nlens: {}\n`);
  writeFileSync(join(sources.templates, 'parts', 'lens.yaml'), `${comment}\nname: x\n`);
  writeFileSync(join(sources.templates, 'scene.png'), Buffer.from([0x89, 0x50, 0xff, 0x0d, 0x0a]));
  writeFileSync(join(sources.schemas, 'rig.schema.json'), '{}');
});

afterEach(() => rmSync(base, { recursive: true, force: true }));

const ALL = ['.schemas/rig.schema.json', 'hall.rig.yaml', 'parts/lens.yaml', 'scene.png'];

function filesIn(folder: string): string[] {
  const entries = readdirSync(folder, { recursive: true, withFileTypes: true });
  return entries
    .filter((entry) => entry.isFile())
    .map(({ name }) => name)
    .sort();
}

describe('start', () => {
  it('copies templates and schemas and points the files at the schemas beside them', async () => {
    const folder = join(base, 'new', 'hall');
    expect(await start({ folder, sources })).toEqual({ folder, files: ALL });
    expect(readFileSync(join(folder, 'hall.rig.yaml'), 'utf8')).toBe(
      '# yaml-language-server: $schema=.schemas/rig.schema.json\n\nlens: {}\n',
    );
    expect(readFileSync(join(folder, 'parts/lens.yaml'), 'utf8')).toBe(
      '# yaml-language-server: $schema=../.schemas/rig.schema.json\nname: x\n',
    );
    expect(readFileSync(join(folder, 'scene.png'))).toEqual(
      readFileSync(join(sources.templates, 'scene.png')),
    );
  });

  it('leaves the other files of a folder alone', async () => {
    const folder = join(base, 'hall');
    mkdirSync(folder);
    writeFileSync(join(folder, 'notes.txt'), 'mine');
    await start({ folder, sources });
    expect(readFileSync(join(folder, 'notes.txt'), 'utf8')).toBe('mine');
  });

  it('names every file in the way and writes nothing', async () => {
    const folder = join(base, 'hall');
    mkdirSync(join(folder, 'parts'), { recursive: true });
    writeFileSync(join(folder, 'parts/lens.yaml'), 'mine');
    writeFileSync(join(folder, 'scene.png'), 'mine');
    const error = await start({ folder, sources }).catch((caught: unknown) => caught);
    expect(error).toBeInstanceOf(InputError);
    expect((error as InputError).faults.map(({ file }) => file).sort()).toEqual([
      join(folder, 'parts/lens.yaml'),
      join(folder, 'scene.png'),
    ]);
    expect(filesIn(folder)).toEqual(['lens.yaml', 'scene.png']);
    expect(readFileSync(join(folder, 'scene.png'), 'utf8')).toBe('mine');
  });

  it('refuses a file in place of a folder', async () => {
    writeFileSync(join(base, 'hall'), 'mine');
    const message = /: a file stands where a folder is needed\. Choose another folder\.$/;
    await expect(start({ folder: join(base, 'hall'), sources })).rejects.toThrow(message);
    await expect(start({ folder: join(base, 'hall', 'deeper'), sources })).rejects.toThrow(message);
    expect(readFileSync(join(base, 'hall'), 'utf8')).toBe('mine');

    const folder = join(base, 'other');
    mkdirSync(folder);
    writeFileSync(join(folder, 'parts'), 'mine');
    await expect(start({ folder, sources })).rejects.toThrow(message);
    expect(filesIn(folder)).toEqual(['parts']);
  });

  it('takes away what it made when the rest cannot be made', async () => {
    // Two sources of one file: the second one finds it there, as it would find a file that came up after the check.
    mkdirSync(join(sources.templates, '.schemas'));
    writeFileSync(join(sources.templates, '.schemas', 'rig.schema.json'), '{}');
    const folder = join(base, 'deep', 'hall');
    await expect(start({ folder, sources })).rejects.toMatchObject({ code: 'EEXIST' });
    expect(existsSync(join(base, 'deep'))).toBe(false);
  });
});

describe('start that is interrupted', () => {
  it('takes away what it made', async () => {
    const folder = join(base, 'hall');
    let asked = 0;
    const signal = {
      get aborted() {
        return ++asked > 2;
      },
    } as AbortSignal;
    await expect(start({ folder, sources, signal })).rejects.toThrow(InterruptedError);
    expect(asked).toBe(3);
    expect(existsSync(folder)).toBe(false);
  });
});

describe('withSchemaBeside', () => {
  it('leaves a file without the line as it is', () => {
    expect(withSchemaBeside('lens: {}\n', '.schemas')).toBe('lens: {}\n');
  });
});
