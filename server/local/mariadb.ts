import { existsSync, readdirSync, renameSync, rmSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { createConnection } from 'mysql2/promise';
import { inheritEnvironment } from '../config.ts';
import { socketPath } from './claim.ts';
import { makePrivateDirectory, writePrivateFile } from './private-files.ts';
import type { ProcessSpec } from './processes.ts';
import type { RunOnce } from './supervision.ts';

export interface MariadbSettings {
  /** Holds `mariadb/` with the tables, the socket and the file of grants. */
  dataDir: string;
  port: number;
  password: string;
  /** The application's database. */
  database: string;
  /** Tests make databases of their own, all under this beginning. */
  testPrefix?: string;
  logFile: string;
}

export const databaseUser = 'feederwright';

function asRoot(): string[] {
  return process.getuid?.() === 0 ? ['--user=root'] : [];
}

function tablesDirectory(dataDir: string): string {
  return join(resolve(dataDir), 'mariadb');
}

/**
 * Makes the server's own tables where there are none yet, under another name first: a directory of the right
 * name is a whole one, whatever was killed before.
 */
export async function makeTables(dataDir: string, logFile: string, run: RunOnce): Promise<void> {
  const tables = tablesDirectory(dataDir);
  for (const name of readdirSync(dataDir).filter((found) => found.startsWith('mariadb.half'))) {
    // Its maker may be a moment from its end and still write.
    rmSync(join(dataDir, name), { recursive: true, force: true, maxRetries: 20, retryDelay: 100 });
  }
  if (existsSync(tables)) return;
  const half = `${tables}.half-${process.pid}`;
  makePrivateDirectory(half);
  await run({
    name: 'mariadb-install-db',
    command: 'mariadb-install-db',
    args: [
      '--no-defaults',
      `--datadir=${half}`,
      '--skip-test-db',
      '--auth-root-authentication-method=socket',
      ...asRoot(),
    ],
    env: inheritEnvironment({}),
    logFile,
  });
  renameSync(half, tables);
}

/** Read by the server at each of its starts, before it takes connections: can be run again and again. */
function writeGrants(settings: MariadbSettings): string {
  const path = join(resolve(settings.dataDir), 'grants.sql');
  const account = `'${databaseUser}'@'127.0.0.1'`;
  const lines = [
    `CREATE DATABASE IF NOT EXISTS \`${settings.database}\` CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_ci;`,
    `CREATE USER IF NOT EXISTS ${account};`,
    `ALTER USER ${account} IDENTIFIED BY '${settings.password}';`,
    `GRANT ALL ON \`${settings.database}\`.* TO ${account};`,
  ];
  if (settings.testPrefix !== undefined) {
    lines.push(`GRANT ALL ON \`${settings.testPrefix.replaceAll('_', '\\_')}%\`.* TO ${account};`);
  }
  writePrivateFile(path, `${lines.join('\n')}\n`);
  return path;
}

export function mariadbProcess(settings: MariadbSettings): ProcessSpec {
  const tables = tablesDirectory(settings.dataDir);
  return {
    name: 'MariaDB',
    command: 'mariadbd',
    args: [
      '--no-defaults',
      ...asRoot(),
      `--datadir=${tables}`,
      '--bind-address=127.0.0.1',
      `--port=${settings.port}`,
      `--socket=${socketPath(settings.dataDir, 'mariadb.sock')}`,
      `--pid-file=${join(tables, 'mariadb.pid')}`,
      `--init-file=${writeGrants(settings)}`,
      '--default-time-zone=+00:00',
      '--skip-name-resolve',
      '--character-set-server=utf8mb4',
      '--collation-server=utf8mb4_unicode_ci',
      '--max-allowed-packet=256M',
      '--transaction-isolation=READ-COMMITTED',
      '--local-infile=0',
      '--sql-mode=TRADITIONAL',
      '--plugin-maturity=stable',
    ],
    env: inheritEnvironment({}),
    logFile: settings.logFile,
    stopSeconds: 60,
  };
}

/** Whether the application's account gets in; what the server itself refuses is thrown. */
export async function isMariadbReady(settings: MariadbSettings): Promise<boolean> {
  try {
    const connection = await createConnection({
      host: '127.0.0.1',
      port: settings.port,
      user: databaseUser,
      password: settings.password,
      database: settings.database,
    });
    await connection.end();
    return true;
  } catch (error) {
    // An answer of the server's own has a state; without one the network has failed, as it does until it listens.
    if ((error as { sqlState?: string }).sqlState === undefined) return false;
    throw error;
  }
}
