import { afterAll, beforeAll, beforeEach, expect, it } from 'vitest';
import { createLog } from '../../server/log.ts';
import { mostAttempts } from '../../workers/jobs/screen-deps.ts';
import { sweepRuns } from '../../workers/sweep.ts';
import { makeTestDatabase, type TestDatabase } from '../support/database.ts';
import { insertFixtureApplication, insertFixtureRun } from '../support/fixture-runs.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';

let test: TestDatabase;
let world: FixtureWorld;

beforeAll(async () => {
  test = await makeTestDatabase();
  world = await makeFixtureWorld(test.db);
});
afterAll(() => test.drop());
beforeEach(async () => {
  await test.db('applications').update({ run_id: null });
  await test.db('runs').delete();
});

const now = new Date('2026-03-02T15:00:00Z');
const secondsAgo = (seconds: number) => new Date(now.getTime() - seconds * 1000);

async function insertRun(changes: object): Promise<number> {
  const application = await insertFixtureApplication(test.db, world);
  const { id } = await insertFixtureRun(test.db, application, secondsAgo(1));
  await test.db('runs').where({ id }).update(changes);
  return id;
}

async function sweep(isRedisThere = true): Promise<{ runId: number; attempt: number }[]> {
  const enqueued: { runId: number; attempt: number }[] = [];
  await sweepRuns({
    db: test.db,
    log: createLog('silent', 'test'),
    now: () => now,
    queuedGraceSeconds: 30,
    queue: {
      async tryEnqueue(runId, attempt) {
        enqueued.push({ runId, attempt });
        return isRedisThere;
      },
    },
  });
  return enqueued;
}

const getRow = (id: number) => test.db('runs').where({ id }).first();

it('enqueues a run that still waits after the grace period, and none that is younger', async () => {
  const lost = await insertRun({ queued_at: secondsAgo(31) });
  await insertRun({ queued_at: secondsAgo(29) });
  expect(await sweep()).toEqual([{ runId: lost, attempt: 0 }]);
});

it('enqueues a retry when it is due, and not before', async () => {
  const due = await insertRun({ attempt: 2, next_attempt_at: now });
  await insertRun({ attempt: 1, queued_at: secondsAgo(300), next_attempt_at: secondsAgo(-1) });
  expect(await sweep()).toEqual([{ runId: due, attempt: 2 }]);
});

it('puts a run whose lease has passed back into the queue, and leaves one whose lease holds', async () => {
  const token = Buffer.alloc(16, 3);
  const abandoned = await insertRun({ state: 'running', attempt: 1, token, lease_until: secondsAgo(1) });
  const held = await insertRun({ state: 'running', attempt: 1, token, lease_until: secondsAgo(-1) });
  expect(await sweep()).toEqual([{ runId: abandoned, attempt: 1 }]);
  expect(await getRow(abandoned)).toMatchObject({ state: 'queued', token: null, lease_until: null });
  expect(await getRow(held)).toMatchObject({ state: 'running' });
});

it('parks a run that was abandoned in its last attempt, with words for everyone and the cause for staff', async () => {
  const token = Buffer.alloc(16, 3);
  const lease_until = secondsAgo(1);
  const id = await insertRun({ state: 'running', attempt: mostAttempts, token, lease_until });
  expect(await sweep()).toEqual([]);
  const row = await getRow(id);
  expect(row).toMatchObject({ state: 'failed', token: null, finished_at: now });
  expect(row.error).toContain('An administrator sees why');
  expect(row.error_detail).toContain('worker stopped');
});

it('finds nothing to do about runs that are finished or failed', async () => {
  await insertRun({ state: 'finished', queued_at: secondsAgo(999) });
  await insertRun({ state: 'failed', queued_at: secondsAgo(999), lease_until: secondsAgo(900) });
  expect(await sweep()).toEqual([]);
});

it('does not go on asking a Redis that takes nothing', async () => {
  const first = await insertRun({ queued_at: secondsAgo(60) });
  await insertRun({ queued_at: secondsAgo(60) });
  expect(await sweep(false)).toEqual([{ runId: first, attempt: 0 }]);
});
