import { join, resolve } from 'node:path';
import { inheritEnvironment, readConfig, type Config } from '../config.ts';
import { databaseUser } from './mariadb.ts';
import { reserveNextPort, tryReservePort, type ReservedPort } from './ports.ts';
import { readJsonFile, writePrivateFile, type Secrets } from './private-files.ts';

const usualPorts = { app: 7400, api: 7401, mariadb: 7403, redis: 7404, smtp: 7405 };

type Ports = typeof usualPorts;

function portsFile(dataDir: string): string {
  return join(dataDir, 'ports.json');
}

/** The ports of the last start, or the usual ones. */
export function readPorts(dataDir: string): Ports {
  return { ...usualPorts, ...(readJsonFile(portsFile(dataDir)) as Partial<Ports> | undefined) };
}

interface ChosenPorts {
  ports: Ports;
  /** Lets go of one, for the program that is to listen there. */
  release(name: keyof Ports): Promise<void>;
}

/**
 * The ports of the last start, so that links in mails stay good; where one is busy, the next free one. A port that
 * was asked for by name goes before what is remembered. All are held until they are used: the demo takes a while to
 * make, and another desk may be starting beside this one.
 */
export async function choosePorts(
  dataDir: string,
  names: readonly (keyof Ports)[],
  asked: Partial<Ports>,
  say: (line: string) => void,
): Promise<ChosenPorts> {
  const ports = { ...readPorts(dataDir), ...asked };
  const meant = new Set(names.map((name) => ports[name]));
  const reserved = new Map<keyof Ports, ReservedPort>();
  for (const name of names) {
    const preferred = ports[name];
    const isTaken = [...reserved.values()].some(({ port }) => port === preferred);
    const own = isTaken ? undefined : await tryReservePort(preferred);
    const held = own ?? (await reserveNextPort(preferred, meant));
    if (own === undefined) say(`Port ${preferred} (${name}) is busy: using ${held.port}.`);
    reserved.set(name, held);
    ports[name] = held.port;
  }
  writePrivateFile(portsFile(dataDir), JSON.stringify(ports));
  return { ports, release: async (name) => reserved.get(name)?.release() };
}

interface LocalSettings {
  dataDir: string;
  ports: Ports;
  secrets: Secrets;
  development: boolean;
}

/** The settings the person made themselves hold, but for the parts that are made here. */
export function makeLocalConfig({ dataDir, ports, secrets, development }: LocalSettings): Config {
  const inData = (name: string) => join(resolve(dataDir), name);
  const { FEEDERWRIGHT_PUBLIC_URL } = inheritEnvironment({});
  return readConfig(
    inheritEnvironment({
      FEEDERWRIGHT_PORT: String(development ? ports.api : ports.app),
      FEEDERWRIGHT_PUBLIC_URL: FEEDERWRIGHT_PUBLIC_URL ?? `http://127.0.0.1:${ports.app}`,
      FEEDERWRIGHT_DATABASE_HOST: '127.0.0.1',
      FEEDERWRIGHT_DATABASE_PORT: String(ports.mariadb),
      FEEDERWRIGHT_DATABASE_USER: databaseUser,
      FEEDERWRIGHT_DATABASE_PASSWORD: secrets.database,
      FEEDERWRIGHT_DATABASE_NAME: 'feederwright',
      FEEDERWRIGHT_REDIS_HOST: '127.0.0.1',
      FEEDERWRIGHT_REDIS_PORT: String(ports.redis),
      FEEDERWRIGHT_REDIS_PASSWORD: secrets.redis,
      FEEDERWRIGHT_SMTP_HOST: '127.0.0.1',
      FEEDERWRIGHT_SMTP_PORT: String(ports.smtp),
      FEEDERWRIGHT_SESSION_SECRET: secrets.session,
      FEEDERWRIGHT_FILES_DIR: inData('files'),
      FEEDERWRIGHT_MAILBOX_DIR: inData('mailbox'),
      FEEDERWRIGHT_DEMO_ACCOUNTS_FILE: inData('demo-accounts.json'),
      FEEDERWRIGHT_CLIENT_DIR: resolve('dist/client'),
      FEEDERWRIGHT_COMPUTE_FILE: resolve(
        development ? 'workers/compute.ts' : 'dist/server/workers/compute.js',
      ),
      FEEDERWRIGHT_DEMO: 'true',
      FEEDERWRIGHT_PRODUCTION: String(!development),
    }),
  );
}
