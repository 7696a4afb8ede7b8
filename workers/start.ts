/** The screening worker: computes runs, finds lost ones, sends the mail. */
import { openDatabase } from '../db/connection.ts';
import { openCompute } from '../server/compute.ts';
import { readConfig } from '../server/config.ts';
import { openEvents } from '../server/events.ts';
import { createLog } from '../server/log.ts';
import { openTransport } from '../server/mail/transport.ts';
import { openWorkerQueue } from '../server/queue.ts';
import { removeOrphanFiles } from '../server/services/files.ts';
import { findRoomOfModel, sweepRooms, type RoomDeps } from './jobs/find-room.ts';
import { deliverMail } from './jobs/deliver-mail.ts';
import type { ScreenDeps } from './jobs/screen-deps.ts';
import { screenRun } from './jobs/screen.ts';
import { repeat } from './repeat.ts';
import { sweepRuns } from './sweep.ts';

const dayInSeconds = 24 * 3600;
/** Before a fault is tried again: soon, for it may have been a moment's, then with growing patience. */
const retryDelaysSeconds = [5, 20, 60, 180];

const config = readConfig();
const log = createLog(config.logLevel, 'worker');
const db = openDatabase(config.database);
const events = openEvents(config.redis, log);
const compute = openCompute({ file: config.computeFile, limitSeconds: config.computeSeconds, log });
const transport = openTransport(config.smtp);
const now = () => new Date();

const screening: ScreenDeps & RoomDeps = {
  db,
  events,
  log,
  compute,
  now,
  leaseSeconds: config.runLeaseSeconds,
  retryDelaysSeconds,
};
let underWay: Promise<void> = Promise.resolve();
const follow = (work: Promise<void>) => (underWay = work);
const queue = openWorkerQueue(
  config.redis,
  log,
  (runId) => follow(screenRun(screening, runId)),
  (roomId) => follow(findRoomOfModel(screening, roomId)),
);

const repeated = [
  repeat('The sweep', config.sweepSeconds, log, () =>
    sweepRuns({ db, queue, log, now, queuedGraceSeconds: config.queuedGraceSeconds }),
  ),
  repeat('The sweep of rooms', config.sweepSeconds, log, () =>
    sweepRooms({ db, queue, now, queuedGraceSeconds: config.queuedGraceSeconds }),
  ),
  repeat('The outbox', config.outboxSeconds, log, () => deliverMail({ db, config, log, transport, now })),
  repeat('Files that belong to nothing', dayInSeconds, log, () =>
    removeOrphanFiles(
      { db, config, queue, events, compute, log },
      { actor: null, now: now(), ip: '', requestId: 'worker' },
    ),
  ),
];

let stopping = false;

/** What is under way comes to its end where that is soon; a run that is cut off goes back into the queue. */
async function stop(): Promise<void> {
  if (stopping) return;
  stopping = true;
  await queue.close();
  compute.close();
  await underWay.catch((error: unknown) => log.error({ err: error }, 'The last run'));
  await Promise.all(repeated.map((each) => each.stop()));
  await events.close();
  transport.close();
  await db.destroy();
}

for (const signal of ['SIGINT', 'SIGTERM'] as const) {
  process.on(signal, () => {
    log.info(`${signal}: closing`);
    stop().then(
      () => process.exit(0),
      (error: unknown) => {
        log.error({ err: error }, 'Not closed in order');
        process.exit(1);
      },
    );
  });
}
