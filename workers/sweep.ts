import {
  listAbandonedRuns,
  listForgottenRuns,
  parkAbandonedRun,
  requeueAbandonedRun,
  type LostRun,
} from '../db/repositories/run-sweeps.ts';
import type { Deps } from '../server/context.ts';
import type { OpenQueue } from '../server/queue.ts';
import { mostAttempts, parkedWords } from './jobs/screen-deps.ts';

interface SweepDeps extends Pick<Deps, 'db' | 'log'> {
  queue: Pick<OpenQueue, 'tryEnqueue'>;
  now(): Date;
  queuedGraceSeconds: number;
}

async function recover(deps: SweepDeps, run: LostRun, now: Date): Promise<void> {
  const detail = `Attempt ${run.attempt}: its worker stopped without a word`;
  if (run.attempt >= mostAttempts) {
    if (await parkAbandonedRun(deps.db, run, now, { error: parkedWords, detail })) {
      deps.log.error(run, 'A run was tried often enough and is parked');
    }
    return;
  }
  if (await requeueAbandonedRun(deps.db, run, now, detail)) {
    deps.log.warn(run, 'A run whose worker is gone goes back into the queue');
  }
}

/**
 * Finds what fell between two chairs: runs whose worker is gone, runs that never reached the queue (a server that
 * ended between commit and enqueue, a Redis that was away), and runs whose next attempt is due.
 */
export async function sweepRuns(deps: SweepDeps): Promise<void> {
  const now = deps.now();
  for (const run of await listAbandonedRuns(deps.db, now)) await recover(deps, run, now);
  const queuedBefore = new Date(now.getTime() - deps.queuedGraceSeconds * 1000);
  for (const run of await listForgottenRuns(deps.db, now, queuedBefore)) {
    // A run whose job still waits is not enqueued twice: the job's id is made from run and attempt.
    // Where Redis takes nothing, the rest waits for the next round.
    if (!(await deps.queue.tryEnqueue(run.runId, run.attempt))) return;
  }
}
