/** A Redis server of the test's own, where one is installed. */
import { spawn, spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/** Whether there is a server to be started. */
export const HAS_REDIS = spawnSync('redis-server', ['--version']).status === 0;

export interface RedisServer {
  url: string;
  stop(): Promise<void>;
}

/** Start a server on a free port, with nothing in it and nothing kept. */
export async function startRedis(): Promise<RedisServer> {
  const port = await freePort();
  const folder = mkdtempSync(join(tmpdir(), 'redis-'));
  const words = [
    '--port',
    String(port),
    '--bind',
    '127.0.0.1',
    '--save',
    '',
    '--appendonly',
    'no',
    '--dir',
    folder,
  ];
  const server = spawn('redis-server', words, { stdio: ['ignore', 'pipe', 'ignore'] });
  const gone = new Promise<void>((resolve) => server.once('close', () => resolve()));
  await new Promise<void>((resolve, reject) => {
    let said = '';
    server.stdout.on('data', (data) => {
      said += data;
      if (said.includes('Ready to accept connections')) resolve();
    });
    server.once('close', () => reject(new Error(`the server did not start: ${said}`)));
  });
  return {
    url: `redis://127.0.0.1:${port}`,
    stop: async () => {
      server.kill();
      await gone;
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.on('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const { port } = probe.address() as { port: number };
      probe.close(() => resolve(port));
    });
  });
}
