import type { Database, Transaction } from '../../db/connection.ts';
import { findApplication, lockApplication, type Application } from '../../db/repositories/applications.ts';
import { findDraft, type Draft } from '../../db/repositories/drafts.ts';
import { getRevision } from '../../db/repositories/revisions.ts';
import { formatInstant } from '../../shared/format.ts';
import type { Answers } from '../../shared/schemas/answers.ts';
import type { SignedInContext } from '../context.ts';
import { conflict, notFound, type AppError } from '../errors.ts';
import { getUtilitySettings } from './utility-settings.ts';

/** An application whose answers its organisation may change now. */
export interface OpenDraft {
  application: Application;
  /** What was saved since it was started or sent back; undefined while that is nothing. */
  draft: Draft | undefined;
  answers: Answers;
}

async function openDraft(
  db: Database,
  context: SignedInContext,
  application: Application | undefined,
): Promise<OpenDraft> {
  if (application === undefined || application.organisationId !== context.actor.organisationId) {
    throw notFound('The application');
  }
  if (application.stage !== 'draft' && application.stage !== 'incomplete') {
    throw conflict('wrong-stage', 'This application was handed in; its answers cannot be changed now');
  }
  const draft = await findDraft(db, application.id);
  // What was sent back opens with what was handed in.
  const { revisionId } = application;
  const handedIn = draft === undefined && revisionId !== null ? await getRevision(db, revisionId) : undefined;
  return { application, draft, answers: draft?.answers ?? handedIn?.answers ?? {} };
}

export async function getOpenDraft(
  db: Database,
  context: SignedInContext,
  publicId: string,
): Promise<OpenDraft> {
  return openDraft(db, context, await findApplication(db, publicId));
}

export async function lockOpenDraft(
  trx: Transaction,
  context: SignedInContext,
  publicId: string,
): Promise<OpenDraft> {
  return openDraft(trx, context, await lockApplication(trx, publicId));
}

async function describeConflict(db: Database, { application, draft }: OpenDraft): Promise<AppError> {
  const { timeZone } = await getUtilitySettings(db);
  const at = formatInstant((draft?.updatedAt ?? application.updatedAt).toISOString(), timeZone);
  const who =
    draft === undefined ? 'The application was changed' : `${draft.updatedByName} changed the answers`;
  return conflict('version-conflict', `${who} on ${at}: load the page again before you go on`);
}

/**
 * Answers that nobody changed since `seenVersion` may be changed. A reviewer who only takes the application counts its
 * version up too, and is in nobody's way here.
 */
export async function refuseOutdated(db: Database, open: OpenDraft, seenVersion: number): Promise<void> {
  const { application, draft } = open;
  const isKnown = seenVersion <= application.version;
  const isCurrent = draft === undefined ? seenVersion === application.version : seenVersion >= draft.version;
  if (!isKnown || !isCurrent) throw await describeConflict(db, open);
}
