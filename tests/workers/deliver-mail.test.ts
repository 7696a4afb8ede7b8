import { mkdtempSync } from 'node:fs';
import { join } from 'node:path';
import { simpleParser } from 'mailparser';
import { readdirSync, readFileSync } from 'node:fs';
import { afterAll, afterEach, beforeAll, beforeEach, expect, it } from 'vitest';
import { inTransaction } from '../../db/connection.ts';
import { readConfig, type Config } from '../../server/config.ts';
import { findAnyPort } from '../../server/local/ports.ts';
import { startMailboxServer, type MailboxServer } from '../../server/local/mailbox-server.ts';
import { createLog } from '../../server/log.ts';
import { openTransport, type MailTransport } from '../../server/mail/transport.ts';
import { findMailSubject, queueMail } from '../../server/services/outbox.ts';
import { getUtilitySettings } from '../../server/services/utility-settings.ts';
import { deliverMail, type DeliveryDeps } from '../../workers/jobs/deliver-mail.ts';
import { makeTestDatabase, type TestDatabase } from '../support/database.ts';
import { insertFixtureApplication, type FixtureApplication } from '../support/fixture-runs.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';
import { getTestServices } from '../support/services.ts';

let test: TestDatabase;
let world: FixtureWorld;
let application: FixtureApplication;
let config: Config;
let mailbox: MailboxServer | undefined;
let transport: MailTransport;
let mailboxDir: string;
let nowMs: number;

beforeAll(async () => {
  test = await makeTestDatabase();
  world = await makeFixtureWorld(test.db);
});
afterAll(() => test.drop());

beforeEach(async () => {
  await test.db('outbox').delete();
  application = await insertFixtureApplication(test.db, world);
  mailboxDir = mkdtempSync(join(getTestServices().directory, 'mailbox-'));
  nowMs = Date.parse('2026-03-02T15:00:00Z');
  const smtpPort = await findAnyPort();
  config = readConfig({
    FEEDERWRIGHT_DATABASE_PORT: '1',
    FEEDERWRIGHT_DATABASE_PASSWORD: 'unused',
    FEEDERWRIGHT_REDIS_PORT: '1',
    FEEDERWRIGHT_REDIS_PASSWORD: 'unused',
    FEEDERWRIGHT_SMTP_PORT: String(smtpPort),
    FEEDERWRIGHT_SESSION_SECRET: 'x'.repeat(32),
    FEEDERWRIGHT_FILES_DIR: mailboxDir,
    FEEDERWRIGHT_MAILBOX_DIR: mailboxDir,
    FEEDERWRIGHT_PUBLIC_URL: 'http://desk.example:7400',
  });
  transport = openTransport(config.smtp);
});
afterEach(async () => {
  transport.close();
  await mailbox?.stop();
  mailbox = undefined;
});

async function startMailbox(): Promise<void> {
  mailbox = await startMailboxServer(mailboxDir, config.smtp.port);
}

const makeDeps = (changes: Partial<DeliveryDeps> = {}): DeliveryDeps => ({
  db: test.db,
  config,
  log: createLog('silent', 'test'),
  transport,
  now: () => new Date(nowMs),
  ...changes,
});

async function queueWithdrawn(dedupeKey = 'withdrawn:1'): Promise<void> {
  await inTransaction(test.db, async (trx) => {
    const subject = await findMailSubject(trx, application.id);
    if (subject === undefined) throw new Error('no subject');
    const { recipient, ...rest } = subject;
    const payload = { ...rest, reason: 'The site was sold.' };
    const mail = { kind: 'withdrawn' as const, dedupeKey, applicationId: application.id, recipient, payload };
    await queueMail(trx, { now: new Date(nowMs) }, mail);
  });
}

function readMessages() {
  const names = readdirSync(mailboxDir).filter((name) => name.endsWith('.eml'));
  return Promise.all(names.map((name) => simpleParser(readFileSync(join(mailboxDir, name)))));
}

const getRow = () => test.db('outbox').first();

it('sends what is due, with an id made from the row, as an automatic message in two forms', async () => {
  await startMailbox();
  await queueWithdrawn();

  expect(await deliverMail(makeDeps())).toBe(1);
  expect(await deliverMail(makeDeps())).toBe(0);

  const row = await getRow();
  expect(row).toMatchObject({ state: 'sent', attempts: 1, token: null, error: null });
  const [message, ...more] = await readMessages();
  expect(more).toEqual([]);
  expect(message?.messageId).toBe(row.message_id);
  expect(message?.messageId).toMatch(/^<outbox-\d+-[0-9a-f]{32}@desk\.example>$/);
  expect(message?.headers.get('auto-submitted')).toBe('auto-generated');
  expect(message?.date?.toISOString()).toBe('2026-03-02T15:00:00.000Z');
  expect(message?.subject).toBe(`FX-${application.number}: your application is withdrawn`);
  expect(message?.text).toContain('The site was sold.');
  expect(message?.html).toContain('The site was sold.');
  expect([message?.to].flat()[0]?.text).toBe('ada@saltwick.example');
});

it('comes from the address that its own last lines give, unless the settings name a sender', async () => {
  await startMailbox();
  await queueWithdrawn('withdrawn:own');
  await deliverMail(makeDeps());
  const [own] = await readMessages();
  const { name, contactEmail } = await getUtilitySettings(test.db);
  expect(own?.from?.value).toEqual([{ name, address: contactEmail }]);
  expect(own?.text).toContain(`${name}\n${contactEmail}`);

  await queueWithdrawn('withdrawn:named');
  await deliverMail(makeDeps({ config: { ...config, mailFrom: 'The desk <desk@utility.example>' } }));
  const senders = (await readMessages()).map(({ from }) => from?.text);
  expect(senders).toContain('"The desk" <desk@utility.example>');
});

it('queues one mail for a key, however often it is asked for', async () => {
  await queueWithdrawn('withdrawn:7');
  await queueWithdrawn('withdrawn:7');
  expect(await test.db('outbox').select('dedupe_key')).toEqual([{ dedupe_key: 'withdrawn:7' }]);
});

it('tries again with growing patience while the relay is away, and delivers one message when it is back', async () => {
  await queueWithdrawn();
  const waits: number[] = [];
  for (let attempt = 1; attempt <= 3; attempt += 1) {
    expect(await deliverMail(makeDeps())).toBe(1);
    const row = await getRow();
    expect(row).toMatchObject({ state: 'waiting', attempts: attempt, token: null });
    expect(row.error).toContain('ECONNREFUSED');
    waits.push((row.next_at.getTime() - nowMs) / 1000);
    expect(await deliverMail(makeDeps())).toBe(0);
    nowMs = row.next_at.getTime();
  }
  expect(waits).toEqual([5, 15, 60]);

  await startMailbox();
  expect(await deliverMail(makeDeps())).toBe(1);
  expect(await readMessages()).toHaveLength(1);
  expect(await getRow()).toMatchObject({ state: 'sent', attempts: 4 });
});

it('parks a mail after twelve tries, where an administrator finds it with the reason', async () => {
  await queueWithdrawn();
  await test.db('outbox').update({ attempts: 11 });
  await deliverMail(makeDeps());
  const row = await getRow();
  expect(row).toMatchObject({ state: 'parked', attempts: 12 });
  expect(row.error).toContain('ECONNREFUSED');
  nowMs += 7 * 86_400_000;
  expect(await deliverMail(makeDeps())).toBe(0);
});

it('sends a mail again whose sender was lost before it could say so, with the same id', async () => {
  await startMailbox();
  await queueWithdrawn();
  await deliverMail(makeDeps());
  const token = Buffer.alloc(16, 5);
  const lost = { state: 'sending', token, lease_until: new Date(nowMs - 1), message_id: null };
  await test.db('outbox').update(lost);

  expect(await deliverMail(makeDeps())).toBe(1);

  const messages = await readMessages();
  expect(messages).toHaveLength(2);
  expect(new Set(messages.map((message) => message.messageId)).size).toBe(1);
});

it('shares the work between two senders without sending anything twice', async () => {
  await startMailbox();
  for (let index = 0; index < 6; index += 1) await queueWithdrawn(`withdrawn:many-${index}`);
  const tried = await Promise.all([deliverMail(makeDeps()), deliverMail(makeDeps())]);
  expect(tried[0]! + tried[1]!).toBe(6);
  expect(await readMessages()).toHaveLength(6);
});

it('is not held up by one mail that cannot be written', async () => {
  await startMailbox();
  await queueWithdrawn('withdrawn:broken');
  await test.db('outbox').update({ payload: '{}' });
  await queueWithdrawn('withdrawn:whole');
  expect(await deliverMail(makeDeps())).toBe(2);
  const states = await test.db('outbox').orderBy('id').pluck('state');
  expect(states).toEqual(['waiting', 'sent']);
});
