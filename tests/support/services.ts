import { databaseUser } from '../../server/local/mariadb.ts';
import { findAnyPort } from '../../server/local/ports.ts';
import { keepSecrets, makePrivateDirectory } from '../../server/local/private-files.ts';
import { startServices } from '../../server/local/services.ts';
import { Supervision } from '../../server/local/supervision.ts';
import { makeTestDirectory, removeTestDirectory } from './directories.ts';

export const testDatabasePrefix = 'feederwright_test_';

export interface TestServices {
  /** Removed when the services end; tests may put their own files into it. */
  directory: string;
  database: { host: string; port: number; user: string; password: string };
  redis: { host: string; port: number; password: string };
}

/** MariaDB and Redis that only this test run knows. */
export async function startTestServices(): Promise<{ services: TestServices; stop(): Promise<void> }> {
  const directory = makeTestDirectory();
  const logsDir = `${directory}/logs`;
  makePrivateDirectory(logsDir);
  const secrets = keepSecrets(directory);
  const ports = { mariadb: await findAnyPort(), redis: await findAnyPort() };
  const supervision = new Supervision({ say: (line) => console.error(line), record: () => undefined });
  const stop = async () => {
    await supervision.stop();
    removeTestDirectory(directory);
  };
  try {
    await startServices(supervision, {
      dataDir: directory,
      logsDir,
      ports,
      secrets,
      database: `${testDatabasePrefix}first`,
      testPrefix: testDatabasePrefix,
    });
  } catch (error) {
    await stop();
    throw error;
  }
  const services: TestServices = {
    directory,
    database: { host: '127.0.0.1', port: ports.mariadb, user: databaseUser, password: secrets.database },
    redis: { host: '127.0.0.1', port: ports.redis, password: secrets.redis },
  };
  return { services, stop };
}

/** How the test run tells its test files where the services are. */
export function writeServices(services: TestServices): Record<string, string> {
  return { FEEDERWRIGHT_TEST_SERVICES: JSON.stringify(services) };
}

export function getTestServices(): TestServices {
  const text = process.env.FEEDERWRIGHT_TEST_SERVICES;
  if (text === undefined) {
    throw new Error(
      'FEEDERWRIGHT_TEST_SERVICES: got nothing, expected what tests/support/global-setup.ts sets',
    );
  }
  return JSON.parse(text) as TestServices;
}
