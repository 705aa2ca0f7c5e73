import { afterEach, describe, expect, it, vi } from 'vitest';
import { interruptible } from '../../src/cli/interrupt.js';
import { InterruptedError } from '../../src/errors.js';

afterEach(() => vi.restoreAllMocks());

/** A job that lasts until it is asked to stop. */
const endless = (signal: AbortSignal): Promise<never> =>
  new Promise((_, reject) =>
    signal.addEventListener('abort', () => setTimeout(() => reject(new InterruptedError()), 5)),
  );

describe('interruptible', () => {
  it('hands the result through and listens no longer than the job lasts', async () => {
    const before = process.listenerCount('SIGINT');
    const during = await interruptible(async () => process.listenerCount('SIGINT'));
    expect(during).toBe(before + 1);
    expect(process.listenerCount('SIGINT')).toBe(before);
    await expect(interruptible(() => Promise.reject(new Error('x')))).rejects.toThrow('x');
    expect(process.listenerCount('SIGINT')).toBe(before);
  });

  it.each(['SIGINT', 'SIGTERM'] as const)(
    'asks the job to stop at the first %s and ends the program at the second',
    async (name) => {
      const said = vi.spyOn(process.stderr, 'write').mockReturnValue(true);
      const exit = vi.spyOn(process, 'exit').mockReturnValue(undefined as never);
      const job = interruptible(endless);
      process.emit(name);
      expect(exit).not.toHaveBeenCalled();
      process.emit(name);
      expect(exit).toHaveBeenCalledExactlyOnceWith(130);
      expect(said).toHaveBeenCalledTimes(1);
      await expect(job).rejects.toThrow(InterruptedError);
    },
  );
});
