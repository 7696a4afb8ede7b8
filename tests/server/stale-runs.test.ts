import type { Response } from 'supertest';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { Database } from '../../db/connection.ts';
import type { ApplicationView } from '../../shared/schemas/applications.ts';
import type { RunView } from '../../shared/schemas/runs.ts';
import { getRow } from '../support/fixture-applications.ts';
import {
  act,
  decide,
  makeConfirmed,
  makeDecidable,
  makeFixtureDesk,
  screen,
  see,
  type FixtureDesk,
} from '../support/fixture-desk.ts';
import { readProblem } from '../support/test-app.ts';

let desk: FixtureDesk;

beforeAll(async () => {
  desk = await makeFixtureDesk();
});

afterAll(() => desk.stop());

// Each test begins with an empty queue.
beforeEach(async () => {
  await desk.deps.db('queue_entries').whereNull('left_at').update({ left_at: new Date() });
  desk.enqueued.length = 0;
});

const withdraw = (publicId: string) =>
  act(desk, 'applicant', publicId, { path: 'withdrawal', body: { reason: 'The site is sold.' } });

/** Requests that wait for the row of a network model. */
async function countWaiting(db: Database): Promise<number> {
  const [rows] = (await db.raw(
    `SELECT COUNT(*) AS waiting FROM information_schema.processlist
     WHERE db = DATABASE() AND command <> 'Sleep' AND info LIKE '%from _network_models_ %for update%'
       AND info NOT LIKE '%information_schema%'`,
  )) as [{ waiting: number }[]];
  return rows[0]!.waiting;
}

async function countDecisions(publicId: string): Promise<number> {
  const { id } = await getRow(desk.deps.db, publicId);
  return (await desk.deps.db('decisions').where({ application_id: id })).length;
}

describe('a stale run', () => {
  it('cannot be decided on after a withdrawal ahead, and the reader is told why', async () => {
    const ahead = await makeDecidable(desk);
    const { publicId, runId } = await makeDecidable(desk);
    expect((await withdraw(ahead.publicId)).status).toBe(200);
    const problem = readProblem(await decide(desk, publicId, runId));
    expect(problem).toMatchObject({ status: 409, code: 'stale-run' });
    const { run } = await see(desk.as.reviewer, publicId);
    expect(run).toMatchObject({ kind: 'official', state: 'queued', stale: false });
    expect(desk.enqueued).toContainEqual({ runId: expect.any(Number), attempt: 0 });

    const old = (await desk.as.reviewer.get(`/api/runs/${runId}`)).body as RunView;
    expect(old).toMatchObject({ stale: true, staleReason: 'Since this run the queue ahead changed' });

    await screen(desk, run!.publicId);
    expect((await decide(desk, publicId, run!.publicId)).body).toMatchObject({ stage: 'approved' });
  });

  it('cannot be decided on once a new model version is published, even before anything is screened again', async () => {
    const { publicId, runId } = await makeDecidable(desk);
    const { db } = desk.deps;
    const [version] = await db('model_versions').where({ id: desk.world.model.versionId });
    const [next] = await db('model_versions').insert({
      model_id: desk.world.model.id,
      number: 2,
      state: 'published',
      model_sha256: version.model_sha256,
    });
    const model = () => db('network_models').where({ id: desk.world.model.id });
    await model().update({ published_version_id: next });
    try {
      const problem = readProblem(await decide(desk, publicId, runId));
      expect(problem).toMatchObject({ status: 409, code: 'stale-run' });
      expect(problem.title).toContain('version 2 of the feeder model was published');
    } finally {
      await model().update({ published_version_id: desk.world.model.versionId });
    }
    expect((await decide(desk, publicId, runId)).status).toBe(200);
  });

  /*
   * Both requests are made to wait for the lock of the network model, in a known order, and are then let go: what was
   * first in line is first (InnoDB gives locks in the order in which they were asked for).
   */
  async function raceInOrder(requests: readonly (() => PromiseLike<Response>)[]): Promise<Response[]> {
    const { db } = desk.deps;
    const sent: Promise<Response>[] = [];
    await db.transaction(async (holder) => {
      await holder('network_models').where({ id: desk.world.model.id }).forUpdate().first('id');
      for (const request of requests) {
        sent.push(Promise.resolve(request()));
        await expect.poll(() => countWaiting(db), { timeout: 4000 }).toBe(sent.length);
      }
    });
    return Promise.all(sent);
  }

  it('is what a withdrawal ahead leaves, when it is first at the lock', async () => {
    const ahead = await makeDecidable(desk);
    const { publicId, runId } = await makeDecidable(desk);
    const [withdrawn, decided] = await raceInOrder([
      () => withdraw(ahead.publicId),
      () => decide(desk, publicId, runId),
    ]);
    expect(withdrawn!.status).toBe(200);
    expect(readProblem(decided!)).toMatchObject({ status: 409, code: 'stale-run' });
    expect(await countDecisions(publicId)).toBe(0);
    const view = await see(desk.as.reviewer, publicId);
    expect(view).toMatchObject({ stage: 'initial-review', run: { kind: 'official', state: 'queued' } });
    expect(view.run!.publicId).not.toBe(runId);
  });

  it('is not what a decision rests on that is first at the lock: it stands, and nothing is screened again', async () => {
    const ahead = await makeDecidable(desk);
    const { publicId, runId } = await makeDecidable(desk);
    const [decided, withdrawn] = await raceInOrder([
      () => decide(desk, publicId, runId),
      () => withdraw(ahead.publicId),
    ]);
    expect([decided!.status, withdrawn!.status]).toEqual([200, 200]);
    expect(await countDecisions(publicId)).toBe(1);
    expect(await see(desk.as.reviewer, publicId)).toMatchObject({
      stage: 'approved',
      run: { publicId: runId },
    });
  });

  it('and a decision raced freely end as one of the two orders, every time', async () => {
    for (let round = 0; round < 3; round += 1) {
      const ahead = await makeDecidable(desk);
      const { publicId, runId } = await makeDecidable(desk);
      const [decided, withdrawn] = await Promise.all([
        decide(desk, publicId, runId),
        withdraw(ahead.publicId),
      ]);
      expect(withdrawn.status).toBe(200);
      const { stage, run } = await see(desk.as.reviewer, publicId);
      const outcome = [decided.status, stage, run!.publicId === runId, await countDecisions(publicId)];
      expect([
        [200, 'approved', true, 1],
        [409, 'initial-review', false, 0],
      ]).toContainEqual(outcome);
    }
  });

  it('that is approved still counts as ahead of those behind it', async () => {
    const ahead = await makeDecidable(desk);
    await decide(desk, ahead.publicId, ahead.runId);
    const { publicId } = await makeConfirmed(desk);
    const { reference } = await see(desk.as.reviewer, ahead.publicId);
    const view: ApplicationView = await see(desk.as.reviewer, publicId);
    expect(view.run!.basis!.ahead).toEqual([reference]);
  });

  it('no longer counts what the published model contains', async () => {
    const ahead = await makeDecidable(desk);
    const { id } = await getRow(desk.deps.db, ahead.publicId);
    const version = desk.deps.db('model_versions').where({ id: desk.world.model.versionId });
    await version.clone().update({ absorbs: JSON.stringify([id]) });
    try {
      const { publicId } = await makeConfirmed(desk);
      expect((await see(desk.as.reviewer, publicId)).run!.basis!.ahead).toEqual([]);
    } finally {
      await version.clone().update({ absorbs: '[]' });
    }
  });
});
