import type { Logger } from 'pino';
import redis, { type ClientOpts, type RedisClient } from 'redis';
import type { RedisSettings } from './config.ts';

const longestRetryMs = 1000;

/** Goes on trying for ever: a Redis that restarts is no reason for a server or a worker to end. */
export function redisOptions(settings: RedisSettings): ClientOpts {
  return {
    host: settings.host,
    port: settings.port,
    password: settings.password,
    retry_strategy: ({ attempt }) => Math.min(50 * 2 ** Math.min(attempt, 6), longestRetryMs),
  };
}

/** Without a listener an 'error' would end the process; a refused password is the one that is left to see here. */
export function connectRedis(settings: RedisSettings, log: Logger, what: string): RedisClient {
  const client = redis.createClient(redisOptions(settings));
  client.on('error', (error) => log.error({ err: error }, `Redis, ${what}`));
  client.on('end', () => log.warn(`Redis, ${what}: the connection is gone`));
  return client;
}
