import type { Database } from '../connection.ts';

export interface LostRun {
  runId: number;
  attempt: number;
}

/** Runs that wait since before the grace period, whose job never reached the queue; and retries that are due. */
export async function listForgottenRuns(db: Database, now: Date, queuedBefore: Date): Promise<LostRun[]> {
  return db('runs')
    .where({ state: 'queued' })
    .andWhere(
      (due) =>
        void due
          .where('next_attempt_at', '<=', now)
          .orWhere(
            (first) => void first.whereNull('next_attempt_at').andWhere('queued_at', '<=', queuedBefore),
          ),
    )
    .orderBy('id')
    .limit(500)
    .select<LostRun[]>({ runId: 'id', attempt: 'attempt' });
}

/** Runs whose worker no longer renews its lease. */
export async function listAbandonedRuns(db: Database, now: Date): Promise<LostRun[]> {
  return db('runs')
    .where({ state: 'running' })
    .andWhere('lease_until', '<', now)
    .orderBy('id')
    .limit(500)
    .select<LostRun[]>({ runId: 'id', attempt: 'attempt' });
}

/** Back into the queue, unless its worker came back or another took it meanwhile. */
export async function requeueAbandonedRun(
  db: Database,
  run: LostRun,
  now: Date,
  detail: string,
): Promise<boolean> {
  const changed = await db('runs')
    .where({ id: run.runId, state: 'running', attempt: run.attempt })
    .andWhere('lease_until', '<', now)
    .update({
      state: 'queued',
      token: null,
      lease_until: null,
      next_attempt_at: now,
      error_detail: detail,
      version: db.raw('version + 1'),
    });
  return changed === 1;
}

/** Parks a run that was tried often enough; false when it changed meanwhile. */
export async function parkAbandonedRun(
  db: Database,
  run: LostRun,
  now: Date,
  words: { error: string; detail: string },
): Promise<boolean> {
  const changed = await db('runs')
    .where({ id: run.runId, state: 'running', attempt: run.attempt })
    .andWhere('lease_until', '<', now)
    .update({
      state: 'failed',
      token: null,
      lease_until: null,
      finished_at: now,
      error: words.error,
      error_detail: words.detail,
      version: db.raw('version + 1'),
    });
  return changed === 1;
}
