import fs from 'node:fs';
import { afterEach, describe, expect, test, vi } from 'vitest';
import { MAX_TEXT_BYTES, readInputText } from '../../src/files/input-text.js';
import { faultsOf, useFolder } from './packhouse.js';

const folder = useFolder();
afterEach(() => vi.restoreAllMocks());

test('a text comes back as it is, without its byte order mark', () => {
  expect(readInputText(folder.write('a.yaml', '\uFEFFname: Öl\r\n'))).toBe('name: Öl\r\n');
});

test('the largest size is still read', () => {
  const text = '#'.repeat(MAX_TEXT_BYTES);
  expect(readInputText(folder.write('a.yaml', text))).toBe(text);
});

describe('refused:', () => {
  test('a missing file, with the names that are near', () => {
    folder.write('packhouse.rig.yaml', 'x');
    folder.write('belt.task.yaml', 'x');
    const path = folder.path('packhose.rig.yaml');
    expect(faultsOf(() => readInputText(path))).toEqual([
      {
        file: path,
        message: 'there is no such file',
        advice: `Did you mean '${folder.path('packhouse.rig.yaml')}'?`,
      },
    ]);
  });

  test('a missing file without a near name', () => {
    const [fault] = faultsOf(() => readInputText(folder.path('packhouse.rig.yaml')));
    expect(fault.advice).toBeUndefined();
  });

  test('a missing folder', () => {
    const [fault] = faultsOf(() => readInputText(folder.path('no/rig.yaml')));
    expect(fault).toMatchObject({
      message: 'there is no such file',
      advice: `The folder '${folder.path('no')}' does not exist.`,
    });
  });

  test('a folder, with the files in it', () => {
    folder.write('b.yaml', 'x');
    folder.write('a.json', '{}');
    folder.write('c.png', 'x');
    expect(faultsOf(() => readInputText(folder.path('')))).toMatchObject([
      { message: 'is a folder, not a file', advice: 'Name a file in it: a.json, b.yaml.' },
    ]);
  });

  test('an empty folder', () => {
    expect(faultsOf(() => readInputText(folder.path('')))).toMatchObject([{ advice: 'Name a file.' }]);
  });

  test('a file that may not be read', () => {
    const path = folder.write('a.yaml', 'x');
    vi.spyOn(fs, 'openSync').mockImplementation(() => {
      throw Object.assign(new Error('no'), { code: 'EACCES' });
    });
    expect(faultsOf(() => readInputText(path))).toEqual([
      { file: path, message: 'cannot be read: permission denied' },
    ]);
  });

  test('a path through a file', () => {
    const path = `${folder.write('a.yaml', 'x')}/b.yaml`;
    expect(faultsOf(() => readInputText(path))).toEqual([
      { file: path, message: 'cannot be read (ENOTDIR)' },
    ]);
  });

  test('no name at all', () => {
    expect(faultsOf(() => readInputText(''))).toEqual([{ message: 'no file is named' }]);
  });

  test('a name with a zero byte', () => {
    const [fault] = faultsOf(() => readInputText('a\0b'));
    expect(fault.message).toBe('cannot be read (ERR_INVALID_ARG_VALUE)');
  });

  test.each([
    ['nothing in it', ''],
    ['only blanks', ' \n\t\n'],
  ])('%s', (_, text) => {
    const path = folder.write('a.yaml', text);
    expect(faultsOf(() => readInputText(path))).toEqual([{ file: path, message: 'is empty' }]);
  });

  test.each([
    ['Latin-1', [0x6e, 0x3a, 0x20, 0xd6, 0x6c]],
    ['UTF-16', [0xff, 0xfe, 0x6e, 0x00, 0x3a, 0x00]],
    ['a picture', [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]],
    ['zero bytes', [0x6e, 0x00, 0x3a]],
  ])('%s', (_, bytes) => {
    const path = folder.write('a.yaml', Uint8Array.from(bytes));
    const [fault] = faultsOf(() => readInputText(path));
    expect(fault).toMatchObject({
      file: path,
      message: 'is not a text file in UTF-8',
      advice: 'Save it as UTF-8.',
    });
  });

  test('one byte too many', () => {
    const path = folder.write('a.yaml', '#'.repeat(MAX_TEXT_BYTES + 1));
    expect(faultsOf(() => readInputText(path))).toMatchObject([
      { file: path, message: 'is too large for a file of this kind', allowed: 'up to 512 KiB' },
    ]);
  });

  test.skipIf(!fs.existsSync('/dev/zero'))('a device without an end', () => {
    const [fault] = faultsOf(() => readInputText('/dev/zero'));
    expect(fault.message).toBe('is too large for a file of this kind');
  });
});
