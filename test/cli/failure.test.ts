import { describe, expect, it } from 'vitest';
import { describeFailure } from '../../src/cli/failure.js';
import { InputError, InterruptedError, RunError } from '../../src/errors.js';

function systemError(code: string, path?: string): Error {
  return Object.assign(new Error(code), { code, path });
}

describe('describeFailure', () => {
  it('says each fault of the input on a line of its own', () => {
    const error = new InputError([
      {
        file: 'a.rig.yaml',
        line: 3,
        column: 5,
        key: 'lens.f_number',
        message: 'out of range',
        found: '-1',
        allowed: 'above 0',
      },
      { key: '--seed', message: 'not a number', found: "'x'" },
    ]);
    expect(describeFailure(error)).toEqual({
      status: 2,
      text: "error: a.rig.yaml:3:5: lens.f_number: out of range, found -1. Allowed: above 0.\nerror: --seed: not a number, found 'x'.",
    });
  });

  it.each([
    [new RunError('the disk is full'), 3, 'error: the disk is full.'],
    [new RunError('no memory. Use less.'), 3, 'error: no memory. Use less.'],
    [new InterruptedError(), 130, 'interrupted'],
    [new DOMException('stop', 'AbortError'), 130, 'interrupted'],
    [systemError('ENOENT', 'x.png'), 2, 'error: x.png: no such file or folder.'],
    [systemError('EACCES', 'x.png'), 2, 'error: x.png: not allowed to read or write here.'],
    [systemError('ENOSPC'), 3, 'error: the disk is full. Make room and run the command again.'],
    [
      systemError('ERR_WORKER_OUT_OF_MEMORY'),
      3,
      'error: out of memory. Try a smaller --oversample or fewer --threads.',
    ],
  ])('maps %o', (error, status, text) => {
    expect(describeFailure(error)).toEqual({ status, text });
  });

  it('knows an array that cannot be had', () => {
    let refused: unknown;
    try {
      new Float64Array(2 ** 53);
    } catch (error) {
      refused = error;
    }
    expect(describeFailure(refused)).toMatchObject({
      status: 3,
      text: expect.stringMatching(/^error: out of memory/),
    });
  });

  it('calls everything else a fault of the program, with the stack on demand only', () => {
    const bug = new TypeError('x is not a function');
    expect(describeFailure(bug).status).toBe(3);
    expect(describeFailure(bug).text).toMatch(
      /^internal error: TypeError: x is not a function\nThis is a fault of the program/,
    );
    expect(describeFailure(bug).text).not.toContain('failure.test');
    expect(describeFailure(bug, true).text).toContain('failure.test');
    expect(describeFailure('thrown text').text).toMatch(/^internal error: thrown text\n/);
    expect(describeFailure(undefined).text).toMatch(/^internal error: undefined\n/);
  });
});
