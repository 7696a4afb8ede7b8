import { execFileSync } from 'node:child_process';
import { setTimeout as sleep } from 'node:timers/promises';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { inTransaction, openDatabase, type Database } from '../../db/connection.ts';
import { createLog } from '../../server/log.ts';
import { openQueue } from '../../server/queue.ts';
import { listMessages } from '../../server/local/mailbox-store.ts';
import { findMailSubject, queueMail } from '../../server/services/outbox.ts';
import { insertFixtureApplication, insertFixtureRun } from '../support/fixture-runs.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';
import { startDesk, type TestDesk } from '../support/processes.ts';
import { until } from '../support/until.ts';

/* With real processes, which are killed. */

let desk: TestDesk;
let db: Database;
let world: FixtureWorld;

beforeAll(async () => {
  desk = await startDesk({
    ownRedis: true,
    start: ['mailbox', 'worker'],
    settings: { demo: false, runLeaseSeconds: 3, sweepSeconds: 1, queuedGraceSeconds: 1, outboxSeconds: 1 },
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

const getRun = (id: number) => db('runs').where({ id }).first();

const untilFinished = (id: number) =>
  until(
    () => getRun(id),
    (run) => run.state === 'finished',
  );

async function insertRun() {
  const application = await insertFixtureApplication(db, world);
  return { application, ...(await insertFixtureRun(db, application)) };
}

/** The resident child of the worker that runs now. */
async function findComputePid(): Promise<number> {
  const list = async () =>
    execFileSync('ps', ['-A', '-o', 'pid=,ppid=,args='])
      .toString()
      .split('\n')
      .map((line) => line.trim());
  const lines = await until(list, (found) => found.some(isChild));
  return Number.parseInt(lines.find(isChild) as string, 10);
}

function isChild(line: string): boolean {
  const [, ppid] = line.split(/\s+/);
  return ppid === String(desk.worker.pid) && line.includes('workers/compute.');
}

/** Until the run has gone to the stopped child, which will not answer. */
async function untilAsked(id: number): Promise<void> {
  await until(
    () => getRun(id),
    (run) => run.state === 'running' && JSON.parse(run.steps).length >= 2,
  );
  await sleep(300);
}

/** A first run, so that the child is up and computes. */
async function warmUp(): Promise<void> {
  const { id } = await insertRun();
  await untilFinished(id);
}

it('a run that its server did not live to enqueue is found by the sweep', async () => {
  const { id } = await insertRun();
  const run = await untilFinished(id);
  expect(run).toMatchObject({ attempt: 1 });
});

it('a worker killed in mid-run: the next one finishes the run, once', async () => {
  await warmUp();
  const computePid = await findComputePid();
  process.kill(computePid, 'SIGSTOP');
  const { id, application } = await insertRun();
  await untilAsked(id);

  await desk.worker.kill();
  expect(await getRun(id)).toMatchObject({ state: 'running', attempt: 1 });
  await desk.worker.start();

  expect(await untilFinished(id)).toMatchObject({ attempt: 2 });
  const findings = await db('run_findings').where({ run_id: id });
  expect(new Set(findings.map((row) => `${row.question} ${row.element}`)).size).toBe(findings.length);
  const mails = await db('outbox').where({ application_id: application.id, kind: 'screening-done' });
  expect(mails).toHaveLength(1);
});

it('a compute process killed in mid-run: the worker lives on and tries the run again', async () => {
  await warmUp();
  const workerPid = desk.worker.pid;
  const computePid = await findComputePid();
  process.kill(computePid, 'SIGSTOP');
  const { id } = await insertRun();
  await untilAsked(id);
  process.kill(computePid, 'SIGKILL');

  const waiting = await until(
    () => getRun(id),
    (run) => run.attempt === 1 && run.state === 'queued',
  );
  expect(waiting.error_detail).toContain('compute process ended');
  expect(await untilFinished(id)).toMatchObject({ attempt: 2, error_detail: null });
  expect(desk.worker.pid).toBe(workerPid);
  expect(await findComputePid()).not.toBe(computePid);
});

it('two workers and one run: it is computed once', async () => {
  await warmUp();
  const { id } = await insertRun();
  const queue = openQueue(desk.config.redis, createLog('silent', 'test'));
  await Promise.all([queue.enqueue(id, 0), queue.enqueue(id, 1), queue.enqueue(id, 2)]);
  expect(await untilFinished(id)).toMatchObject({ attempt: 1 });
  await queue.close();
});

it('Redis killed and started again: the worker goes on by itself', async () => {
  await warmUp();
  const workerPid = desk.worker.pid;
  await desk.redis?.kill();
  const { id } = await insertRun();
  await sleep(1500);
  expect(await getRun(id)).toMatchObject({ state: 'queued' });
  await desk.redis?.start();
  await untilFinished(id);

  const queue = openQueue(desk.config.redis, createLog('silent', 'test'));
  const next = await insertRun();
  await queue.enqueue(next.id, 0);
  await untilFinished(next.id);
  await queue.close();
  expect(desk.worker.pid).toBe(workerPid);
});

it('the relay away when a mail is due: one message, one id, when it is back', async () => {
  await desk.mailbox.kill();
  const application = await insertFixtureApplication(db, world, { name: 'Away from home' });
  await inTransaction(db, async (trx) => {
    const subject = await findMailSubject(trx, application.id);
    if (subject === undefined) throw new Error('no subject');
    const { recipient, ...rest } = subject;
    const payload = { ...rest, reason: 'The site was sold.' };
    const mail = {
      kind: 'withdrawn' as const,
      dedupeKey: 'away',
      applicationId: application.id,
      recipient,
      payload,
    };
    await queueMail(trx, { now: new Date() }, mail);
  });
  const getMail = () => db('outbox').where({ dedupe_key: 'away' }).first();
  await until(getMail, (mail) => mail.attempts >= 1);
  await desk.mailbox.start();

  const sent = await until(getMail, (mail) => mail.state === 'sent');
  expect(sent.attempts).toBeGreaterThanOrEqual(2);
  const messages = await listMessages(desk.config.mailboxDir);
  const own = messages.filter((message) => message.subject.startsWith(`FX-${application.number}:`));
  expect(own.map((message) => message.messageId)).toEqual([sent.message_id]);
});

it('told to stop in mid-run, the worker gives the run back and ends in order; the next takes it up', async () => {
  await warmUp();
  process.kill(await findComputePid(), 'SIGSTOP');
  const { id } = await insertRun();
  await untilAsked(id);

  const before = Date.now();
  await desk.worker.stop();
  expect(Date.now() - before).toBeLessThan(12_000);
  expect(await getRun(id)).toMatchObject({ state: 'queued', attempt: 1, token: null });

  await desk.worker.start();
  expect(await untilFinished(id)).toMatchObject({ attempt: 2 });
});
