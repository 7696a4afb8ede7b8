import type { Database, Transaction } from '../connection.ts';

interface NewMail {
  kind: string;
  /** One mail for each key, however often it is asked for. */
  dedupeKey: string;
  applicationId: number | null;
  recipient: string;
  payload: unknown;
  createdAt: Date;
}

export async function insertMail(trx: Transaction, mail: NewMail): Promise<void> {
  await trx('outbox')
    .insert({
      kind: mail.kind,
      dedupe_key: mail.dedupeKey,
      application_id: mail.applicationId,
      recipient: mail.recipient,
      payload: JSON.stringify(mail.payload),
      next_at: mail.createdAt,
      created_at: mail.createdAt,
    })
    .onConflict('dedupe_key')
    .ignore();
}

export interface ClaimedMail {
  id: number;
  kind: string;
  dedupeKey: string;
  recipient: string;
  payload: unknown;
  /** Tries before this one. */
  attempts: number;
  createdAt: Date;
  token: Buffer;
}

interface Claim {
  token: Buffer;
  now: Date;
  leaseUntil: Date;
}

interface MailRow {
  id: number;
  kind: string;
  dedupe_key: string;
  recipient: string;
  payload: string;
  attempts: number;
  created_at: Date;
}

/** The next mail that is due, or whose sender was lost under way; others that send meanwhile take others. */
export async function claimMail(trx: Transaction, claim: Claim): Promise<ClaimedMail | undefined> {
  const row = await trx('outbox')
    .where((due) => void due.where({ state: 'waiting' }).andWhere('next_at', '<=', claim.now))
    .orWhere((lost) => void lost.where({ state: 'sending' }).andWhere('lease_until', '<', claim.now))
    .orderBy([{ column: 'next_at' }, { column: 'id' }])
    .forUpdate()
    .skipLocked()
    .first<MailRow | undefined>('id', 'kind', 'dedupe_key', 'recipient', 'payload', 'attempts', 'created_at');
  if (row === undefined) return undefined;
  await trx('outbox')
    .where({ id: row.id })
    .update({ state: 'sending', token: claim.token, lease_until: claim.leaseUntil });
  return {
    id: row.id,
    kind: row.kind,
    dedupeKey: row.dedupe_key,
    recipient: row.recipient,
    payload: JSON.parse(row.payload) as unknown,
    attempts: row.attempts,
    createdAt: row.created_at,
    token: claim.token,
  };
}

function ofClaim(db: Database, mail: ClaimedMail) {
  return db('outbox').where({ id: mail.id, state: 'sending', token: mail.token });
}

export async function markMailSent(
  db: Database,
  mail: ClaimedMail,
  messageId: string,
  sentAt: Date,
): Promise<void> {
  await ofClaim(db, mail).update({
    state: 'sent',
    attempts: mail.attempts + 1,
    message_id: messageId,
    sent_at: sentAt,
    token: null,
    lease_until: null,
    error: null,
  });
}

/** `nextAt` null parks it, for an administrator to look at. */
export async function markMailFailed(
  db: Database,
  mail: ClaimedMail,
  error: string,
  nextAt: Date | null,
): Promise<void> {
  await ofClaim(db, mail).update({
    state: nextAt === null ? 'parked' : 'waiting',
    attempts: mail.attempts + 1,
    ...(nextAt === null ? {} : { next_at: nextAt }),
    token: null,
    lease_until: null,
    error,
  });
}

interface ContactRow {
  publicId: string;
  number: number | null;
  name: string;
  stage: string;
  /** Answers of the newest revision, JSON. */
  answers: string | null;
}

/** Whom to write to about an application. */
export async function findContact(db: Database, applicationId: number): Promise<ContactRow | undefined> {
  return db('applications')
    .leftJoin('application_revisions', 'application_revisions.id', 'applications.revision_id')
    .where({ 'applications.id': applicationId })
    .first<ContactRow | undefined>({
      publicId: 'applications.public_id',
      number: 'applications.number',
      name: 'applications.name',
      stage: 'applications.stage',
      answers: 'application_revisions.answers',
    });
}
