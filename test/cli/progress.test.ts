import { Writable } from 'node:stream';
import { describe, expect, it } from 'vitest';
import { openProgressBar } from '../../src/cli/progress.js';

/** Stands for stderr and keeps what is written to it. */
class FakeStream extends Writable {
  text = '';
  columns = 80;
  constructor(readonly isTTY: boolean) {
    super();
  }
  override _write(chunk: Buffer, _encoding: BufferEncoding, done: () => void): void {
    this.text += chunk.toString();
    done();
  }
  cursorTo(): void {}
  moveCursor(): void {}
  clearLine(): void {}
}

async function textOf(isTTY: boolean, quiet: boolean): Promise<string> {
  const stream = new FakeStream(isTTY);
  const bar = await openProgressBar(quiet, stream as unknown as NodeJS.WriteStream);
  bar.show({ stage: 'psf', done: 1, total: 4 });
  bar.show({ stage: 'psf', done: 4, total: 4 });
  bar.show({ stage: 'blur', done: 5, total: 10 });
  bar.end();
  bar.end(); // a second one does nothing
  return stream.text;
}

describe('openProgressBar', () => {
  it('shows each stage on a terminal', async () => {
    const text = await textOf(true, false);
    expect(text).toMatch(/psf +#{8}\.{24} +25 %/);
    expect(text).toMatch(/blur +#{16}\.{16} +50 %/);
  });

  it('is silent away from a terminal and where it is asked to be', async () => {
    expect(await textOf(false, false)).toBe('');
    expect(await textOf(true, true)).toBe('');
  });
});
