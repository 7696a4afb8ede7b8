import { createConnection } from 'node:net';
import { join, resolve } from 'node:path';
import { inheritEnvironment } from '../config.ts';
import { makePrivateDirectory, writePrivateFile } from './private-files.ts';
import type { ProcessSpec } from './processes.ts';

export interface RedisServerSettings {
  dataDir: string;
  port: number;
  password: string;
  logFile: string;
}

/** The password stands in a file of mode 600: on the command line everybody could read it. */
export function redisProcess(settings: RedisServerSettings): ProcessSpec {
  const directory = join(resolve(settings.dataDir), 'redis');
  makePrivateDirectory(directory);
  const configFile = join(directory, 'redis.conf');
  writePrivateFile(
    configFile,
    [
      'bind 127.0.0.1',
      `port ${settings.port}`,
      'protected-mode yes',
      `requirepass ${settings.password}`,
      `dir "${directory}"`,
      'daemonize no',
      'save ""',
      'appendonly yes',
      'appendfsync everysec',
      'aof-load-truncated yes',
      'maxmemory-policy noeviction',
      '',
    ].join('\n'),
  );
  return {
    name: 'Redis',
    command: 'redis-server',
    args: [configFile],
    env: inheritEnvironment({}),
    logFile: settings.logFile,
    stopSeconds: 20,
  };
}

/** PONG, and not LOADING: while it reads its file it accepts connections and refuses commands. */
export function isRedisReady(settings: RedisServerSettings): Promise<boolean> {
  return new Promise((done) => {
    let answer = '';
    const socket = createConnection({ host: '127.0.0.1', port: settings.port });
    socket.setTimeout(2000, () => socket.destroy());
    socket.once('connect', () => socket.write(`AUTH ${settings.password}\r\nPING\r\nQUIT\r\n`));
    socket.on('data', (bytes) => (answer += bytes.toString('utf8')));
    socket.on('error', () => socket.destroy());
    socket.once('close', () => done(answer.includes('+PONG')));
  });
}
