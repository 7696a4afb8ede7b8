import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { inheritEnvironment, writeEnvironment } from '../../server/config.ts';
import { handIn } from '../support/fixture-applications.ts';
import { makeFixtureWorld } from '../support/fixture-world.ts';
import { makeTestApp, type TestApp } from '../support/test-app.ts';

let desk: TestApp;
let publicId: string;

beforeAll(async () => {
  desk = await makeTestApp();
  const world = await makeFixtureWorld(desk.deps.db);
  publicId = (await handIn(desk.deps.db, world, new Date())).publicId;
});

afterAll(() => desk.stop());

async function verify(): Promise<{ code: number; lines: string[] }> {
  const child = spawn(process.execPath, ['--import', 'tsx', 'workers/verify-audit.ts'], {
    env: inheritEnvironment(writeEnvironment(desk.deps.config)) as NodeJS.ProcessEnv,
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  let text = '';
  child.stdout.on('data', (chunk: Buffer) => (text += chunk.toString('utf8')));
  const [code] = (await once(child, 'close')) as [number];
  return { code, lines: text.trim().split('\n') };
}

describe('the command that verifies the audit trail', () => {
  it('lists each chain and ends with 0 while all is whole', async () => {
    expect(await verify()).toEqual({
      code: 0,
      lines: [`application:${publicId}: 1 entry, whole`, '1 chain, 1 entry in order, 0 broken'],
    });
  });

  it('names a planted edit and ends with 1', async () => {
    await desk.deps.db.raw('DROP TRIGGER audit_entries_no_update');
    await desk.deps.db('audit_entries').where({ seq: 1 }).update({ actor: 'Nobody' });
    expect(await verify()).toEqual({
      code: 1,
      lines: [
        `application:${publicId}: BROKEN at entry 1: what it says is not what was hashed`,
        '1 chain, 0 entries in order, 1 broken',
      ],
    });
  });
});
