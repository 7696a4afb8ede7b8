import { inTransaction } from '../../db/connection.ts';
import { systemChain } from '../../db/repositories/audit-entries.ts';
import { findNewestRun, findRun } from '../../db/repositories/runs.ts';
import { lockApplicationById } from '../../db/repositories/applications.ts';
import {
  countWaitingWork,
  findParkedMail,
  listParkedMails,
  listStuckRuns,
  requeueFailedRun,
  requeueParkedMail,
} from '../../db/repositories/stuck-work.ts';
import type { MailRetry, StuckWorkView } from '../../shared/schemas/stuck-work.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { conflict, notFound } from '../errors.ts';
import { announce } from './announcements.ts';
import { recordAudit } from './audit.ts';
import { screenedStages } from './screened-stages.ts';
import { getUtilitySettings, writeReference } from './utility-settings.ts';

/** What does not go on by itself, with its causes. */
export async function getStuckWork(deps: Deps): Promise<StuckWorkView> {
  const utility = await getUtilitySettings(deps.db);
  const runs = await listStuckRuns(deps.db, screenedStages);
  const mails = await listParkedMails(deps.db);
  return {
    runs: runs.map((run) => ({
      publicId: run.publicId,
      reference: writeReference(utility, run.applicationNumber),
      applicationId: run.applicationPublicId,
      attempts: run.attempts,
      error: run.error ?? 'The screening failed',
      errorDetail: run.errorDetail,
      since: run.finishedAt.toISOString(),
    })),
    mails: mails.map((mail) => ({
      key: mail.dedupeKey,
      recipient: mail.recipient,
      kind: mail.kind,
      reference: mail.applicationPublicId === null ? null : writeReference(utility, mail.applicationNumber),
      applicationId: mail.applicationPublicId,
      attempts: mail.attempts,
      error: mail.error,
      since: mail.createdAt.toISOString(),
    })),
    waiting: await countWaitingWork(deps.db),
  };
}

/** Tries a failed run again from its first attempt, on the basis it was frozen on. */
export async function retryRun(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
): Promise<StuckWorkView> {
  const requeued = await inTransaction(deps.db, async (trx) => {
    const seen = await findRun(trx, publicId);
    if (seen === undefined) throw notFound('The run');
    const application = await lockApplicationById(trx, seen.applicationId);
    if (application === undefined) throw new Error(`Run ${publicId} has no application`);
    if (!screenedStages.includes(application.stage)) {
      throw conflict('wrong-stage', 'Nothing is screened any more: the application is decided or closed');
    }
    if ((await findNewestRun(trx, application.id))?.id !== seen.id) {
      throw conflict('superseded', 'A newer run has taken the place of this one');
    }
    if (!(await requeueFailedRun(trx, seen.id, context.now))) {
      throw conflict('not-stopped', 'This run is not stopped: it waits, is under way or is finished');
    }
    const before = { state: 'failed', error: seen.error, errorDetail: seen.errorDetail };
    const chain = `application:${application.publicId}` as const;
    await recordAudit(trx, context, chain, 'retry-run', `run:${publicId}`, before, { state: 'queued' });
    return { id: seen.id, publicId, applicationPublicId: application.publicId, version: seen.version + 1 };
  });
  await announce(deps, { runs: [requeued], runVersions: [requeued] });
  return getStuckWork(deps);
}

/** Sends a parked mail again, with all its tries before it. */
export async function retryMail(
  deps: Deps,
  context: SignedInContext,
  { key }: MailRetry,
): Promise<StuckWorkView> {
  await inTransaction(deps.db, async (trx) => {
    const mail = await findParkedMail(trx, key);
    if (mail === undefined || !(await requeueParkedMail(trx, key, context.now))) {
      throw conflict('not-stopped', 'This mail is not stopped: it waits, was sent or is not there');
    }
    const { applicationPublicId: id, recipient, attempts, error } = mail;
    const chain = id === null ? systemChain : (`application:${id}` as const);
    const before = { state: 'parked', recipient, attempts, error };
    await recordAudit(trx, context, chain, 'retry-mail', `mail:${key}`.slice(0, 120), before, {
      state: 'waiting',
    });
  });
  return getStuckWork(deps);
}
