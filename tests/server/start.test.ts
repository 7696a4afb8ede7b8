import { connect, type Socket } from 'node:net';
import { join } from 'node:path';
import { mkdtempSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { inheritEnvironment, readConfig, writeEnvironment, type Config } from '../../server/config.ts';
import { findAnyPort } from '../../server/local/ports.ts';
import { startProcess, type RunningProcess } from '../../server/local/processes.ts';
import { sourceProgram } from '../../server/local/programs.ts';
import { makeTestDatabase, type TestDatabase } from '../support/database.ts';
import { getTestServices } from '../support/services.ts';

let database: TestDatabase;
let config: Config;
let directory: string;

beforeAll(async () => {
  const services = getTestServices();
  database = await makeTestDatabase();
  directory = mkdtempSync(join(services.directory, 'start-'));
  config = {
    ...readConfig({
      FEEDERWRIGHT_PORT: String(await findAnyPort()),
      FEEDERWRIGHT_DATABASE_PORT: String(services.database.port),
      FEEDERWRIGHT_DATABASE_PASSWORD: services.database.password,
      FEEDERWRIGHT_REDIS_PORT: String(services.redis.port),
      FEEDERWRIGHT_REDIS_PASSWORD: services.redis.password,
      FEEDERWRIGHT_SMTP_PORT: '9',
      FEEDERWRIGHT_SESSION_SECRET: services.database.password,
      FEEDERWRIGHT_FILES_DIR: join(directory, 'files'),
      FEEDERWRIGHT_MAILBOX_DIR: join(directory, 'mailbox'),
    }),
    database: database.settings,
  };
});
afterAll(() => database.drop());

function start(name: string): RunningProcess {
  const { command, args } = sourceProgram('server/start.ts');
  const env = inheritEnvironment(writeEnvironment(config));
  return startProcess({ name, command, args, env, logFile: join(directory, `${name}.log`) });
}

async function waitForLine(running: RunningProcess, words: string): Promise<void> {
  const end = Date.now() + 20_000;
  while (!running.tail(100).includes(words)) {
    if (Date.now() > end) throw new Error(`"${words}" was not written within 20 s:\n${running.tail(100)}`);
    await new Promise((resolve) => setTimeout(resolve, 30));
  }
}

/** A request whose headers never end: what an event stream is to a server that wants to close. */
function openEndlessRequest(): Promise<Socket> {
  return new Promise((resolve, reject) => {
    const socket = connect(config.port, config.host, () => {
      socket.write('GET /api/health HTTP/1.1\r\nHost: desk.example\r\n');
      resolve(socket);
    });
    socket.once('error', reject);
  });
}

describe('the server as a process', () => {
  it('says when it is ready, answers, and ends in order at SIGTERM though a connection stays open', async () => {
    const server = start('server');
    await waitForLine(server, `ready http://127.0.0.1:${config.port}\n`.trim());
    const answer = await fetch(`http://127.0.0.1:${config.port}/api/health`);
    expect(await answer.json()).toEqual({ ok: true });
    const socket = await openEndlessRequest();
    const closed = new Promise((resolve) => socket.once('close', resolve));
    process.kill(server.pid, 'SIGTERM');
    expect(await server.exited).toEqual({ code: 0, signal: null });
    await closed;
    await expect(fetch(`http://127.0.0.1:${config.port}/api/health`)).rejects.toThrow();
  });

  it('ends with an exit code and a reason when its port is taken', async () => {
    const first = start('first');
    await waitForLine(first, 'ready');
    const second = start('second');
    expect((await second.exited).code).toBe(1);
    expect(second.tail(20)).toContain(`cannot listen on 127.0.0.1:${config.port}`);
    await first.stop();
  });
});
