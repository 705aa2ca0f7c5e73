import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { CHILD_TIMEOUT_MS, type Ended, runInside, runProgram } from './run-program.js';

// The built program throughout: its build has the schemas, and it knows where the files of the package lie.
let base: string;
let hall: string;
let first: Ended;
let files: string[];
beforeAll(async () => {
  base = mkdtempSync(join(tmpdir(), 'start-'));
  hall = join(base, 'hall');
  first = await runProgram(['start', 'hall'], { cwd: base });
  files = JSON.parse((await runProgram(['start', 'other', '--json'], { cwd: base })).stdout).files;
}, CHILD_TIMEOUT_MS);
afterAll(() => rmSync(base, { recursive: true, force: true }));

describe('foreglass start', { timeout: CHILD_TIMEOUT_MS }, () => {
  it('makes rigs, a task, a recipe, scenes and schemas, and says what to do next', () => {
    expect(first).toMatchObject({ status: 0, stderr: '' });
    expect(first.stdout).toMatch(/^Made in hall:\n/);
    for (const ending of ['.rig.yaml', '.task.yaml', '.recipe.yaml', '.png', '.schema.json']) {
      expect(files.filter((name) => name.endsWith(ending)).length, ending).toBeGreaterThan(0);
    }
    for (const name of files) expect(existsSync(join(hall, name)), name).toBe(true);
  });

  it('points each YAML file at a schema that is there', () => {
    for (const name of files.filter((file) => file.endsWith('.yaml'))) {
      const text = readFileSync(join(hall, name), 'utf8');
      const schema = /^# yaml-language-server: \$schema=(.*)$/m.exec(text)?.[1] ?? 'none';
      expect(schema, name).toMatch(/^\.schemas\/\w+\.schema\.json$/);
      expect(existsSync(join(hall, dirname(name), schema)), schema).toBe(true);
    }
  });

  it('offers command lines that work in the folder', async () => {
    const [, zones] = /^ {2}foreglass (zones .*)$/m.exec(first.stdout)!;
    const { status, stdout } = await runProgram(zones.split(' '), { cwd: hall });
    expect(status).toBe(0);
    expect(stdout).toContain('lp/mm');
    const [, render] = /^ {2}foreglass (render .*)$/m.exec(first.stdout)!;
    const [, scene, , rig] = render.split(' ');
    expect(files).toEqual(expect.arrayContaining([scene, rig]));
  });

  it('makes the files that the examples of the help name', async () => {
    const helps = await Promise.all(
      [[], ['zones'], ['render']].map((words) => runInside([...words, '--help'])),
    );
    const names = helps.flatMap(({ stdout }) => stdout.match(/\S+\.rig\.yaml|\S+\/\S+\.png/g) ?? []);
    expect(names.length).toBeGreaterThan(2);
    expect(files).toEqual(expect.arrayContaining(names));
  });

  it('never writes over a file, and names those in the way', async () => {
    const { status, stdout, stderr } = await runProgram(['start', 'hall'], { cwd: base });
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    for (const name of files)
      expect(stderr).toContain(`error: ${join('hall', name)}: is there already and stays as it is.`);
  });
});
