/** The queue over which a data set is shared by machines that come and go: its server, its jobs. */
import type { Redis } from 'ioredis';
import { InputError, RunError } from '../errors.js';

/** Name of the queue and prefix of all its keys on the server. */
export const QUEUE = { name: 'pictures', prefix: 'foreglass' } as const;

/** A range of pictures to be made. Jobs are idempotent: one that is done twice gives the same files. */
export interface QueuedRange {
  /** The recipe and the data set's folder, which every machine finds under the same name. */
  recipe: string;
  out: string;
  /** Checksum of what the data set is made from, see `fingerprint`. */
  fingerprint: string;
  /** From 0. */
  pictures: number[];
}

/** What a worker says of a range: how many pictures are done so far, or in the end. */
export interface RangeReport {
  made: number;
  warnings: string[];
}

/** How long a server that does not answer is waited for. */
const CONNECT_MS = 5000;

/** Connect to a Redis server.
 * @param url  redis://[user:password@]host[:port][/database], or rediss:// for TLS
 * @throws {InputError} no such URL
 * @throws {RunError}   a server that cannot be reached or does not let in */
export async function connectQueue(url: string): Promise<Redis> {
  const shown = shownUrl(url);
  let isIn = false;
  let reason = '';
  const { Redis: Client } = await import('ioredis'); // heavy, and needed here only
  const redis: Redis = new Client(url, {
    lazyConnect: true,
    maxRetriesPerRequest: null, // bullmq waits for its blocking calls
    connectTimeout: CONNECT_MS,
    retryStrategy: (): number | null => (isIn ? RETRY_MS : null), // a server that was there comes back
  });
  redis.on('error', (error: Error & { code?: string }) => {
    reason = error.code ?? error.message; // later ones are retried
  });
  try {
    await redis.connect();
    await redis.ping();
    isIn = true;
    return redis;
  } catch (error) {
    redis.disconnect();
    const said = reason || (error instanceof Error ? error.message : String(error));
    throw new RunError(`cannot reach the queue's server at ${shown}: ${said}`);
  }
}

const RETRY_MS = 1000;

/** The URL without its password. */
export function shownUrl(url: string): string {
  let parsed: URL;
  try {
    parsed = new URL(url);
  } catch {
    throw urlFault(url);
  }
  if (parsed.protocol !== 'redis:' && parsed.protocol !== 'rediss:') throw urlFault(url);
  return `${parsed.protocol}//${parsed.host}${parsed.pathname}`;
}

function urlFault(url: string): InputError {
  return new InputError({
    key: '--queue',
    message: 'is no address of a Redis server',
    found: `'${url.replace(/\/\/.*@/, '//…@')}'`,
    allowed: 'redis://HOST:PORT, or rediss://HOST:PORT for TLS',
  });
}
