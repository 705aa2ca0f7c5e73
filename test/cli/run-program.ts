/** Runs of the command line: inside of the test, which is quick, or as the built program, for what only a process of its own shows. */
import { type ChildProcessWithoutNullStreams, spawn } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { vi } from 'vitest';
import { run } from '../../src/cli/program.js';

export interface Ended {
  status: number | null;
  stdout: string;
  stderr: string;
}

/** One command line in this process. Node starts in a tenth of a second or more, so most tests take this way. */
export async function runInside(words: readonly string[]): Promise<Ended> {
  const ended = { stdout: '', stderr: '' };
  const spies = (['stdout', 'stderr'] as const).map((name) =>
    vi.spyOn(process[name], 'write').mockImplementation((text, ...rest) => {
      ended[name] += text;
      const done = rest.at(-1);
      if (typeof done === 'function') done();
      return true;
    }),
  );
  try {
    return { status: await run(words), ...ended };
  } finally {
    for (const spy of spies) spy.mockRestore();
  }
}

export const PROGRAM = fileURLToPath(new URL('../../bin/foreglass.js', import.meta.url));

/** The built program as a child process.
 * @param meanwhile called once with the child, to close its pipes or to send it a signal
 */
export async function runProgram(
  words: readonly string[],
  { cwd, env = {} }: { cwd?: string; env?: Record<string, string> } = {},
  meanwhile: (child: ChildProcessWithoutNullStreams) => void = () => {},
): Promise<Ended> {
  const child = spawn(process.execPath, [PROGRAM, ...words], { cwd, env: { ...process.env, ...env } });
  const ended = { stdout: '', stderr: '' };
  for (const name of ['stdout', 'stderr'] as const) {
    child[name].on('data', (data) => {
      ended[name] += data;
    });
  }
  meanwhile(child);
  const status = await new Promise<number | null>((resolve, reject) => {
    child.on('error', reject);
    child.on('close', resolve);
  });
  return { status, ...ended };
}

/** A child process gets little of a machine that runs other tests at the same time. */
export const CHILD_TIMEOUT_MS = 60_000;
