import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { inheritEnvironment, writeEnvironment, type Config } from '../config.ts';
import { claimDirectory, askHolder } from './claim.ts';
import { beginFirstStart, endFirstStart } from './first-start.ts';
import { endLeftovers, recordProcesses } from './leftovers.ts';
import { choosePorts, makeLocalConfig } from './local-config.ts';
import { canConnect } from './ports.ts';
import { keepSecrets, makePrivateDirectory, readJsonFile } from './private-files.ts';
import type { ProcessSpec } from './processes.ts';
import type { Program, Programs } from './programs.ts';
import { startServices } from './services.ts';
import { Supervision } from './supervision.ts';

interface DeskSettings {
  dataDir: string;
  programs: Programs;
  /** Vite in front of the server, and everything's output on the terminal. */
  development: boolean;
  appPort?: number;
  say: (line: string) => void;
}

async function answersOk(url: string): Promise<boolean> {
  try {
    const answer = await fetch(url, { signal: AbortSignal.timeout(5000), redirect: 'manual' });
    await answer.arrayBuffer();
    return answer.status === 200;
  } catch {
    return false; // not listening yet: asked again until it is, or has ended, or has taken too long
  }
}

function describeAccounts(file: string): string[] {
  const accounts = readJsonFile(file) as { role: string; email: string; password: string }[] | undefined;
  if (accounts === undefined) return [];
  const width = (key: 'role' | 'email') => Math.max(...accounts.map((account) => account[key].length));
  const lines = accounts.map(
    ({ role, email, password }) =>
      `  ${role.padEnd(width('role'))}  ${email.padEnd(width('email'))}  ${password}`,
  );
  return ['', 'Demo accounts (role, e-mail, password):', ...lines];
}

async function startDesk(supervision: Supervision, settings: DeskSettings): Promise<Config> {
  const { dataDir, programs, development, say } = settings;
  const asked = settings.appPort === undefined ? {} : { app: settings.appPort };
  const services = ['mariadb', 'redis', 'smtp'] as const;
  const names = development ? (['app', 'api', ...services] as const) : (['app', ...services] as const);
  const { ports, release } = await choosePorts(dataDir, names, asked, say);
  const secrets = keepSecrets(dataDir);
  const config = makeLocalConfig({ dataDir, ports, secrets, development });
  const logsDir = join(dataDir, 'logs');
  makePrivateDirectory(logsDir);
  const isFirst = beginFirstStart(dataDir);
  await Promise.all([release('mariadb'), release('redis')]);
  await startServices(supervision, { dataDir, logsDir, ports, secrets, database: config.database.name });

  const env = inheritEnvironment({
    ...writeEnvironment(config),
    NODE_ENV: development ? 'development' : 'production',
    FEEDERWRIGHT_API_PORT: String(ports.api),
  });
  const spec = (name: string, { command, args }: Program, more: string[] = []): ProcessSpec => {
    const logFile = development ? undefined : join(logsDir, `${name}.log`);
    return { name, command, args: [...args, ...more], env, logFile };
  };
  const mailbox = spec('mailbox', programs.mailbox, [config.mailboxDir, String(ports.smtp)]);
  await release('smtp');
  await supervision.keep(mailbox, () => canConnect({ port: ports.smtp }));
  if (isFirst) say('Making the tables and the demo, this first time.');
  await supervision.run(spec('prepare', programs.prepare));
  endFirstStart(dataDir);
  // A worker listens nowhere: one that cannot run ends soon, and that is seen. It is started before the server,
  // because what is started last is ended first.
  const worker = supervision.keep(spec('worker', programs.worker), () => sleep(1000, true));
  await release(development ? 'api' : 'app');
  const answers = () => answersOk(`http://127.0.0.1:${config.port}/${development ? 'api/health' : ''}`);
  // In development a mistake in the sources is waited out: it is mended while all this runs.
  const patienceEnds = development ? Date.now() + 20_000 : Infinity;
  const server = supervision.keep(
    spec('server', programs.server),
    async () => (await answers()) || Date.now() > patienceEnds,
  );
  await Promise.all([worker, server]);
  if (development) {
    const args = [
      'node_modules/vite/bin/vite.js',
      '--host',
      '127.0.0.1',
      '--port',
      String(ports.app),
      '--strictPort',
    ];
    await release('app');
    await supervision.keep(spec('vite', { command: process.execPath, args }), () =>
      canConnect({ port: ports.app }),
    );
  }
  return config;
}

function waitForStopSignal(): Promise<NodeJS.Signals> {
  return new Promise((resolve) => {
    for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, resolve);
  });
}

/** Runs until it is told to stop. Gives back the exit code. */
export async function runDesk(settings: DeskSettings): Promise<number> {
  const { dataDir, say } = settings;
  makePrivateDirectory(dataDir);
  const claim = await claimDirectory(dataDir);
  if (claim === undefined) {
    say(`Feederwright already runs on ${dataDir}: ${await askHolder(dataDir)}`);
    return 1;
  }
  const stopSignal = waitForStopSignal();
  const left = await endLeftovers(dataDir);
  if (left.length > 0) say(`Ended what an earlier start had left running: ${left.join(', ')}.`);
  const supervision = new Supervision({ say, record: (running) => recordProcesses(dataDir, running) });
  try {
    const config = await Promise.race([startDesk(supervision, settings), stopSignal]);
    if (typeof config !== 'string') {
      claim.describe(config.publicUrl);
      say(`\nFeederwright is at ${config.publicUrl}`);
      describeAccounts(config.demoAccountsFile).forEach(say);
      say('\nCtrl-C ends it.');
      await stopSignal;
    }
    say('\nEnding server, worker, mailbox, Redis and MariaDB …');
    return 0;
  } catch (error) {
    say(error instanceof Error ? error.message : String(error));
    return 1;
  } finally {
    await supervision.stop();
    recordProcesses(dataDir, []);
    await claim.release();
  }
}
