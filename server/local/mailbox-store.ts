import { createHash, randomBytes } from 'node:crypto';
import { mkdir, open, readdir, readFile, rename } from 'node:fs/promises';
import { join } from 'node:path';
import { simpleParser, type AddressObject, type ParsedMail } from 'mailparser';

interface MailboxEntry {
  id: string;
  /** UTC, ISO 8601: when the mailbox took the message. */
  receivedAt: string;
  from: string;
  to: string;
  subject: string;
  messageId: string;
}

interface MailboxMessage extends MailboxEntry {
  text: string;
  /** Empty where the message has no HTML part. Never show it but in a sandboxed frame. */
  html: string;
}

/** Milliseconds since 1970 with leading zeros, so that names sort by arrival, a count, and chance. */
const idPattern = /^\d{15}-\d{6}-[0-9a-f]{8}$/;

let arrivals = 0;

/** Whole or not there at all: readers list the directory while the SMTP server writes to it. */
export async function storeMessage(dir: string, raw: Buffer, receivedAt: Date): Promise<string> {
  await mkdir(dir, { recursive: true, mode: 0o700 });
  arrivals += 1;
  const time = String(receivedAt.getTime()).padStart(15, '0');
  const count = String(arrivals % 1_000_000).padStart(6, '0');
  const id = `${time}-${count}-${randomBytes(4).toString('hex')}`;
  const half = join(dir, `${id}.half`);
  const file = await open(half, 'wx', 0o600);
  try {
    await file.writeFile(raw);
    await file.sync();
  } finally {
    await file.close();
  }
  await rename(half, join(dir, `${id}.eml`));
  return id;
}

async function listIds(dir: string): Promise<string[]> {
  try {
    const names = await readdir(dir);
    const ids = names.filter((name) => name.endsWith('.eml')).map((name) => name.slice(0, -'.eml'.length));
    return ids
      .filter((id) => idPattern.test(id))
      .sort()
      .reverse();
  } catch (error) {
    // Nothing has arrived yet.
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return [];
    throw error;
  }
}

function addresses(value: AddressObject | AddressObject[] | undefined): string {
  return [value ?? []]
    .flat()
    .map((group) => group.text)
    .join(', ');
}

function describe(id: string, mail: ParsedMail, raw: Buffer): MailboxEntry {
  return {
    id,
    receivedAt: new Date(Number(id.slice(0, 15))).toISOString(),
    from: addresses(mail.from),
    to: addresses(mail.to),
    subject: mail.subject ?? '',
    // One that came without is told apart by its content.
    messageId: mail.messageId ?? `<${createHash('sha256').update(raw).digest('hex')}@no-message-id>`,
  };
}

async function parse(dir: string, id: string): Promise<{ mail: ParsedMail; raw: Buffer }> {
  const raw = await readFile(join(dir, `${id}.eml`));
  return { raw, mail: await simpleParser(raw, { skipImageLinks: true }) };
}

/** What lists show of each message, by its path; a stored message never changes. */
const described = new Map<string, Promise<MailboxEntry>>();

function describeOnce(dir: string, id: string): Promise<MailboxEntry> {
  const path = join(dir, id);
  const known = described.get(path);
  if (known !== undefined) return known;
  const reading = parse(dir, id).then(({ mail, raw }) => describe(id, mail, raw));
  described.set(path, reading);
  reading.catch(() => described.delete(path)); // the one who asked hears of it
  return reading;
}

/** Newest first. */
export async function listMessages(dir: string): Promise<MailboxEntry[]> {
  const ids = await listIds(dir);
  return Promise.all(ids.map((id) => describeOnce(dir, id)));
}

/** undefined where there is no such message, and for an id that is not one of ours (a path, for instance). */
export async function readMessage(dir: string, id: string): Promise<MailboxMessage | undefined> {
  if (!(await listIds(dir)).includes(id)) return undefined;
  const { mail, raw } = await parse(dir, id);
  return { ...describe(id, mail, raw), text: mail.text ?? '', html: mail.html || '' };
}
