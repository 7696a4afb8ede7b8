import type { AddressInfo } from 'node:net';
import { openDatabase } from '../db/connection.ts';
import { createApp } from './app.ts';
import { openCompute } from './compute.ts';
import { readConfig } from './config.ts';
import { openEvents } from './events.ts';
import { createLog } from './log.ts';
import { openQueue } from './queue.ts';

/** Answers under way get this long; then what is still open, which are the event streams, is cut. */
const graceMilliseconds = 1500;

const config = readConfig();
const log = createLog(config.logLevel, 'server');
const db = openDatabase(config.database);
const queue = openQueue(config.redis, log);
const events = openEvents(config.redis, log);
const compute = openCompute({ file: config.computeFile, limitSeconds: config.computeSeconds, log });

const server = createApp({ db, config, queue, events, compute, log }).listen(
  config.port,
  config.host,
  (fault?: Error) => {
    if (fault !== undefined) {
      log.fatal({ err: fault }, `cannot listen on ${config.host}:${config.port}`);
      process.exitCode = 1;
      void stop();
      return;
    }
    const { port } = server.address() as AddressInfo;
    process.stdout.write(`ready http://${config.host}:${port}\n`);
  },
);

function closeServer(): Promise<void> {
  return new Promise((resolve) => {
    const cut = setTimeout(() => server.closeAllConnections(), graceMilliseconds);
    server.close(() => {
      clearTimeout(cut);
      resolve();
    });
    server.closeIdleConnections();
  });
}

const longestStopMilliseconds = 10_000;

let stopping = false;

async function stop(): Promise<void> {
  if (stopping) return;
  stopping = true;
  // What was still connecting when it was told to end may take a minute to give up.
  setTimeout(() => process.exit(), longestStopMilliseconds).unref();
  await closeServer();
  compute.close();
  await Promise.all([queue.close(), events.close()]);
  await db.destroy();
}

for (const signal of ['SIGINT', 'SIGTERM'] as const) {
  process.on(signal, () => {
    log.info(`${signal}: closing`);
    stop().catch((error: unknown) => {
      log.error({ err: error }, 'not closed in order');
      process.exit(1);
    });
  });
}
