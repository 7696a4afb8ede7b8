import type { Stage } from '../../shared/rules/application-life.ts';
import type { Database, Transaction } from '../connection.ts';

interface StuckRun {
  publicId: string;
  applicationPublicId: string;
  applicationNumber: number | null;
  attempts: number;
  error: string | null;
  errorDetail: string | null;
  finishedAt: Date;
}

const mostShown = 200;

/** Failed, and nothing newer has taken their place; only of applications in one of `stages`. The newest first. */
export async function listStuckRuns(db: Database, stages: readonly Stage[]): Promise<StuckRun[]> {
  return db('runs')
    .join('applications', 'applications.id', 'runs.application_id')
    .where('runs.state', 'failed')
    .whereIn('applications.stage', stages)
    .whereNotExists(
      db('runs as newer')
        .select(db.raw('1'))
        .whereRaw('newer.application_id = runs.application_id AND newer.id > runs.id'),
    )
    .orderBy('runs.id', 'desc')
    .limit(mostShown)
    .select<StuckRun[]>({
      publicId: 'runs.public_id',
      applicationPublicId: 'applications.public_id',
      applicationNumber: 'applications.number',
      attempts: 'runs.attempt',
      error: 'runs.error',
      errorDetail: 'runs.error_detail',
      finishedAt: 'runs.finished_at',
    });
}

/** Back to the beginning of its life, on the basis it was frozen on; false when it is not failed any more. */
export async function requeueFailedRun(trx: Transaction, runId: number, now: Date): Promise<boolean> {
  const changed = await trx('runs')
    .where({ id: runId, state: 'failed' })
    .update({
      state: 'queued',
      attempt: 0,
      token: null,
      lease_until: null,
      next_attempt_at: null,
      steps: '[]',
      error: null,
      error_detail: null,
      queued_at: now,
      started_at: null,
      finished_at: null,
      version: trx.raw('version + 1'),
    });
  return changed === 1;
}

interface StuckMail {
  dedupeKey: string;
  recipient: string;
  kind: string;
  applicationPublicId: string | null;
  applicationNumber: number | null;
  attempts: number;
  error: string | null;
  createdAt: Date;
}

function selectMails(db: Database) {
  return db('outbox')
    .leftJoin('applications', 'applications.id', 'outbox.application_id')
    .select<StuckMail[]>({
      dedupeKey: 'outbox.dedupe_key',
      recipient: 'outbox.recipient',
      kind: 'outbox.kind',
      applicationPublicId: 'applications.public_id',
      applicationNumber: 'applications.number',
      attempts: 'outbox.attempts',
      error: 'outbox.error',
      createdAt: 'outbox.created_at',
    });
}

/** The newest first. */
export async function listParkedMails(db: Database): Promise<StuckMail[]> {
  return selectMails(db).where('outbox.state', 'parked').orderBy('outbox.id', 'desc').limit(mostShown);
}

export async function findParkedMail(db: Database, dedupeKey: string): Promise<StuckMail | undefined> {
  const [mail] = await selectMails(db).where({ 'outbox.state': 'parked', 'outbox.dedupe_key': dedupeKey });
  return mail;
}

/** False when somebody else has done it already. */
export async function requeueParkedMail(trx: Transaction, dedupeKey: string, now: Date): Promise<boolean> {
  const changed = await trx('outbox')
    .where({ dedupe_key: dedupeKey, state: 'parked' })
    .update({ state: 'waiting', attempts: 0, next_at: now, error: null });
  return changed === 1;
}

export async function countWaitingWork(db: Database): Promise<{ runs: number; mails: number }> {
  const count = async (table: string, states: string[]) => {
    const row = await db(table).whereIn('state', states).count<{ waiting: number }[]>({ waiting: '*' });
    return Number(row[0]?.waiting ?? 0);
  };
  return {
    runs: await count('runs', ['queued', 'running']),
    mails: await count('outbox', ['waiting', 'sending']),
  };
}
