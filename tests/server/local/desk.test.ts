import { spawn } from 'node:child_process';
import { existsSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { inheritEnvironment } from '../../../server/config.ts';
import { canConnect, findAnyPort } from '../../../server/local/ports.ts';
import { startProcess, type RunningProcess } from '../../../server/local/processes.ts';
import { resetDesk } from '../../../server/local/reset.ts';
import { makeTestDirectory, removeTestDirectory } from '../../support/directories.ts';

interface Ports {
  app: number;
  mariadb: number;
  redis: number;
  smtp: number;
}

let dir: string;
let dataDir: string;
let ports: Ports;
let starts: RunningProcess[] = [];

beforeEach(async () => {
  dir = makeTestDirectory();
  dataDir = join(dir, 'data');
  ports = {
    app: await findAnyPort(),
    mariadb: await findAnyPort(),
    redis: await findAnyPort(),
    smtp: await findAnyPort(),
  };
  mkdirSync(dataDir);
  writeFileSync(join(dataDir, 'ports.json'), JSON.stringify(ports));
});

afterEach(async () => {
  for (const started of starts) await started.stop();
  starts = [];
  removeTestDirectory(dir);
});

function startDesk(...more: string[]): RunningProcess {
  const desk = startProcess({
    name: 'desk',
    command: process.execPath,
    args: ['--import', 'tsx', 'tests/support/stand-in-desk.ts', dataDir, String(ports.app), ...more],
    env: inheritEnvironment({}),
    logFile: join(dir, 'desk.log'),
    stopSeconds: 30,
  });
  starts.push(desk);
  return desk;
}

async function waitFor(what: string, isSo: () => boolean | Promise<boolean>): Promise<void> {
  const end = Date.now() + 75_000;
  while (!(await isSo())) {
    if (Date.now() > end)
      throw new Error(`Waited 75 s in vain: ${what}\n${readFileSync(join(dir, 'desk.log'))}`);
    await sleep(30);
  }
}

async function startAndWait(): Promise<RunningProcess> {
  const desk = startDesk();
  await waitFor(
    'the desk says that it is there',
    () => desk.hasExited() || desk.tail(50).includes('Ctrl-C ends it'),
  );
  return desk;
}

const readDiary = () => readFileSync(join(dataDir, 'diary.txt'), 'utf8').trim().split('\n');
const readAnswer = async (port: number) => (await fetch(`http://127.0.0.1:${port}/`)).text();
const listOpen = async () => {
  const open = await Promise.all(Object.values(ports).map((port) => canConnect({ port })));
  return Object.values(ports).filter((_port, index) => open[index]);
};

describe('the desk on one machine', () => {
  it('prints its own address first and the demo accounts after it, and answers there', async () => {
    const desk = await startAndWait();
    const output = desk.tail(50);
    expect(output.match(/https?:\/\/\S+/)?.[0]).toBe(`http://127.0.0.1:${ports.app}`);
    expect(output).toMatch(/reviewer@desk\.example\s+stand-in/);
    expect(await readAnswer(ports.app)).toBe('stand-in');
    expect(readDiary().find((line) => line.startsWith('worker began'))).toMatch(/ UTC$/);
  });

  it('ends server, worker and services in that order and nothing else, when it is interrupted', async () => {
    const stranger = spawn('sleep', ['60'], { stdio: 'ignore' });
    const desk = await startAndWait();
    expect(await listOpen()).toHaveLength(4);
    process.kill(desk.pid, 'SIGINT');
    expect(await desk.exited).toEqual({ code: 0, signal: null });
    expect(readDiary().slice(-2)).toEqual(['server ended', 'worker ended']);
    expect(await listOpen()).toEqual([]);
    expect(readFileSync(join(dataDir, 'logs/mariadb.log'), 'utf8')).toMatch(/Shutdown complete\s*$/);
    expect(stranger.exitCode).toBeNull();
    stranger.kill();
  });

  it('starts again on the same ports with the same passwords, when it was killed', async () => {
    const desk = await startAndWait();
    const secrets = readFileSync(join(dataDir, 'secrets.json'), 'utf8');
    await desk.kill();
    const again = await startAndWait();
    expect(again.tail(50)).toContain('Ctrl-C ends it');
    expect(again.tail(50)).not.toContain('is busy');
    expect(readFileSync(join(dataDir, 'secrets.json'), 'utf8')).toBe(secrets);
    expect(await readAnswer(ports.app)).toBe('stand-in');
    expect(await listOpen()).toHaveLength(4);
  });

  it('starts the worker again, when it dies', async () => {
    const desk = await startAndWait();
    const workers = () => readDiary().filter((line) => line.startsWith('worker began'));
    const [first = ''] = workers();
    process.kill(Number(first.split(' ')[2]), 'SIGKILL');
    await waitFor('a second worker begins', () => workers().length === 2);
    expect(desk.tail(50)).toContain('worker ended (signal SIGKILL); starting it again in 0.5 s.');
  });

  it('takes the next free port and says so, when its own is busy', async () => {
    const other = createServer();
    await new Promise<void>((resolve) => other.listen(ports.app, '127.0.0.1', resolve));
    const desk = await startAndWait();
    const output = desk.tail(50);
    const taken = Number(/is busy: using (\d+)/.exec(output)?.[1]);
    expect(output).toContain(`Port ${ports.app} (app) is busy: using ${taken}.`);
    expect(output.match(/https?:\/\/\S+/)?.[0]).toBe(`http://127.0.0.1:${taken}`);
    expect(await readAnswer(taken)).toBe('stand-in');
    await new Promise((resolve) => other.close(resolve));
  });

  it('refuses a second start and a reset, while one runs on the same directory', async () => {
    await startAndWait();
    const second = startDesk();
    expect(await second.exited).toEqual({ code: 1, signal: null });
    expect(second.tail()).toContain(`already runs on ${dataDir}: http://127.0.0.1:${ports.app}`);
    const said: string[] = [];
    expect(await resetDesk(dataDir, true, (line) => said.push(line))).toBe(1);
    expect(said.join('\n')).toContain('end it first');
    expect(existsSync(join(dataDir, 'secrets.json'))).toBe(true);
  });

  it('makes its database anew, when an earlier start was killed while it made it', async () => {
    const half = join(dataDir, 'mariadb.half-4711');
    mkdirSync(join(half, 'mysql'), { recursive: true });
    writeFileSync(join(half, 'ibdata1'), 'broken off');
    await startAndWait();
    expect(existsSync(half)).toBe(false);
    expect(await readAnswer(ports.app)).toBe('stand-in');
  });

  it('makes tables and demo anew, when the first start was killed before the demo was whole', async () => {
    const desk = startDesk();
    const mark = join(dataDir, 'first-start');
    await waitFor('the tables are there', () => existsSync(join(dataDir, 'mariadb')));
    expect(existsSync(mark)).toBe(true);
    writeFileSync(join(dataDir, 'mariadb', 'of-the-first-start'), '');
    await desk.kill();
    const again = await startAndWait();
    expect(again.tail(50)).toContain('Making the tables and the demo');
    expect(existsSync(join(dataDir, 'mariadb', 'of-the-first-start'))).toBe(false);
    expect(existsSync(mark)).toBe(false);
    writeFileSync(join(dataDir, 'mariadb', 'of-the-second-start'), '');
    await again.stop();
    const third = await startAndWait();
    expect(third.tail(50)).not.toContain('Making the tables');
    expect(existsSync(join(dataDir, 'mariadb', 'of-the-second-start'))).toBe(true);
  });

  it('gives up and ends what it started, when the worker cannot run at all', async () => {
    const desk = startDesk('no-such-worker');
    expect(await desk.exited).toEqual({ code: 1, signal: null });
    expect(desk.tail(40)).toContain('worker ended with exit code 1 before it was ready.');
    expect(desk.tail(40)).toContain('no-such-worker.mjs');
    expect(await listOpen()).toEqual([]);
  });

  it('names the program and shows its last lines, when one cannot start', async () => {
    mkdirSync(join(dataDir, 'mariadb'));
    const desk = startDesk();
    expect(await desk.exited).toEqual({ code: 1, signal: null });
    expect(desk.tail(40)).toMatch(/MariaDB ended with exit code \d+ before it was ready/);
    expect(desk.tail(40)).toContain('mysql');
    expect(await listOpen()).toEqual([]);
  });
});

describe('resetDesk', () => {
  it('removes the whole directory, when it was made by a start and nothing runs on it', async () => {
    const desk = await startAndWait();
    await desk.stop();
    expect(await resetDesk(dataDir, true, () => undefined)).toBe(0);
    expect(existsSync(dataDir)).toBe(false);
  });

  it('removes nothing, when the directory was not made by a start', async () => {
    rmSync(join(dataDir, 'ports.json'));
    writeFileSync(join(dataDir, 'letter.txt'), 'mine');
    const said: string[] = [];
    expect(await resetDesk(dataDir, true, (line) => said.push(line))).toBe(1);
    expect(said.join('\n')).toContain('nothing was removed');
    expect(existsSync(join(dataDir, 'letter.txt'))).toBe(true);
  });
});
