import type { Transaction } from '../../db/connection.ts';
import {
  findApplication,
  lockApplication,
  updateApplication,
  type Application,
  type ApplicationChanges,
} from '../../db/repositories/applications.ts';
import { lockNetworkModel, type NetworkModel } from '../../db/repositories/network-models.ts';
import { insertStageEvent } from '../../db/repositories/stage-events.ts';
import { findUserById } from '../../db/repositories/users.ts';
import { formatInstant } from '../../shared/format.ts';
import {
  findTransition,
  type ApplicationEvent,
  type Transition,
} from '../../shared/rules/application-life.ts';
import { eventWords } from '../../shared/event-words.ts';
import { stageWords } from '../../shared/wording.ts';
import type { SignedInContext } from '../context.ts';
import { conflict, notAllowed, notFound } from '../errors.ts';
import { findLastChange, recordAudit } from './audit.ts';
import { turnClocks } from './clocks.ts';
import { getUtilitySettings } from './utility-settings.ts';

/** Locks the row of an application for a change that touches no queue. */
export async function lockForChange(trx: Transaction, publicId: string): Promise<Application> {
  const application = await lockApplication(trx, publicId);
  if (application === undefined) throw notFound('The application');
  return application;
}

/** Locks the network model first, then the application: for whatever reads or changes the queue. */
export async function lockWithModel(
  trx: Transaction,
  publicId: string,
): Promise<{ application: Application; model: NetworkModel | null }> {
  const seen = await findApplication(trx, publicId);
  if (seen === undefined) throw notFound('The application');
  const model = seen.modelId === null ? null : await lockNetworkModel(trx, seen.modelId);
  const application = await lockForChange(trx, publicId);
  if (application.modelId !== seen.modelId) {
    throw conflict('version-conflict', 'The project moved to another feeder meanwhile; load the page again');
  }
  return { application, model };
}

/** Refuses a change of what the person has not seen, and says who was there before them, and when. */
export async function checkVersion(
  trx: Transaction,
  context: SignedInContext,
  application: Application,
  version: number,
): Promise<void> {
  if (application.version === version) return;
  const { who, at } = await findLastChange(trx, application, context.actor);
  const { timeZone } = await getUtilitySettings(trx);
  const words = `${who} changed this application on ${formatInstant(at.toISOString(), timeZone)}; load the page again`;
  throw conflict('version-conflict', words);
}

/** Refuses to act on what lies with a colleague: whoever wants to takes it first, which the trail then tells. */
export async function checkHolder(
  trx: Transaction,
  context: SignedInContext,
  { reviewerId }: Application,
): Promise<void> {
  if (reviewerId === null || reviewerId === context.actor.id) return;
  const holder = await findUserById(trx, reviewerId);
  throw conflict('held-by-another', `${holder?.name ?? 'A colleague'} has this folder; take it first`);
}

/** The transition, or a refusal that says why it cannot be made. */
export function getTransition(
  context: SignedInContext,
  application: Application,
  event: ApplicationEvent,
): Transition {
  const transition = findTransition(event, application.stage);
  if (transition === undefined) {
    const stage = stageWords[application.stage].label;
    throw conflict(
      'wrong-stage',
      `Not possible now: the stage is “${stage}” (asked for: “${eventWords[event]}”)`,
    );
  }
  if (!transition.roles.includes(context.actor.role)) throw notAllowed();
  return transition;
}

/**
 * The one way from stage to stage: the state machine decides, and event, clocks, row and audit entry are written
 * together. The caller holds the application's lock and has checked the version; gives the row as it is now. `about` is
 * what the step decided, for the trail: with public ids and hashes, so that it can be held against the rows it names.
 */
export async function moveApplication(
  trx: Transaction,
  context: SignedInContext,
  application: Application,
  event: ApplicationEvent,
  note: string | null,
  changes: ApplicationChanges = {},
  about: object | null = null,
): Promise<Application> {
  const { to, waitingOn } = getTransition(context, application, event);
  await insertStageEvent(trx, {
    applicationId: application.id,
    event,
    fromStage: application.stage,
    toStage: to,
    actorId: context.actor.id,
    note,
    at: context.now,
  });
  const moved: ApplicationChanges = {
    ...changes,
    stage: to,
    waitingOn,
    nextDueOn: await turnClocks(trx, context, { ...application, ...changes }, event, to),
    version: application.version + 1,
    updatedAt: context.now,
  };
  await updateApplication(trx, application.id, moved);
  await recordAudit(
    trx,
    context,
    `application:${application.publicId}`,
    event,
    `application:${application.publicId}`,
    { stage: application.stage, waitingOn: application.waitingOn, version: application.version },
    { stage: to, waitingOn, version: application.version + 1, note, ...(about === null ? {} : { about }) },
  );
  return { ...application, ...moved };
}
