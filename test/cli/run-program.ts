/** The built program as a child process. */
import { spawn } from 'node:child_process';
import { fileURLToPath } from 'node:url';

export const PROGRAM = fileURLToPath(new URL('../../bin/foreglass.js', import.meta.url));

export interface Ended {
  status: number | null;
  stdout: string;
  stderr: string;
}

/** @param whileRunning called once with the child, to close its pipes or to send it a signal */
export async function runProgram(
  words: readonly string[],
  { cwd, env = {} }: { cwd?: string; env?: Record<string, string> } = {},
  whileRunning: (child: ReturnType<typeof spawn>) => void = () => {},
): Promise<Ended> {
  const child = spawn(process.execPath, [PROGRAM, ...words], { cwd, env: { ...process.env, ...env } });
  const ended = { stdout: '', stderr: '' };
  child.stdout.on('data', (data) => {
    ended.stdout += data;
  });
  child.stderr.on('data', (data) => {
    ended.stderr += data;
  });
  whileRunning(child);
  const status = await new Promise<number | null>((resolve, reject) => {
    child.on('error', reject);
    child.on('close', resolve);
  });
  return { status, ...ended };
}
