import { join } from 'node:path';
import { isMariadbReady, makeTables, mariadbProcess, type MariadbSettings } from './mariadb.ts';
import { isRedisReady, redisProcess, type RedisServerSettings } from './redis.ts';
import type { Supervision } from './supervision.ts';

interface ServiceSettings {
  dataDir: string;
  logsDir: string;
  ports: { mariadb: number; redis: number };
  secrets: { database: string; redis: string };
  database: string;
  testPrefix?: string;
}

/** MariaDB and Redis of our own, on the loopback, with their files under one directory. */
export async function startServices(supervision: Supervision, settings: ServiceSettings): Promise<void> {
  const { dataDir, ports, secrets } = settings;
  const mariadb: MariadbSettings = {
    dataDir,
    port: ports.mariadb,
    password: secrets.database,
    database: settings.database,
    logFile: join(settings.logsDir, 'mariadb.log'),
    ...(settings.testPrefix === undefined ? {} : { testPrefix: settings.testPrefix }),
  };
  const redis: RedisServerSettings = {
    dataDir,
    port: ports.redis,
    password: secrets.redis,
    logFile: join(settings.logsDir, 'redis.log'),
  };
  await makeTables(dataDir, mariadb.logFile, supervision.run);
  // MariaDB first: what is started last is ended first.
  const mariadbReady = supervision.keep(mariadbProcess(mariadb), () => isMariadbReady(mariadb));
  const redisReady = supervision.keep(redisProcess(redis), () => isRedisReady(redis));
  await Promise.all([mariadbReady, redisReady]);
}
