import { setTimeout as sleep } from 'node:timers/promises';
import Queue from 'bee-queue';
import scripts from 'bee-queue/lib/lua/index.js';
import type { Logger } from 'pino';
import type { RedisClient } from 'redis';
import type { RedisSettings } from './config.ts';
import type { RunQueue } from './context.ts';
import { redisOptions } from './redis.ts';

interface RunJob {
  runId: number;
}

/** The sweep enqueues what did not get through: nobody waits for a Redis that is away. */
const enqueueWaitMs = 2000;
/** A job whose worker does not renew it for so long goes to another; that one finds the lease in the run's row. */
const stallIntervalMs = 5000;
/** For the job under way, when the process is told to stop. */
const closeWaitMs = 5000;
const retryMs = 1000;

/**
 * Jobs carry a run's id and nothing else: the row is the truth. Retries with backoff are the row's too
 * (`next_attempt_at`, read by the sweep), so that nothing here needs bee-queue's delayed jobs or its events.
 */
function makeQueue(settings: RedisSettings, log: Logger, isWorker: boolean): Queue<RunJob> {
  const queue = new Queue<RunJob>('runs', {
    redis: redisOptions(settings),
    prefix: `${settings.prefix}:queue`,
    isWorker,
    getEvents: false,
    sendEvents: false,
    storeJobs: false,
    // An ended job of the same id would refuse a new one.
    removeOnSuccess: true,
    removeOnFailure: true,
    stallInterval: stallIntervalMs,
  });
  queue.on('error', (error) => log.warn({ err: error }, 'The queue'));
  loadScriptsAtEachConnect(queue, log).catch((error: unknown) => log.error({ err: error }, 'The queue'));
  return queue;
}

/** A Redis that was started again knows none of the scripts that bee-queue calls by hash. */
async function loadScriptsAtEachConnect(queue: Queue<RunJob>, log: Logger): Promise<void> {
  await queue.ready();
  const { client } = queue as unknown as { client: RedisClient };
  client.on('ready', () => {
    scripts
      .buildCache(client)
      .catch((error: unknown) => log.warn({ err: error }, 'The scripts of the queue'));
  });
}

function isScriptMissing(error: unknown): boolean {
  return error instanceof Error && error.message.startsWith('NOSCRIPT');
}

async function saveJob(queue: Queue<RunJob>, runId: number, attempt: number): Promise<void> {
  // A second job for the same attempt is the same job.
  const save = () => queue.createJob({ runId }).setId(`${runId}:${attempt}`).save();
  try {
    await save();
  } catch (error) {
    // Sent in the moment between a new connection and the loading of the scripts.
    if (!isScriptMissing(error)) throw error;
    await scripts.buildCache((queue as unknown as { client: RedisClient }).client);
    await save();
  }
}

function within<T>(work: Promise<T>, milliseconds: number): Promise<T> {
  return new Promise((resolve, reject) => {
    const late = setTimeout(
      () => reject(new Error(`Redis: no answer within ${milliseconds} ms`)),
      milliseconds,
    );
    work.then(resolve, reject).finally(() => clearTimeout(late));
  });
}

export interface OpenQueue extends RunQueue {
  /** Whether Redis took it. */
  tryEnqueue(runId: number, attempt: number): Promise<boolean>;
  close(): Promise<void>;
}

function open(queue: Queue<RunJob>, log: Logger): OpenQueue {
  async function tryEnqueue(runId: number, attempt: number): Promise<boolean> {
    try {
      await within(saveJob(queue, runId, attempt), enqueueWaitMs);
      return true;
    } catch (error) {
      log.warn({ err: error, runId }, 'Not enqueued; the sweep will find the run');
      return false;
    }
  }
  return {
    tryEnqueue,
    enqueue: async (runId, attempt) => void (await tryEnqueue(runId, attempt)),
    async close() {
      // Not while it connects: it would wait for a Redis that may be away. The sockets end with the process.
      await within(queue.close(closeWaitMs), closeWaitMs + retryMs).catch((error: unknown) =>
        log.warn({ err: error }, 'The queue was not closed in order'),
      );
    },
  };
}

/** For those who ask for runs. */
export function openQueue(settings: RedisSettings, log: Logger): OpenQueue {
  return open(makeQueue(settings, log, false), log);
}

/**
 * bee-queue takes no job at all when its first look for stalled ones fails, as it does when Redis is restarted in that
 * moment: so that look is first taken here, until it succeeds.
 */
async function startWorking(
  queue: Queue<RunJob>,
  log: Logger,
  work: (runId: number) => Promise<void>,
): Promise<void> {
  await queue.ready();
  while (!queue.paused) {
    try {
      await queue.checkStalledJobs();
      break;
    } catch (error) {
      log.warn({ err: error }, 'The queue cannot be asked yet');
      await sleep(retryMs);
    }
  }
  if (queue.paused) return;
  queue.process(1, (job: Queue.Job<RunJob>) => work(job.data.runId));
  // Without a callback: given one, an error of Redis would be thrown where nobody catches it.
  await queue.checkStalledJobs(stallIntervalMs);
}

/** For those who compute them, one at a time. */
export function openWorkerQueue(
  settings: RedisSettings,
  log: Logger,
  work: (runId: number) => Promise<void>,
): OpenQueue {
  const queue = makeQueue(settings, log, true);
  // Nothing is lost: the run's row still says that it is under way, and the sweep finds it when its lease has passed.
  queue.on('failed', ({ data }, error) => log.error({ err: error, runId: data.runId }, 'A turn broke off'));
  startWorking(queue, log, work).catch((error: unknown) => log.warn({ err: error }, 'The queue'));
  return open(queue, log);
}
