import { WriteStream } from 'node:tty';
import { describe, expect, it } from 'vitest';
import { OptionValues } from '../../src/cli/option-values.js';
import {
  paintFor,
  readDestination,
  refuseClashes,
  refuseTwoOnStdout,
  refuseUnwritable,
} from '../../src/cli/results.js';
import type { InputError } from '../../src/errors.js';

function keysOfFaults(read: (values: OptionValues) => unknown): (string | undefined)[] {
  const values = new OptionValues();
  read(values);
  try {
    values.check();
  } catch (error) {
    return (error as InputError).faults.map(({ key }) => key);
  }
  return [];
}

describe('readDestination', () => {
  it('tells stdout from a file', () => {
    const values = new OptionValues();
    expect(readDestination(values, '--json', undefined)).toEqual({ kind: 'none' });
    expect(readDestination(values, '--json', true)).toEqual({ kind: 'stdout' });
    expect(readDestination(values, '--json', 'a.yaml')).toEqual({ kind: 'file', path: 'a.yaml' });
    expect(() => values.check()).not.toThrow();
  });

  it.each(['scene.png', 'SCENE.TIF', 'a.webp'])(
    'refuses %s, which is a scene that came too early',
    (path) => {
      expect(keysOfFaults((values) => readDestination(values, '--json', path))).toEqual(['--json']);
    },
  );
});

describe('refuseTwoOnStdout', () => {
  it('lets one result have stdout', () => {
    const values = new OptionValues();
    refuseTwoOnStdout(values, { '--json': { kind: 'stdout' }, '--csv': { kind: 'file', path: 'a.csv' } });
    expect(() => values.check()).not.toThrow();
    refuseTwoOnStdout(values, { '--json': { kind: 'stdout' }, '--csv': { kind: 'stdout' } });
    expect(() => values.check()).toThrow(
      '--json and --csv: both would go to stdout. Name a file, such as --csv FILE.',
    );
  });
});

describe('refuseClashes', () => {
  it('finds an output on an input and two outputs on one file, however the path is written', () => {
    const inputs = { SCENE: 'scene.png', '--rig': 'a.rig.yaml' };
    expect(keysOfFaults((values) => refuseClashes(values, inputs, { '--out': './x/../scene.png' }))).toEqual([
      '--out',
    ]);
    expect(
      keysOfFaults((values) => refuseClashes(values, inputs, { '--out': 'b.png', '--raw': 'b.png' })),
    ).toEqual(['--raw']);
    expect(
      keysOfFaults((values) => refuseClashes(values, inputs, { '--out': 'b.png', '--raw': undefined })),
    ).toEqual([]);
  });
});

describe('refuseUnwritable', () => {
  it('names the option of each output that cannot be written', async () => {
    const values = new OptionValues();
    await refuseUnwritable(values, {
      '--out': 'no/such/folder/a.png',
      '--raw': '.',
      '--record': undefined,
      '--json': ' ',
    });
    expect(() => values.check()).toThrow(/--out: .*does not exist[\s\S]*--raw: is a folder/);
  });
});

describe('paintFor', () => {
  it.each([
    ['a terminal with colours', { isTTY: true, hasColors: () => true }, true],
    ['a terminal without them, or where NO_COLOR is set', { isTTY: true, hasColors: () => false }, false],
    ['a pipe or a file, which knows nothing of colours', {}, false],
  ])('on %s', async (_, stream, isColoured) => {
    const { strong } = await paintFor(stream as NodeJS.WriteStream);
    expect(strong('a')).toBe(isColoured ? '\x1b[1ma\x1b[22m' : 'a');
  });

  it('leaves NO_COLOR to the stream of Node, which heeds it', () => {
    const stream = Object.create(WriteStream.prototype) as WriteStream;
    expect(stream.hasColors(16, { TERM: 'xterm-256color' })).toBe(true);
    expect(stream.hasColors(16, { TERM: 'xterm-256color', NO_COLOR: '1' })).toBe(false);
  });
});
