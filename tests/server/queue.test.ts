import { setTimeout as sleep } from 'node:timers/promises';
import { mkdtempSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { openEvents } from '../../server/events.ts';
import { createLog } from '../../server/log.ts';
import { findAnyPort } from '../../server/local/ports.ts';
import { isRedisReady, redisProcess } from '../../server/local/redis.ts';
import { openQueue, openWorkerQueue, type OpenQueue } from '../../server/queue.ts';
import { TestProcess } from '../support/processes.ts';
import { getTestServices } from '../support/services.ts';

const log = createLog('silent', 'test');
let redis: TestProcess;
let settings: { host: string; port: number; password: string; prefix: string };
const open: { close(): Promise<void> }[] = [];

beforeAll(async () => {
  const dataDir = mkdtempSync(join(getTestServices().directory, 'queue-'));
  const port = await findAnyPort();
  const { password } = getTestServices().redis;
  const server = { dataDir, port, password, logFile: join(dataDir, 'redis.log') };
  redis = new TestProcess(redisProcess(server), () => isRedisReady(server));
  settings = { host: '127.0.0.1', port, password, prefix: 'test' };
  await redis.start();
});
afterAll(async () => {
  await Promise.all(open.map((each) => each.close()));
  await redis.stop();
});

function keep<T extends { close(): Promise<void> }>(opened: T): T {
  open.push(opened);
  return opened;
}

async function until(happened: () => boolean, milliseconds = 10_000): Promise<void> {
  const end = Date.now() + milliseconds;
  while (!happened()) {
    if (Date.now() > end) throw new Error(`It did not happen within ${milliseconds} ms`);
    await sleep(20);
  }
}

let worked: number[];
let release: () => void;
let producer: OpenQueue;

it('hands each run to a worker, and takes a second job of the same attempt for the same', async () => {
  worked = [];
  let held = new Promise<void>((resolve) => (release = resolve));
  producer = keep(openQueue(settings, log));
  keep(
    openWorkerQueue(settings, log, async (runId) => {
      worked.push(runId);
      await held;
    }),
  );
  await producer.enqueue(1, 0);
  await until(() => worked.length === 1);
  await producer.enqueue(2, 0);
  await producer.enqueue(2, 0);
  await producer.enqueue(2, 1);
  release();
  held = Promise.resolve();
  await until(() => worked.length === 3);
  await sleep(200);
  expect(worked).toEqual([1, 2, 2]);
  await producer.enqueue(2, 1);
  await until(() => worked.length === 4); // the job that ended does not stand in its way
});

it('goes on after Redis was started again, which has forgotten the scripts of the queue', async () => {
  worked = [];
  await redis.stop();
  await redis.start();
  await producer.enqueue(11, 0);
  await until(() => worked.includes(11));
});

it('does not hold up who enqueues while Redis is away, and delivers live events when it is back', async () => {
  const events = keep(openEvents(settings, log));
  const heard: number[] = [];
  let gaps = 0;
  events.subscribe(
    (event) => heard.push(event.version),
    () => (gaps += 1),
  );
  await until(() => {
    void events.publish({ kind: 'run', id: 'a', applicationId: 'a', version: 1 });
    return heard.length > 0;
  });

  await redis.stop();
  const before = Date.now();
  await producer.enqueue(12, 0);
  await events.publish({ kind: 'run', id: 'a', applicationId: 'a', version: 2 });
  expect(Date.now() - before).toBeLessThan(3000);
  await redis.start();

  await until(() => gaps === 1);
  await events.publish({ kind: 'run', id: 'a', applicationId: 'a', version: 3 });
  await until(() => heard.includes(3));
});
