import { afterAll, beforeAll, expect, it } from 'vitest';
import { openDatabase, type Database } from '../../db/connection.ts';
import { listMessages, readMessage } from '../../server/local/mailbox-store.ts';
import { describeFinding } from '../../shared/finding-words.ts';
import type { RunView } from '../../shared/schemas/runs.ts';
import { attestation, DeskClient } from '../support/desk-client.ts';
import { solarAnswers } from '../support/fixture-answers.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';
import { startDesk, type TestDesk } from '../support/processes.ts';
import { password } from '../support/test-app.ts';
import { until } from '../support/until.ts';

/* Server, worker, Redis and relay as real processes; what people do goes through the API. */

let desk: TestDesk;
let db: Database;
let world: FixtureWorld;

beforeAll(async () => {
  desk = await startDesk({
    ownRedis: true,
    settings: { demo: false, runLeaseSeconds: 3, sweepSeconds: 1, queuedGraceSeconds: 2, outboxSeconds: 1 },
  });
  db = openDatabase(desk.config.database);
  // The desk has planted reference values of its own; the fixture world brings others under the same names.
  for (const table of ['rule_set_versions', 'holiday_calendars']) await db(table).delete();
  world = await makeFixtureWorld(db);
});
afterAll(async () => {
  await db?.destroy();
  await desk?.end();
});

async function signIn(person: 'applicant' | 'reviewer'): Promise<DeskClient> {
  const client = new DeskClient(desk.url);
  await client.signIn(world.people[person].email, password);
  return client;
}

it('a server killed between commit and enqueue: the sweep finds the run', async () => {
  const applicant = await signIn('applicant');
  const { applicationId } = await applicant.writeDraft(solarAnswers());
  await desk.redis?.kill();
  const submitted = applicant.act(applicationId, 'submission', attestation).then(
    () => 'answered',
    () => 'cut off',
  );
  const run = await until(
    () => db('runs').first(),
    (row) => row !== undefined,
  );
  await desk.server.kill();
  expect(await submitted).toBe('cut off');
  expect(run).toMatchObject({ state: 'queued', attempt: 0 });

  await desk.redis?.start();
  await until(
    () => db('runs').where({ id: run.id }).first(),
    (row) => row.state === 'finished',
  );
  await desk.server.start();
  const view = await (await signIn('applicant')).getApplication(applicationId);
  expect(view).toMatchObject({ stage: 'submitted', run: { kind: 'preliminary', state: 'finished' } });
});

it('the relay away at the decision: one message with one id when it is back, with the numbers of the screen', async () => {
  const applicant = await signIn('applicant');
  const reviewer = await signIn('reviewer');
  const { applicationId } = await applicant.writeDraft(solarAnswers());
  await applicant.act(applicationId, 'submission', attestation);
  await until(
    async () => (await reviewer.getApplication(applicationId)).run,
    (run) => run?.state === 'finished',
  );
  await reviewer.act(applicationId, 'completeness');
  const official = await until(
    async () => (await reviewer.getApplication(applicationId)).run,
    (run) => run?.kind === 'official' && run.state === 'finished',
  );

  await desk.mailbox.kill();
  await reviewer.act(applicationId, 'decision', {
    kind: 'require-study',
    runId: official?.publicId,
    reason: 'The feeder is short of room.',
  });
  const getMail = () => db('outbox').where({ kind: 'decision' }).first();
  await until(getMail, (mail) => mail.attempts >= 1);
  await desk.mailbox.start();
  const sent = await until(getMail, (mail) => mail.state === 'sent');

  const messages = await listMessages(desk.config.mailboxDir);
  const own = messages.filter((message) => message.messageId === sent.message_id);
  expect(own).toHaveLength(1);
  expect(messages.filter((message) => message.subject === own[0]?.subject)).toHaveLength(1);
  const { text, html } = (await readMessage(desk.config.mailboxDir, own[0]?.id ?? ''))!;
  const seen = await applicant.ask<RunView>('GET', `/runs/${official?.publicId}`);
  expect(seen.findings.length).toBeGreaterThanOrEqual(5);
  for (const finding of seen.findings) {
    const { value, limit, verdict } = describeFinding(finding);
    for (const words of [finding.question, value, limit, verdict]) {
      expect(text).toContain(words);
      expect(html).toContain(words);
    }
  }
});
