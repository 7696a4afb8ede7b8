import { setTimeout as sleep } from 'node:timers/promises';
import Queue from 'bee-queue';
import scripts from 'bee-queue/lib/lua/index.js';
import type { Logger } from 'pino';
import type { RedisClient } from 'redis';
import type { RedisSettings } from './config.ts';
import type { RunQueue } from './context.ts';
import { redisOptions } from './redis.ts';

/** A run to screen, or the room of a model to work out. */
type DeskJob = { runId: number } | { roomId: number };

/** The sweep enqueues what did not get through: nobody waits for a Redis that is away. */
const enqueueWaitMs = 2000;
/** A job whose worker does not renew it for so long goes to another; that one finds the lease in the run's row. */
const stallIntervalMs = 5000;
/** For the job under way, when the process is told to stop. */
const closeWaitMs = 5000;
const retryMs = 1000;

/**
 * Jobs carry the id of a run or a room and nothing else: the row is the truth. Retries with backoff are the row's too
 * (`next_attempt_at`, read by the sweep), so that nothing here needs bee-queue's delayed jobs or its events.
 */
function makeQueue(settings: RedisSettings, log: Logger, isWorker: boolean): Queue<DeskJob> {
  const queue = new Queue<DeskJob>('runs', {
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
async function loadScriptsAtEachConnect(queue: Queue<DeskJob>, log: Logger): Promise<void> {
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

async function saveJob(queue: Queue<DeskJob>, job: DeskJob, attempt: number): Promise<void> {
  // A second job for the same attempt is the same job.
  const id = 'runId' in job ? `${job.runId}:${attempt}` : `room-${job.roomId}:${attempt}`;
  const save = () => queue.createJob(job).setId(id).save();
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
  tryEnqueueRoom(roomId: number, attempt: number): Promise<boolean>;
  close(): Promise<void>;
}

function open(queue: Queue<DeskJob>, log: Logger): OpenQueue {
  async function tryJob(job: DeskJob, attempt: number): Promise<boolean> {
    try {
      await within(saveJob(queue, job, attempt), enqueueWaitMs);
      return true;
    } catch (error) {
      log.warn({ err: error, ...job }, 'Not enqueued; the sweep will find it');
      return false;
    }
  }
  return {
    tryEnqueue: (runId, attempt) => tryJob({ runId }, attempt),
    tryEnqueueRoom: (roomId, attempt) => tryJob({ roomId }, attempt),
    enqueue: async (runId, attempt) => void (await tryJob({ runId }, attempt)),
    enqueueRoom: async (roomId, attempt) => void (await tryJob({ roomId }, attempt)),
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
  queue: Queue<DeskJob>,
  log: Logger,
  work: (job: DeskJob) => Promise<void>,
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
  queue.process(1, (job: Queue.Job<DeskJob>) => work(job.data));
  // Without a callback: given one, an error of Redis would be thrown where nobody catches it.
  await queue.checkStalledJobs(stallIntervalMs);
}

/** For those who compute them, one at a time. */
export function openWorkerQueue(
  settings: RedisSettings,
  log: Logger,
  work: (runId: number) => Promise<void>,
  workOnRoom: (roomId: number) => Promise<void> = () => Promise.resolve(),
): OpenQueue {
  const queue = makeQueue(settings, log, true);
  // Nothing is lost: the run's row still says that it is under way, and the sweep finds it when its lease has passed.
  queue.on('failed', ({ data }, error) => log.error({ err: error, ...data }, 'A turn broke off'));
  startWorking(queue, log, (job) => ('runId' in job ? work(job.runId) : workOnRoom(job.roomId))).catch(
    (error: unknown) => log.warn({ err: error }, 'The queue'),
  );
  return open(queue, log);
}
