/** Data sets made over a queue, with a real Redis server. Where none is installed, these tests are skipped, and say so. */
import { type ChildProcess, spawn } from 'node:child_process';
import { readdirSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { Queue } from 'bullmq';
import { afterAll, afterEach, beforeAll, describe, expect, test, vi } from 'vitest';
import type { InputError } from '../../src/errors.js';
import { type DatasetProgress, dataset } from '../../src/jobs/dataset.js';
import { queueDataset } from '../../src/jobs/dataset-queue.js';
import { workOnQueue } from '../../src/jobs/dataset-worker.js';
import { QUEUE } from '../../src/jobs/queue-connection.js';
import { HAS_REDIS, type RedisServer, startRedis } from './redis.js';
import { contents, RECIPE, type Site, smallSite } from './small-dataset.js';

vi.setConfig({ testTimeout: 60_000, hookTimeout: 60_000 }); // processes of their own get little of a busy machine

const PROGRAM = fileURLToPath(new URL('../../bin/foreglass.js', import.meta.url));

describe.runIf(HAS_REDIS)('with a Redis server', () => {
  let site: Site;
  let redis: RedisServer;
  const children = new Set<ChildProcess>();
  beforeAll(async () => {
    [site, redis] = await Promise.all([smallSite(), startRedis()]);
    site.write('long.recipe.yaml', RECIPE.replace('count: 8', 'count: 40'));
  });
  afterEach(() => {
    for (const child of children) child.kill('SIGKILL');
    children.clear();
  });
  afterAll(async () => {
    await redis?.stop();
    site?.remove();
  });

  /** A worker process that counts as dead when it is silent for a second. */
  function worker(): ChildProcess {
    const words = ['worker', '--queue', redis.url, '--threads', '1', '--dead-after', '1', '--quiet'];
    const child = spawn(process.execPath, [PROGRAM, ...words], { stdio: 'inherit' });
    children.add(child);
    return child;
  }

  test('three workers, one of which is killed, and one machine alone: identical folders', async () => {
    const options = { recipe: site.path('long.recipe.yaml') };
    const workers = [worker(), worker(), worker()];
    let progress: DatasetProgress | undefined;
    const record = await queueDataset({
      ...options,
      queue: redis.url,
      out: site.path('shared'),
      onProgress: (latest) => {
        progress = latest;
        if (latest.stage === 'pictures' && latest.done >= 6) workers[0].kill('SIGKILL');
      },
    });
    expect(record).toMatchObject({ pictures: 40, made: 40, kept: 0, counts: { pictures: 40 } });
    expect(workers[0].killed).toBe(true);
    expect(progress?.total).toBe(40);
    await dataset({ ...options, out: site.path('alone'), threads: 2 });
    expect(contents(site.path('shared'))).toEqual(contents(site.path('alone')));
    // nothing is left on the server
    const queue = new Queue(QUEUE.name, { prefix: QUEUE.prefix, connection: { url: redis.url } });
    expect(await queue.getJobCounts()).toMatchObject({
      waiting: 0,
      active: 0,
      delayed: 0,
      failed: 0,
      completed: 0,
    });
    await queue.close();
  });

  test('what is there is kept, and a range that is done twice does no harm', async () => {
    const options = { recipe: site.path('a.recipe.yaml'), out: site.path('twice') };
    await dataset({ ...options, threads: 1, limit: 3 });
    const work = workOnQueue({ queue: redis.url, threads: 1, idleSeconds: 0.5 });
    const runs = [1, 2].map(() => queueDataset({ ...options, queue: redis.url }));
    const [first] = await Promise.all(runs);
    expect(first).toMatchObject({ kept: 3, made: 5 });
    const record = await work;
    expect(record.made).toBeGreaterThanOrEqual(5);
    await dataset({ ...options, out: site.path('once'), threads: 1 });
    expect(contents(site.path('twice'))).toEqual(contents(site.path('once')));
  });

  test('a worker that reads another recipe under the same name says so', async () => {
    const recipe = site.write('moving.recipe.yaml', RECIPE);
    const stop = new AbortController();
    const run = queueDataset({ recipe, out: site.path('moving'), queue: redis.url, signal: stop.signal });
    await vi.waitUntil(() => readdirSync(site.path('')).includes('moving'), 10_000);
    site.write('moving.recipe.yaml', RECIPE.replace('seed: 7', 'seed: 8'));
    const work = workOnQueue({ queue: redis.url, threads: 1, idleSeconds: 0.5 });
    const error = (await run.catch((reason) => reason)) as InputError;
    expect(error.faults?.[0].message).toContain('is not what the queue was filled from');
    await work;
  });

  test('a scene that cannot be read stops the run with its fault', async () => {
    const other = await smallSite();
    try {
      const recipe = other.path('a.recipe.yaml');
      const run = queueDataset({ recipe, out: other.path('out'), queue: redis.url });
      const work = workOnQueue({ queue: redis.url, threads: 1, idleSeconds: 0.5 });
      await vi.waitUntil(() => readdirSync(other.path('')).includes('out'), 10_000);
      other.write('scenes/b.png', 'no picture any more');
      const error = (await run.catch((reason) => reason)) as InputError;
      expect(error.faults?.length).toBeGreaterThan(0);
      await work;
    } finally {
      other.remove();
    }
  });

  test('an interrupt takes the ranges off the queue that nobody has begun', async () => {
    const stop = new AbortController();
    const run = queueDataset({
      recipe: site.path('a.recipe.yaml'),
      out: site.path('stopped'),
      queue: redis.url,
      signal: stop.signal,
    });
    const queue = new Queue(QUEUE.name, { prefix: QUEUE.prefix, connection: { url: redis.url } });
    await vi.waitUntil(async () => (await queue.getWaitingCount()) > 0, 10_000);
    stop.abort();
    await expect(run).rejects.toMatchObject({ name: 'InterruptedError' });
    expect(await queue.getWaitingCount()).toBe(0);
    await queue.close();
  });
});

test.skipIf(HAS_REDIS)(
  'there is no Redis server here (redis-server): the tests of the queue are skipped',
  () => {
    expect(HAS_REDIS).toBe(false);
  },
);
