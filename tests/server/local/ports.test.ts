import { createServer, type Server } from 'node:net';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { choosePorts } from '../../../server/local/local-config.ts';
import { canConnect, findAnyPort, reserveNextPort, tryReservePort } from '../../../server/local/ports.ts';

const servers: Server[] = [];

function occupy(port: number, host: string): Promise<void> {
  return new Promise((resolve, reject) => {
    const server = createServer();
    servers.push(server);
    server.once('error', reject);
    server.listen({ port, host }, resolve);
  });
}

afterEach(async () => {
  for (const server of servers.splice(0)) await new Promise((resolve) => server.close(resolve));
});

describe('a reserved port', () => {
  it('cannot be taken by another, until it is released', async () => {
    const port = await findAnyPort();
    const reserved = await tryReservePort(port);
    expect(await tryReservePort(port)).toBeUndefined();
    await reserved!.release();
    expect(await canConnect({ port })).toBe(false);
    await occupy(port, '127.0.0.1');
  });

  it.each(['127.0.0.1', '0.0.0.0'])('is not given, when somebody listens on it at %s', async (host) => {
    const port = await findAnyPort();
    await occupy(port, host);
    expect(await tryReservePort(port)).toBeUndefined();
    const next = await reserveNextPort(port, new Set());
    expect(next.port).toBeGreaterThan(port);
    await next.release();
  });

  it('passes over one that is meant for something else', async () => {
    const port = await findAnyPort();
    const next = await reserveNextPort(port, new Set([port + 1]));
    expect(next.port).toBeGreaterThan(port + 1);
    await next.release();
  });

  it('says which range was busy, when it comes to the end of all ports', async () => {
    await expect(reserveNextPort(65535, new Set())).rejects.toThrow(/Ports 65535 to 65535 are all busy/);
  });
});

describe('choosePorts', () => {
  let dataDir: string;

  beforeEach(() => {
    dataDir = mkdtempSync(join(tmpdir(), 'feederwright-ports-'));
  });

  afterEach(() => rmSync(dataDir, { recursive: true }));

  it('moves only what is busy, when another desk holds one of the ports', async () => {
    const app = await findAnyPort();
    const wanted = { app, mariadb: app + 1, redis: app + 2 };
    writeFileSync(join(dataDir, 'ports.json'), JSON.stringify(wanted));
    await occupy(app, '127.0.0.1');
    const said: string[] = [];
    const names = ['app', 'mariadb', 'redis'] as const;
    const { ports, release } = await choosePorts(dataDir, names, {}, (line) => said.push(line));
    expect(ports).toMatchObject({ mariadb: wanted.mariadb, redis: wanted.redis });
    expect(said).toEqual([`Port ${app} (app) is busy: using ${ports.app}.`]);
    for (const name of names) await release(name);
  });

  it('gives two desks that start at once different ports, and remembers them', async () => {
    const app = await findAnyPort();
    const other = mkdtempSync(join(dataDir, 'other-'));
    const choose = (dir: string, asked: object) => choosePorts(dir, ['app'], asked, () => undefined);
    const [first, second] = await Promise.all([choose(dataDir, { app }), choose(other, { app })]);
    expect(first.ports.app).not.toBe(second.ports.app);
    for (const desk of [first, second]) await desk.release('app');
    const again = await choose(other, {});
    expect(again.ports.app).toBe(second.ports.app);
    await again.release('app');
  });
});
