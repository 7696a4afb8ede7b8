import { mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createTransport } from 'nodemailer';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { startMailboxServer, type MailboxServer } from '../../../server/local/mailbox-server.ts';
import { listMessages, readMessage, storeMessage } from '../../../server/local/mailbox-store.ts';

let dir: string;
let mailbox: MailboxServer;

beforeEach(async () => {
  dir = mkdtempSync(join(tmpdir(), 'feederwright-mailbox-'));
  mailbox = await startMailboxServer(dir, 0);
});

afterEach(async () => {
  await mailbox.stop();
  rmSync(dir, { recursive: true });
});

function send(subject: string, more: object = {}) {
  const transport = createTransport({ host: '127.0.0.1', port: mailbox.port, ignoreTLS: true });
  return transport.sendMail({
    from: 'Desk <desk@utility.example>',
    to: 'Ada Quill <ada@quill.example>, bo@quill.example',
    subject,
    ...more,
  });
}

describe('the local mailbox', () => {
  it('keeps a message with both of its parts, when it is sent by SMTP', async () => {
    const before = Date.now();
    await send('Complete – queue position 3', {
      text: 'Your project is complete.\nÜberall gültig.',
      html: '<p>Your project is <b>complete</b>.</p>',
      messageId: '<outbox-17@utility.example>',
    });
    const [entry, ...others] = await listMessages(dir);
    expect(others).toEqual([]);
    expect(entry).toMatchObject({
      subject: 'Complete – queue position 3',
      messageId: '<outbox-17@utility.example>',
      from: '"Desk" <desk@utility.example>',
      to: '"Ada Quill" <ada@quill.example>, bo@quill.example',
    });
    expect(Date.parse(entry!.receivedAt)).toBeGreaterThanOrEqual(before);
    expect(Date.parse(entry!.receivedAt)).toBeLessThanOrEqual(Date.now());
    const message = await readMessage(dir, entry!.id);
    expect(message).toMatchObject(entry!);
    expect(message!.text.trimEnd()).toBe('Your project is complete.\nÜberall gültig.');
    expect(message!.html.trimEnd()).toBe('<p>Your project is <b>complete</b>.</p>');
  });

  it('lists the newest first, when several arrive within one millisecond', async () => {
    const at = new Date('2026-03-02T10:00:00.000Z');
    const raw = (n: number) => Buffer.from(`Subject: number ${n}\r\n\r\ntext\r\n`);
    for (const n of [1, 2, 3]) await storeMessage(dir, raw(n), at);
    await storeMessage(dir, raw(0), new Date('2026-03-02T09:59:59.999Z'));
    const subjects = (await listMessages(dir)).map((message) => message.subject);
    expect(subjects).toEqual(['number 3', 'number 2', 'number 1', 'number 0']);
  });

  it('leaves no half-written file, and lists none that another process is writing', async () => {
    await send('one', { text: 'one' });
    expect(readdirSync(dir).filter((name) => !name.endsWith('.eml'))).toEqual([]);
    writeFileSync(join(dir, '001772445600000-000001-0badcafe.half'), 'Subject: half\r\n');
    expect(await listMessages(dir)).toHaveLength(1);
  });

  it('reads nothing outside its directory, whatever the id says', async () => {
    await send('one', { text: 'one' });
    const [{ id } = { id: '' }] = await listMessages(dir);
    writeFileSync(join(dir, 'private.eml'), 'Subject: private\r\n\r\n');
    for (const wrong of [`../${dir.split('/').pop()}/${id}`, `./${id}`, 'private', '', '..', `${id}\0`]) {
      expect(await readMessage(dir, wrong), wrong).toBeUndefined();
    }
    expect(await readMessage(dir, id)).toMatchObject({ subject: 'one' });
  });

  it('is empty, when nothing ever arrived', async () => {
    expect(await listMessages(join(dir, 'never-made'))).toEqual([]);
  });

  it('refuses connections while it is down, and takes mail on the same port again', async () => {
    const { port } = mailbox;
    await mailbox.stop();
    await expect(send('lost', { text: 'lost' })).rejects.toThrow(/ECONNREFUSED/);
    mailbox = await startMailboxServer(dir, port);
    await send('found', { text: 'found' });
    expect((await listMessages(dir)).map((message) => message.subject)).toEqual(['found']);
  });
});
