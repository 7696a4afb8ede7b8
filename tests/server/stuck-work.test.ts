import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { inTransaction } from '../../db/connection.ts';
import { claimRun } from '../../db/repositories/run-turns.ts';
import { queueMail } from '../../server/services/outbox.ts';
import { verifyAudit } from '../../server/services/audit-verification.ts';
import type { StuckWorkView } from '../../shared/schemas/stuck-work.ts';
import { handIn } from '../support/fixture-applications.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';
import { makeTestApp, readProblem, signInAs, type Browser, type TestApp } from '../support/test-app.ts';

let desk: TestApp;
let world: FixtureWorld;
let administrator: Browser;
beforeAll(async () => {
  desk = await makeTestApp();
  world = await makeFixtureWorld(desk.deps.db);
  administrator = await signInAs(desk.app, desk.people.administrator);
});
afterAll(() => desk.stop());

const parkedAt = new Date('2026-03-02T15:00:00Z');

async function parkRun() {
  const { publicId, preliminaryRunId: id } = await handIn(desk.deps.db, world, new Date());
  const words = { error: 'Could not be completed', error_detail: 'Attempt 5: the disk is full' };
  await desk.deps
    .db('runs')
    .where({ id })
    .update({ state: 'failed', attempt: 5, finished_at: parkedAt, ...words });
  const run = (await desk.deps.db('runs').where({ id }).first('public_id')) as { public_id: string };
  return { id, runId: run.public_id, applicationId: publicId };
}

async function parkMail(key: string): Promise<string> {
  const { publicId } = await handIn(desk.deps.db, world, new Date());
  const row = (await desk.deps.db('applications').where({ public_id: publicId }).first('id')) as {
    id: number;
  };
  const payload = {
    reference: 'FX-1',
    projectName: 'Solar',
    contactName: 'Ada',
    applicationPath: `/projects/${publicId}`,
    reason: 'Sold',
  };
  const mail = {
    kind: 'withdrawn' as const,
    dedupeKey: key,
    applicationId: row.id,
    recipient: 'ada@saltwick.example',
    payload,
  };
  await inTransaction(desk.deps.db, (trx) => queueMail(trx, { now: parkedAt }, mail));
  const words = { state: 'parked', attempts: 12, error: 'Connection refused' };
  await desk.deps.db('outbox').where({ dedupe_key: key }).update(words);
  return publicId;
}

const see = async (browser: Browser) =>
  (await browser.get('/api/stuck-work').expect(200)).body as StuckWorkView;

async function listBrokenChains(): Promise<string[]> {
  const broken: string[] = [];
  for await (const { chain, fault } of verifyAudit(desk.deps.db)) if (fault !== null) broken.push(chain);
  return broken;
}

describe('a run that is parked', () => {
  it('is shown to an administrator and an auditor with why, and to no other', async () => {
    const { runId, applicationId } = await parkRun();
    const shown = (await see(administrator)).runs.find(({ publicId }) => publicId === runId);
    expect(shown).toMatchObject({
      applicationId,
      attempts: 5,
      error: 'Could not be completed',
      errorDetail: 'Attempt 5: the disk is full',
      since: parkedAt.toISOString(),
    });
    const auditor = await signInAs(desk.app, desk.people.auditor);
    expect((await see(auditor)).runs.map(({ publicId }) => publicId)).toContain(runId);
    await auditor.send('post', `/api/runs/${runId}/retry`, {}).expect(403);
    await (await signInAs(desk.app, desk.people.reviewer)).get('/api/stuck-work').expect(403);
  });

  it('begins anew when the administrator tries it again, and the record says so', async () => {
    const { id, runId, applicationId } = await parkRun();
    const left = (await administrator.send('post', `/api/runs/${runId}/retry`, {}).expect(200))
      .body as StuckWorkView;
    expect(left.runs.map(({ publicId }) => publicId)).not.toContain(runId);
    expect(left.waiting.runs).toBeGreaterThan(0);
    expect(
      await desk.deps.db('runs').where({ id }).first('state', 'attempt', 'error', 'error_detail'),
    ).toEqual({
      state: 'queued',
      attempt: 0,
      error: null,
      error_detail: null,
    });
    expect(desk.enqueued).toContainEqual({ runId: id, attempt: 0 });
    const entry = (await desk.deps
      .db('audit_entries')
      .where({ chain: `application:${applicationId}`, action: 'retry-run' })
      .first('actor', 'subject', 'before_json')) as Record<string, string>;
    expect(entry).toMatchObject({ subject: `run:${runId}` });
    expect(entry.actor).toContain('administrator');
    expect(entry.before_json).toContain('the disk is full');
    expect(await listBrokenChains()).toEqual([]);
    const [now, token] = [new Date(), Buffer.alloc(16, 1)];
    const turn = await claimRun(desk.deps.db, { runId: id, token, now, leaseUntil: now });
    expect(turn?.attempt).toBe(1);
  });

  it('is begun anew once, when two try it again', async () => {
    const { runId } = await parkRun();
    const again = () => administrator.send('post', `/api/runs/${runId}/retry`, {});
    const answers = await Promise.all([again(), again()]);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    expect(readProblem(answers.find(({ status }) => status === 409)!).code).toBe('not-stopped');
  });

  it('is no stopped work any more once the application is closed or a newer run has taken its place', async () => {
    const closed = await parkRun();
    await desk.deps
      .db('applications')
      .where({ public_id: closed.applicationId })
      .update({ stage: 'withdrawn' });
    const old = await parkRun();
    const {
      id: _id,
      public_id: _publicId,
      ...row
    } = (await desk.deps.db('runs').where({ id: old.id }).first()) as Record<string, unknown>;
    await desk.deps.db('runs').insert({ ...row, public_id: 'newer', state: 'finished' });
    const shown = (await see(administrator)).runs.map(({ publicId }) => publicId);
    expect(shown).not.toContain(closed.runId);
    expect(shown).not.toContain(old.runId);
    const retry = (id: string) => administrator.send('post', `/api/runs/${id}/retry`, {}).expect(409);
    expect(readProblem(await retry(closed.runId)).code).toBe('wrong-stage');
    expect(readProblem(await retry(old.runId)).code).toBe('superseded');
  });
});

describe('a mail that is parked', () => {
  it('is shown with its recipient and why, and is sent again when the administrator says so', async () => {
    const applicationId = await parkMail('withdrawn:stuck-1');
    const shown = (await see(administrator)).mails.find(({ key }) => key === 'withdrawn:stuck-1');
    expect(shown).toMatchObject({
      applicationId,
      kind: 'withdrawn',
      recipient: 'ada@saltwick.example',
      attempts: 12,
      error: 'Connection refused',
      since: parkedAt.toISOString(),
    });
    const retry = () =>
      administrator.send('post', '/api/stuck-work/mail-retries', { key: 'withdrawn:stuck-1' });
    const left = (await retry().expect(200)).body as StuckWorkView;
    expect(left.mails.map(({ key }) => key)).not.toContain('withdrawn:stuck-1');
    const row = (await desk.deps
      .db('outbox')
      .where({ dedupe_key: 'withdrawn:stuck-1' })
      .first('state', 'attempts', 'error')) as object;
    expect(row).toEqual({ state: 'waiting', attempts: 0, error: null });
    expect(readProblem(await retry().expect(409)).code).toBe('not-stopped');
    const chain = `application:${applicationId}`;
    const entries = await desk.deps.db('audit_entries').where({ chain, action: 'retry-mail' });
    expect(entries).toHaveLength(1);
    expect(await listBrokenChains()).toEqual([]);
  });
});
