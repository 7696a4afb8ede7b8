import { mkdirSync, mkdtempSync, readFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { inheritEnvironment, readConfig, writeEnvironment, type Config } from '../../server/config.ts';
import { buildClient } from '../../server/local/build.ts';
import { canConnect, findAnyPort } from '../../server/local/ports.ts';
import {
  describeExit,
  startProcess,
  type ProcessSpec,
  type RunningProcess,
} from '../../server/local/processes.ts';
import { builtPrograms, sourcePrograms, type Programs } from '../../server/local/programs.ts';
import { isRedisReady, redisProcess } from '../../server/local/redis.ts';
import { makeEmptyDatabase } from './database.ts';
import { getTestServices } from './services.ts';

/** A real process that a test may start, stop and kill as often as it likes: same port, same files. */
export class TestProcess {
  private current: RunningProcess | undefined;
  private readonly spec: ProcessSpec;
  private readonly isReady: () => Promise<boolean>;

  constructor(spec: ProcessSpec, isReady: () => Promise<boolean>) {
    this.spec = spec;
    this.isReady = isReady;
  }

  get pid(): number | undefined {
    return this.current?.pid;
  }

  async start(): Promise<void> {
    if (this.current && !this.current.hasExited()) throw new Error(`${this.spec.name} runs already`);
    const started = startProcess(this.spec);
    this.current = started;
    const end = Date.now() + 30_000;
    for (;;) {
      const ready = await this.isReady();
      if (started.hasExited()) {
        throw new Error(
          `${this.spec.name} ended with ${describeExit(await started.exited)}:\n${started.tail(40)}`,
        );
      }
      if (ready) return;
      if (Date.now() > end)
        throw new Error(`${this.spec.name} was not ready within 30 s:\n${started.tail(40)}`);
      await sleep(30);
    }
  }

  /** In order, as Ctrl-C does. */
  async stop(): Promise<void> {
    await this.current?.stop();
  }

  /** kill -9, with all it started. */
  async kill(): Promise<void> {
    await this.current?.kill();
  }

  /** All it ever wrote. */
  log(): string {
    return this.spec.logFile === undefined ? '' : readFileSync(this.spec.logFile, 'utf8');
  }
}

export interface TestDesk {
  /** What its processes run with: open the same database with `openDatabase(config.database)`. */
  config: Config;
  url: string;
  mailbox: TestProcess;
  worker: TestProcess;
  server: TestProcess;
  /** Only with `ownRedis`; the shared one must not be stopped. */
  redis: TestProcess | undefined;
  /** Ends all processes and drops the database. */
  end(): Promise<void>;
}

interface DeskOptions {
  /** Laid over what the desk would run with: short leases, a quick sweep. */
  settings?: Partial<Config>;
  /** A Redis that the test may stop. */
  ownRedis?: boolean;
  /** Builds the pages where they are older than their sources. */
  pages?: boolean;
  /** Which of the processes run from the beginning; all of them when not said. */
  start?: ('mailbox' | 'worker' | 'server')[];
}

interface DeskPaths {
  programs: Programs;
  computeFile: string;
  clientDir: string;
}

/** What `npm test` built, or the sources as they are where vitest is run by itself. */
function findPrograms(pages: boolean): DeskPaths {
  const buildDir = process.env.FEEDERWRIGHT_TEST_BUILD;
  const clientDir = resolve('.cache/test-build/client');
  if (buildDir !== undefined) {
    const computeFile = resolve(buildDir, 'server/workers/compute.js');
    return { programs: builtPrograms(`${buildDir}/server`), computeFile, clientDir };
  }
  if (pages) buildClient(clientDir);
  return { programs: sourcePrograms(), computeFile: resolve('workers/compute.ts'), clientDir };
}

async function isHealthy(url: string): Promise<boolean> {
  try {
    const answer = await fetch(`${url}/api/health`, { signal: AbortSignal.timeout(5000) });
    await answer.arrayBuffer();
    return answer.ok;
  } catch {
    return false; // not listening yet, or no more
  }
}

async function makeConfig(
  directory: string,
  paths: DeskPaths,
  settings: Partial<Config>,
  redisPort?: number,
) {
  const services = getTestServices();
  const empty = await makeEmptyDatabase();
  const port = await findAnyPort();
  const smtpPort = await findAnyPort();
  const config: Config = {
    ...readConfig({
      FEEDERWRIGHT_PORT: String(port),
      FEEDERWRIGHT_DATABASE_PORT: String(services.database.port),
      FEEDERWRIGHT_DATABASE_PASSWORD: services.database.password,
      FEEDERWRIGHT_REDIS_PORT: String(redisPort ?? services.redis.port),
      FEEDERWRIGHT_REDIS_PASSWORD: services.redis.password,
      FEEDERWRIGHT_REDIS_PREFIX: empty.settings.name,
      FEEDERWRIGHT_SMTP_PORT: String(smtpPort),
      FEEDERWRIGHT_SESSION_SECRET: services.database.password,
      FEEDERWRIGHT_FILES_DIR: join(directory, 'files'),
      FEEDERWRIGHT_MAILBOX_DIR: join(directory, 'mailbox'),
      FEEDERWRIGHT_DEMO_ACCOUNTS_FILE: join(directory, 'demo-accounts.json'),
      FEEDERWRIGHT_COMPUTE_FILE: paths.computeFile,
      FEEDERWRIGHT_CLIENT_DIR: paths.clientDir,
      FEEDERWRIGHT_DEMO: 'true',
    }),
    database: empty.settings,
    ...settings,
  };
  return { config, drop: empty.drop };
}

/** Server, worker and mailbox as processes of their own, on a prepared database of their own. */
export async function startDesk(options: DeskOptions = {}): Promise<TestDesk> {
  const services = getTestServices();
  const directory = mkdtempSync(join(services.directory, 'desk-'));
  mkdirSync(join(directory, 'files'));
  const paths = findPrograms(options.pages ?? false);
  const redisPort = options.ownRedis ? await findAnyPort() : undefined;
  const { config, drop } = await makeConfig(directory, paths, options.settings ?? {}, redisPort);
  const env = inheritEnvironment({ ...writeEnvironment(config), NODE_ENV: 'production' });
  const spec = (name: keyof Programs, ...more: string[]): ProcessSpec => {
    const { command, args } = paths.programs[name];
    return { name, command, args: [...args, ...more], env, logFile: join(directory, `${name}.log`) };
  };

  const redisSettings = {
    dataDir: directory,
    port: redisPort ?? 0,
    password: services.redis.password,
    logFile: join(directory, 'redis.log'),
  };
  const redis = options.ownRedis
    ? new TestProcess(redisProcess(redisSettings), () => isRedisReady(redisSettings))
    : undefined;
  const mailbox = new TestProcess(spec('mailbox', config.mailboxDir, String(config.smtp.port)), () =>
    canConnect({ port: config.smtp.port }),
  );
  // It listens nowhere; one that cannot run ends soon, and a test that waits for its work sees that.
  const worker = new TestProcess(spec('worker'), () => sleep(500, true));
  const url = `http://127.0.0.1:${config.port}`;
  const server = new TestProcess(spec('server'), () => isHealthy(url));
  const end = async () => {
    for (const running of [server, worker, mailbox, redis]) await running?.stop();
    await drop();
  };

  try {
    await redis?.start();
    const prepare = startProcess(spec('prepare'));
    const exit = await prepare.exited;
    if (exit.code !== 0) throw new Error(`prepare ended with ${describeExit(exit)}:\n${prepare.tail(40)}`);
    const chosen = options.start ?? ['mailbox', 'worker', 'server'];
    for (const name of chosen) await { mailbox, worker, server }[name].start();
  } catch (error) {
    await end();
    throw error;
  }
  return { config, url, mailbox, worker, server, redis, end };
}
