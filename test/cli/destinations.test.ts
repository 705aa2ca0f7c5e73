import { describe, expect, it } from 'vitest';
import {
  checkOutputs,
  type Destination,
  fileDestination,
  readDestination,
} from '../../src/cli/destinations.js';
import { OptionValues } from '../../src/cli/option-values.js';
import type { InputError } from '../../src/errors.js';

/** The options that have a fault. */
function faultyKeys(values: OptionValues): (string | undefined)[] {
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
      const values = new OptionValues();
      readDestination(values, '--json', path);
      expect(faultyKeys(values)).toEqual(['--json']);
    },
  );
});

describe('checkOutputs', () => {
  const file = fileDestination;
  const check = async (
    inputs: Record<string, string>,
    outputs: Record<string, Destination>,
  ): Promise<string[]> => {
    const values = new OptionValues();
    await checkOutputs(values, inputs, outputs);
    return faultyKeys(values).map(String);
  };

  it('lets one result have stdout, not two', async () => {
    expect(await check({}, { '--json': { kind: 'stdout' }, '--csv': file('a.csv') })).toEqual([]);
    expect(await check({}, { '--json': { kind: 'stdout' }, '--csv': { kind: 'stdout' } })).toEqual([
      '--json and --csv',
    ]);
  });

  it('finds an output on an input and two outputs on one file, however the path is written', async () => {
    const inputs = { SCENE: 'scene.png', '--rig': 'a.rig.yaml' };
    expect(await check(inputs, { '--out': file('./x/../scene.png') })).toEqual(['--out']);
    expect(await check(inputs, { '--out': file('b.png'), '--raw': file('./b.png') })).toEqual(['--raw']);
    expect(await check(inputs, { '--out': file('b.png'), '--raw': file(undefined) })).toEqual([]);
  });

  it('names the option of each output that cannot be written', async () => {
    expect(
      await check({}, { '--out': file('no/such/folder/a.png'), '--raw': file('.'), '--json': file(' ') }),
    ).toEqual(['--out', '--raw']);
  });
});
