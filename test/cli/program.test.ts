import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { CHILD_TIMEOUT_MS, runInside, runProgram } from './run-program.js';

const VERSION = JSON.parse(readFileSync(new URL('../../package.json', import.meta.url), 'utf8')).version;

describe('foreglass', () => {
  it('prints its version', async () => {
    expect(await runInside(['--version'])).toEqual({ status: 0, stdout: `${VERSION}\n`, stderr: '' });
  });

  it('without a command prints the help on stderr', async () => {
    const { status, stdout, stderr } = await runInside([]);
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toMatch(/^Usage: foreglass COMMAND/);
  });

  it.each([['start'], ['render'], ['zones'], ['derive']])(
    'has a help for %s with units, defaults, an example and the common options',
    async (command) => {
      const { status, stdout, stderr } = await runInside([command, '--help']);
      expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
      expect(stdout).toMatch(new RegExp(`Example:\n  foreglass ${command} `));
      for (const option of ['--threads <number>', '--json [file]', '--quiet', '-h, --help'])
        expect(stdout).toContain(option);
      if (command !== 'start') expect(stdout).toContain('(default: ');
      if (['render', 'zones'].includes(command)) {
        for (const option of ['--rig <file>', '--f-number <N>', '--sensor-shift <um>'])
          expect(stdout).toContain(option);
      }
      for (const line of stdout.split('\n')) expect(line.length).toBeLessThanOrEqual(80);
    },
  );

  it.each([
    ['an unknown command', ['zoness'], "error: unknown command 'zoness'\n(Did you mean zones?)"],
    [
      'an unknown option',
      ['zones', '--rig', 'a', '--field', '1'],
      "error: unknown option '--field'\n(Did you mean --fields?)",
    ],
    ['a missing rig', ['zones'], "error: required option '--rig <file>' not specified"],
    ['a missing scene', ['render', '--rig', 'a'], "error: missing required argument 'SCENE'"],
    ['a missing value', ['zones', '--rig'], "error: option '--rig <file>' argument missing"],
    [
      'a word too many',
      ['zones', 'a', '--rig', 'b'],
      "error: too many arguments for 'zones'. Expected 0 arguments but got 1.",
    ],
  ])('refuses %s with status 2 and a hint', async (_, words, message) => {
    const { status, stdout, stderr } = await runInside(words);
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr.startsWith(`${message}\n`)).toBe(true);
    expect(stderr).toContain('--help');
    expect(stderr).not.toContain('    at ');
  });

  it('says so where an option took the argument that is missing', async () => {
    const { status, stderr } = await runInside(['render', '--json', 'scene.png', '--rig', 'a']);
    expect(status).toBe(2);
    expect(stderr).toContain("'scene.png' was read as the file of --json: put --json behind the other words");
  });

  it('tells all wrong options of a command at once', async () => {
    const words = [
      'render',
      'scene.png',
      '--rig',
      '',
      '--f-number',
      'f/4',
      '--oversample',
      '0',
      '--threads',
      '1.5',
      '--seed',
      '-1',
    ];
    const { status, stderr } = await runInside([...words, '--tolerance', '0', '--linear']);
    expect(status).toBe(2);
    expect(stderr.trimEnd().split('\n')).toEqual([
      "error: --f-number: not a number, found 'f/4'. Allowed: numbers above 0.",
      "error: --rig: the name of the file is empty, found ''.",
      "error: --oversample: out of range, found '0'. Allowed: whole numbers from 1 to 16.",
      "error: --tolerance: out of range, found '0'. Allowed: numbers above 0, up to 1.",
      "error: --seed: out of range, found '-1'. Allowed: whole numbers from 0 up.",
      "error: --threads: out of range, found '1.5'. Allowed: whole numbers from 1 to 64.",
      'error: --out: no picture is asked for. Name one with --out IMAGE, --raw FILE or --sheet FILE.',
      'error: --linear: goes with --out only; --raw is linear by itself.',
    ]);
  });
});

describe('the process', { timeout: CHILD_TIMEOUT_MS }, () => {
  it('ends with the status of the run', async () => {
    expect(await runProgram(['--version'])).toEqual({ status: 0, stdout: `${VERSION}\n`, stderr: '' });
    const { status, stdout, stderr } = await runProgram(['zoness']);
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toMatch(/^error: unknown command 'zoness'\n/);
  });

  it('ends quietly when nobody reads any more', async () => {
    const { status, stderr } = await runProgram(['render', '--help'], {}, (child) => child.stdout.destroy());
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
  });
});
