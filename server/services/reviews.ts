import { inTransaction, type Transaction } from '../../db/connection.ts';
import { updateApplication, type Application } from '../../db/repositories/applications.ts';
import { insertInformationRequest } from '../../db/repositories/information-requests.ts';
import { getValidRuleSet, markRuleSetUsed } from '../../db/repositories/rule-sets.ts';
import { findNewestRun } from '../../db/repositories/runs.ts';
import { findUserById } from '../../db/repositories/users.ts';
import { closedStages } from '../../shared/rules/application-life.ts';
import { localDate } from '../../shared/rules/business-days.ts';
import type {
  ApplicationView,
  Completeness,
  Deficiency,
  ReviewerChange,
} from '../../shared/schemas/applications.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { conflict } from '../errors.ts';
import { announce } from './announcements.ts';
import { getApplicationView } from './applications.ts';
import { recordAudit } from './audit.ts';
import { getDueDate } from './clocks.ts';
import { findMailSubject, queueMail } from './outbox.ts';
import { enterQueue } from './queue-entries.ts';
import { requestRun } from './run-requests.ts';
import {
  checkHolder,
  checkVersion,
  getTransition,
  lockForChange,
  lockWithModel,
  moveApplication,
} from './transitions.ts';
import { getUtilitySettings } from './utility-settings.ts';

/** A reviewer as the trail names them. */
async function describeReviewer(trx: Transaction, reviewerId: number | null) {
  const reviewer = reviewerId === null ? undefined : await findUserById(trx, reviewerId);
  return reviewer === undefined ? null : { name: reviewer.name, publicId: reviewer.publicId };
}

/** Takes an application for review, also from a colleague whom one has seen on it, or puts it back. */
export async function changeReviewer(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  body: ReviewerChange,
): Promise<ApplicationView> {
  const changed = await inTransaction(deps.db, async (trx) => {
    const application = await lockForChange(trx, publicId);
    await checkVersion(trx, context, application, body.version);
    if (closedStages.includes(application.stage)) {
      throw conflict('wrong-stage', 'This application is closed; nobody reviews it any more');
    }
    const reviewerId = body.reviewer === 'me' ? context.actor.id : null;
    const changes = { reviewerId, version: application.version + 1, updatedAt: context.now };
    await updateApplication(trx, application.id, changes);
    const action = reviewerId === null ? 'put-back' : 'take';
    const subject = `application:${publicId}` as const;
    const before = {
      reviewer: await describeReviewer(trx, application.reviewerId),
      version: application.version,
    };
    const after = { reviewer: await describeReviewer(trx, reviewerId), version: changes.version };
    await recordAudit(trx, context, subject, action, subject, before, after);
    return { ...application, ...changes };
  });
  await announce(deps, { applications: [changed] });
  return getApplicationView(deps, context, publicId);
}

/** Tells the applicant what is missing: their clock starts, the utility's stands still. */
export async function askForMissing(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  body: Deficiency,
): Promise<ApplicationView> {
  const changed = await inTransaction(deps.db, async (trx) => {
    const application = await lockForChange(trx, publicId);
    await checkVersion(trx, context, application, body.version);
    await checkHolder(trx, context, application);
    const { items } = body;
    const moved = await moveApplication(trx, context, application, 'ask-for-missing', null, {}, { items });
    await insertInformationRequest(trx, {
      applicationId: moved.id,
      items,
      askedBy: context.actor.id,
      askedAt: context.now,
    });
    await mailDeficiency(trx, context, moved, items);
    return moved;
  });
  await announce(deps, { applications: [changed] });
  return getApplicationView(deps, context, publicId);
}

async function mailDeficiency(
  trx: Transaction,
  context: SignedInContext,
  application: Application,
  items: Deficiency['items'],
): Promise<void> {
  const subject = await findMailSubject(trx, application.id);
  if (subject === undefined) return;
  const { recipient, ...about } = subject;
  await queueMail(trx, context, {
    kind: 'deficiency',
    dedupeKey: `deficiency:${application.publicId}:${application.version}`,
    applicationId: application.id,
    recipient,
    payload: { ...about, items, replyDueOn: await getDueDate(trx, application.id, 'cure') },
  });
}

/**
 * Who stands in the queue is computed into everybody's screening behind: what could not be screened by itself would stop
 * them all, so it gets no place.
 */
async function checkPreliminaryRun(trx: Transaction, application: Application): Promise<void> {
  const run = await findNewestRun(trx, application.id, { kind: 'preliminary' });
  if (run?.state === 'finished') return;
  if (run?.state === 'failed') {
    const words =
      'The preliminary screening failed. Ask for what is missing where the project does not hold together; otherwise screen it again first';
    throw conflict('preliminary-run-failed', words);
  }
  const words = 'The preliminary screening is not finished; confirm the application complete when it is';
  throw conflict('preliminary-run-open', words);
}

/** Everything is there: gives the place in the queue, binds the rules, starts the review and its official run. */
export async function confirmComplete(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  body: Completeness,
): Promise<ApplicationView> {
  const { changed, run } = await inTransaction(deps.db, async (trx) => {
    const { application, model } = await lockWithModel(trx, publicId);
    await checkVersion(trx, context, application, body.version);
    await checkHolder(trx, context, application);
    getTransition(context, application, 'confirm-complete');
    await checkPreliminaryRun(trx, application);
    if (model === null) throw new Error(`Application ${publicId} was handed in without a network model`);
    const { timeZone } = await getUtilitySettings(trx);
    const ruleSet = await getValidRuleSet(trx, localDate(context.now, timeZone));
    const position = await enterQueue(trx, context, model, application);
    const bound = { ruleSetVersionId: ruleSet.id };
    const about = { queuePosition: position, ruleSet: { code: ruleSet.code, number: ruleSet.number } };
    const moved = await moveApplication(trx, context, application, 'confirm-complete', null, bound, about);
    await markRuleSetUsed(trx, ruleSet.id, context.now);
    const requested = await requestRun(trx, context, moved, 'official');
    await mailComplete(trx, context, moved, position);
    return { changed: moved, run: requested };
  });
  await announce(deps, { applications: [changed], runs: [run] });
  return getApplicationView(deps, context, publicId);
}

async function mailComplete(
  trx: Transaction,
  context: SignedInContext,
  application: Application,
  queuePosition: number,
): Promise<void> {
  const subject = await findMailSubject(trx, application.id);
  if (subject === undefined) return;
  const { recipient, ...about } = subject;
  await queueMail(trx, context, {
    kind: 'complete',
    dedupeKey: `complete:${application.publicId}:${application.version}`,
    applicationId: application.id,
    recipient,
    payload: {
      ...about,
      queuePosition,
      reviewDueOn: await getDueDate(trx, application.id, 'initial-review'),
    },
  });
}
