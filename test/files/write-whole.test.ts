import fs from 'node:fs';
import { basename } from 'node:path';
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest';
import { InputError, InterruptedError, RunError } from '../../src/errors.js';
import {
  assertWritable,
  commitAll,
  removeTemporaries,
  stageFile,
  writeAllWhole,
  writeFailure,
  writeWhole,
} from '../../src/files/write-whole.js';
import { faultsOf, useFolder } from './packhouse.js';

const folder = useFolder();
const names = () => fs.readdirSync(folder.path('')).sort();
const read = (name: string) => fs.readFileSync(folder.path(name), 'utf8');
afterEach(() => vi.restoreAllMocks());

/** Makes every write of a file fail the way the disk would, after half of it is there. */
function failWrites(code: string): void {
  const open = fs.promises.open;
  vi.spyOn(fs.promises, 'open').mockImplementation(async (path, flags) => {
    const handle = await open(path, flags);
    vi.spyOn(handle, 'writeFile').mockImplementation(async (data) => {
      await handle.write((data as string).slice(0, (data as string).length / 2));
      throw Object.assign(new Error(`${code}: as if`), { code });
    });
    return handle;
  });
}

describe('writeWhole', () => {
  test('writes text and bytes, and nothing else stays', async () => {
    await writeWhole(folder.path('a.txt'), 'Öl\n');
    await writeWhole(folder.path('b.bin'), Uint8Array.from([0, 255, 10]));
    expect(read('a.txt')).toBe('Öl\n');
    expect([...fs.readFileSync(folder.path('b.bin'))]).toEqual([0, 255, 10]);
    expect(names()).toEqual(['a.txt', 'b.bin']);
  });

  test('replaces a file, longer or shorter, and keeps its permissions', async () => {
    const path = folder.write('a.txt', 'something long');
    fs.chmodSync(path, 0o640);
    await writeWhole(path, 'new');
    expect(read('a.txt')).toBe('new');
    expect(fs.statSync(path).mode & 0o777).toBe(0o640);
  });

  test('writes through a symbolic link', async () => {
    folder.write('a.txt', 'old');
    fs.symlinkSync('a.txt', folder.path('link.txt'));
    await writeWhole(folder.path('link.txt'), 'new');
    expect(read('a.txt')).toBe('new');
    expect(fs.lstatSync(folder.path('link.txt')).isSymbolicLink()).toBe(true);
  });

  test('readers see the old file or the new one, never a part', async () => {
    const path = folder.write('a.txt', 'old');
    const rename = vi.spyOn(fs, 'renameSync').mockImplementation((from, to) => {
      expect(fs.readFileSync(to, 'utf8')).toBe('old');
      expect(fs.readFileSync(from, 'utf8')).toBe('new');
    });
    await writeWhole(path, 'new');
    expect(rename).toHaveBeenCalledOnce();
  });

  test.each([
    ['ENOSPC', 'the disk is full. Make room and run again'],
    ['EDQUOT', 'your share of the disk is used up. Make room and run again'],
    ['EFBIG', 'the disk takes no file of this size'],
    ['EIO', 'the disk reports an error'],
    ['EWHAT', 'EWHAT: as if'],
  ])('%s: the old file stays, no temporary, a failed run', async (code, words) => {
    const path = folder.write('a.txt', 'old');
    failWrites(code);
    await expect(writeWhole(path, 'a new text')).rejects.toThrow(
      new RunError(`cannot write '${path}': ${words}`),
    );
    expect(names()).toEqual(['a.txt']);
    expect(read('a.txt')).toBe('old');
  });

  test.skipIf(!fs.existsSync('/dev/full'))('a full disk, as the system plays it', async () => {
    await expect(writeWhole('/dev/full', 'x')).rejects.toThrow(
      new RunError("cannot write '/dev/full': the disk is full. Make room and run again"),
    );
  });

  test.skipIf(!fs.existsSync('/dev/null'))('a device is written to, not replaced', async () => {
    await writeWhole('/dev/null', 'x');
    expect(fs.statSync('/dev/null').isCharacterDevice()).toBe(true);
  });
});

describe('writeAllWhole', () => {
  test('writes all', async () => {
    await writeAllWhole([
      { path: folder.path('a'), data: '1' },
      { path: folder.path('b'), data: '2' },
    ]);
    expect([read('a'), read('b'), names()]).toEqual(['1', '2', ['a', 'b']]);
  });

  test('or none, when the last cannot be written', async () => {
    const outputs = [
      { path: folder.path('a'), data: '1' },
      { path: folder.path('no/b'), data: '2' },
    ];
    await expect(writeAllWhole(outputs)).rejects.toThrow(InputError);
    expect(names()).toEqual([]);
  });

  test('refuses two outputs of one name, also by a link', async () => {
    folder.write('a', 'old');
    fs.symlinkSync('a', folder.path('b'));
    const [a, b] = [folder.path('a'), folder.path('b')];
    for (const path of [a, b]) {
      const failure = await writeAllWhole([
        { path: a, data: '1' },
        { path, data: '2' },
      ]).catch((error: unknown) => error);
      expect((failure as InputError).faults).toEqual([
        { file: path, message: 'two outputs have this name', advice: 'Choose another for one of them.' },
      ]);
    }
    expect(read('a')).toBe('old');
  });
});

describe('stageFile', () => {
  test('the temporary lies in the same folder and has the ending of the file', () => {
    const file = stageFile(folder.path('picture.png'));
    expect(file.temporary).toMatch(/\.png$/);
    expect(names()).toEqual([basename(file.temporary)]);
    fs.writeFileSync(file.temporary, 'by someone else');
    commitAll([file]);
    file.discard();
    expect(names()).toEqual(['picture.png']);
    expect(read('picture.png')).toBe('by someone else');
  });

  test('what is discarded leaves nothing', () => {
    stageFile(folder.path('a')).discard();
    expect(names()).toEqual([]);
  });

  test('an interrupt removes every temporary at once, and nothing takes its name afterwards', async () => {
    folder.write('a', 'old');
    const files = [stageFile(folder.path('a')), stageFile(folder.path('b'))];
    await files[0].write('new');
    removeTemporaries();
    expect(names()).toEqual(['a']);
    expect(() => commitAll(files)).toThrow(InterruptedError);
    await expect(files[1].write('new')).rejects.toThrow(InterruptedError);
    expect(names()).toEqual(['a']);
    expect(read('a')).toBe('old');
  });
});

test('temporaries go when the process ends by itself, too', () => {
  stageFile(folder.path('a')).discard();
  expect(process.listeners('exit')).toContain(removeTemporaries);
});

describe('assertWritable', () => {
  test('leaves nothing behind where all is well', () => {
    folder.write('old.txt', 'old');
    assertWritable(folder.path('new.txt'));
    assertWritable(folder.path('old.txt'));
    expect(names()).toEqual(['old.txt']);
    expect(read('old.txt')).toBe('old');
  });

  test('a folder that does not exist', () => {
    const path = folder.path('no/a.png');
    expect(faultsOf(() => assertWritable(path, '--out'))).toEqual([
      {
        file: path,
        key: '--out',
        message: `the folder '${folder.path('no')}' does not exist`,
        advice: 'Make it first, or choose another.',
      },
    ]);
  });

  test.each(['', '/'])('a folder as the file, ending in %j', (end) => {
    fs.mkdirSync(folder.path('sub'));
    const path = `${folder.path('sub')}${end}`;
    const advice = `Name a file in it, such as '${folder.path('sub')}/output.png'.`;
    expect(faultsOf(() => assertWritable(path))).toEqual([
      { file: path, message: 'is a folder, not a file', advice },
    ]);
  });

  test('a name that ends like a folder', () => {
    expect(faultsOf(() => assertWritable(folder.path('new/')))).toMatchObject([
      { message: 'is a folder, not a file' },
    ]);
  });

  test('a file where a folder should be', () => {
    const path = `${folder.write('a', 'x')}/b`;
    expect(faultsOf(() => assertWritable(path))).toMatchObject([
      { message: `'${folder.path('a')}' is a file, not a folder` },
    ]);
    expect(faultsOf(() => assertWritable(`${path}/c`))).toMatchObject([{ file: `${path}/c` }]);
  });

  test('no name', () => {
    expect(faultsOf(() => assertWritable(''))).toEqual([{ message: 'no output file is named' }]);
  });

  test('a name that is too long', () => {
    expect(faultsOf(() => assertWritable(folder.path('a'.repeat(300))))).toMatchObject([
      { message: 'cannot be written: the name is too long' },
    ]);
  });

  describe('without the right to write', () => {
    const isRoot = process.getuid?.() === 0; // root may write anywhere
    beforeEach(() => {
      fs.mkdirSync(folder.path('locked'));
      fs.writeFileSync(folder.path('locked/a'), 'x');
      fs.chmodSync(folder.path('locked/a'), 0o444);
      fs.chmodSync(folder.path('locked'), 0o555);
    });
    afterEach(() => fs.chmodSync(folder.path('locked'), 0o755));

    test.skipIf(isRoot)('a folder', () => {
      expect(faultsOf(() => assertWritable(folder.path('locked/b')))).toMatchObject([
        { message: 'cannot be written: permission denied' },
      ]);
    });

    test.skipIf(isRoot)('a file that is protected in a folder that is not', () => {
      fs.chmodSync(folder.path('locked'), 0o755);
      expect(faultsOf(() => assertWritable(folder.path('locked/a')))).toMatchObject([
        { message: 'cannot be written: permission denied' },
      ]);
    });

    test.skipIf(!isRoot || !fs.existsSync('/proc/self'))(
      'a folder that takes no files, not even from root',
      () => {
        expect(faultsOf(() => assertWritable('/proc/a.png'))).toMatchObject([
          { message: 'cannot be written: the folder takes no new files' },
        ]);
      },
    );
  });

  test.each([
    ['EACCES', 'cannot be written: permission denied'],
    ['EPERM', 'cannot be written: permission denied'],
    ['EROFS', 'cannot be written: the disk is read-only'],
    ['EISDIR', 'is a folder, not a file'],
    ['ENOTDIR', 'cannot be written: a part of the path is a file, not a folder'],
  ])('%s is for the user to mend', (code, message) => {
    const failure = writeFailure('a.png', Object.assign(new Error(code), { code }));
    expect((failure as InputError).faults).toEqual([{ file: 'a.png', message }]);
  });
});
