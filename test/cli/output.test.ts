import { WriteStream } from 'node:tty';
import { describe, expect, it } from 'vitest';
import { paintFor } from '../../src/cli/output.js';

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
