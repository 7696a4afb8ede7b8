import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { getBlob, insertBlob } from '../../db/repositories/blobs.ts';
import { inheritEnvironment, readConfig, writeEnvironment } from '../../server/config.ts';
import { compareRun } from '../../workers/compare-run.ts';
import { screenRun } from '../../workers/jobs/screen.ts';
import { makeTestDatabase, type TestDatabase } from '../support/database.ts';
import { insertFixtureApplication, insertFixtureRun, machineProject } from '../support/fixture-runs.ts';
import { makeScreening } from '../support/fixture-screening.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';

let test: TestDatabase;
let world: FixtureWorld;

beforeAll(async () => {
  test = await makeTestDatabase();
  world = await makeFixtureWorld(test.db);
});
afterAll(() => test.drop());

async function finishRun(): Promise<{ id: number; publicId: string }> {
  const application = await insertFixtureApplication(test.db, world, { project: machineProject() });
  const run = await insertFixtureRun(test.db, application);
  await screenRun(makeScreening(test.db), run.id);
  return run;
}

async function compare(publicId: string): Promise<{ code: number; said: string }> {
  const lines: string[] = [];
  const code = await compareRun(test.db, publicId, (line) => lines.push(line));
  return { code, said: lines.join('\n') };
}

it('finds the same hash when it computes a stored run again', async () => {
  const { id, publicId } = await finishRun();
  const { result_sha256: sha256 } = await test.db('runs').where({ id }).first('result_sha256');
  const { code, said } = await compare(publicId);
  expect(code).toBe(0);
  expect(said.split((sha256 as Buffer).toString('hex'))).toHaveLength(3);
  expect(said).toContain('The results are the same.');
});

it('finds a stored result that somebody changed, and prints both hashes', async () => {
  const { id, publicId } = await finishRun();
  const { result_sha256: sha256 } = await test.db('runs').where({ id }).first('result_sha256');
  const bytes = (await getBlob(test.db, sha256 as Buffer))
    .toString()
    .replace('"warnings":[', '"warnings":["x",');
  const planted = await insertBlob(test.db, Buffer.from(bytes));
  await test.db('runs').where({ id }).update({ result_sha256: planted });

  const { code, said } = await compare(publicId);

  expect(code).toBe(1);
  expect(said).toContain(planted.toString('hex'));
  expect(said).toContain((sha256 as Buffer).toString('hex'));
  expect(said).toContain('DIFFER');
  expect(createHash('sha256').update(bytes).digest().equals(planted)).toBe(true);
});

it('says so when there is nothing to compare', async () => {
  const application = await insertFixtureApplication(test.db, world);
  const { publicId } = await insertFixtureRun(test.db, application);
  expect(await compare(publicId)).toMatchObject({ code: 2 });
  expect(await compare('no-such-run')).toMatchObject({ code: 2 });
});

it('is a program that ends with the code of what it found', async () => {
  const { publicId } = await finishRun();
  const config = readConfig({
    FEEDERWRIGHT_DATABASE_PORT: String(test.settings.port),
    FEEDERWRIGHT_DATABASE_PASSWORD: test.settings.password,
    FEEDERWRIGHT_DATABASE_NAME: test.settings.name,
    FEEDERWRIGHT_REDIS_PORT: '1',
    FEEDERWRIGHT_REDIS_PASSWORD: 'unused',
    FEEDERWRIGHT_SMTP_PORT: '1',
    FEEDERWRIGHT_SESSION_SECRET: 'x'.repeat(32),
    FEEDERWRIGHT_FILES_DIR: '/nowhere',
    FEEDERWRIGHT_MAILBOX_DIR: '/nowhere',
  });
  const env = inheritEnvironment(writeEnvironment(config));
  const start = (...args: string[]) =>
    spawnSync(process.execPath, ['--import', 'tsx', 'workers/rerun.ts', ...args], { env, encoding: 'utf8' });
  expect(start(publicId)).toMatchObject({ status: 0, stdout: expect.stringContaining('the same') });
  expect(start()).toMatchObject({ status: 2, stderr: expect.stringContaining('expected the public id') });
});
