import { inTransaction } from '../../db/connection.ts';
import {
  findApplication,
  findApplicationById,
  type Application,
} from '../../db/repositories/applications.ts';
import { getBlob } from '../../db/repositories/blobs.ts';
import { hasDecision } from '../../db/repositories/decisions.ts';
import { findOpenEntry } from '../../db/repositories/queue-entries.ts';
import {
  findNewestReleasedRun,
  findNewestRun,
  findRun,
  listRunsOf,
  type Run,
} from '../../db/repositories/runs.ts';
import type { RunView } from '../../shared/schemas/runs.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { conflict, notFound } from '../errors.ts';
import { announce } from './announcements.ts';
import { recordAudit } from './audit.ts';
import { requestRun } from './run-requests.ts';
import { makeRunView } from './run-views.ts';
import { screenedStages } from './screened-stages.ts';
import { lockWithModel } from './transitions.ts';

/** Who may see it is decided but for this: an applicant's official run stays with the utility until it is decided on. */
async function isVisible(deps: Deps, context: SignedInContext, run: Run): Promise<boolean> {
  if (context.actor.role !== 'applicant' || run.kind === 'preliminary') return true;
  return hasDecision(deps.db, run.id);
}

async function getVisibleRun(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
): Promise<{ run: Run; application: Application }> {
  const run = await findRun(deps.db, publicId);
  if (run === undefined || !(await isVisible(deps, context, run))) throw notFound('The run');
  const application = await findApplicationById(deps.db, run.applicationId);
  if (application === undefined) throw new Error(`Run ${publicId} has no application`);
  return { run, application };
}

export async function getRunView(deps: Deps, context: SignedInContext, publicId: string): Promise<RunView> {
  const { run, application } = await getVisibleRun(deps, context, publicId);
  return makeRunView(deps, context, application, run);
}

/** What an application's page shows: the newest run that its reader may see; null before the first. */
export async function findNewestRunView(
  deps: Deps,
  context: SignedInContext,
  application: Application,
): Promise<RunView | null> {
  const run =
    context.actor.role === 'applicant'
      ? ((await findNewestReleasedRun(deps.db, application.id)) ??
        (await findNewestRun(deps.db, application.id, { kind: 'preliminary' })))
      : await findNewestRun(deps.db, application.id);
  return run === undefined ? null : makeRunView(deps, context, application, run);
}

/** All runs of an application, the newest first; findings are asked for one by one. Staff only. */
export async function listRuns(deps: Deps, context: SignedInContext, publicId: string): Promise<RunView[]> {
  const application = await findApplication(deps.db, publicId);
  if (application === undefined) throw notFound('The application');
  const views: RunView[] = [];
  for (const run of await listRunsOf(deps.db, application.id)) {
    const view = await makeRunView(deps, context, application, run);
    views.push({ ...view, findings: [], summary: null });
  }
  return views;
}

export interface StoredBytes {
  name: string;
  bytes: Buffer;
}

/** The very bytes that were hashed: study file or result. */
export async function getRunBytes(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  part: 'study' | 'result',
): Promise<StoredBytes> {
  const { run } = await getVisibleRun(deps, context, publicId);
  const sha256 = part === 'study' ? run.studySha256 : run.resultSha256;
  if (sha256 === null) throw notFound(part === 'study' ? 'The study file' : 'The result');
  return { name: `${part}-${run.publicId}.json`, bytes: await getBlob(deps.db, sha256) };
}

/** A new run on the present basis: official once there is a place in the queue. */
export async function screenAgain(deps: Deps, context: SignedInContext, publicId: string): Promise<RunView> {
  const requested = await inTransaction(deps.db, async (trx) => {
    const { application } = await lockWithModel(trx, publicId);
    if (!screenedStages.includes(application.stage)) {
      throw conflict('wrong-stage', 'Nothing is screened any more: the application is decided or closed');
    }
    const entry = await findOpenEntry(trx, application.id);
    const run = await requestRun(trx, context, application, entry === undefined ? 'preliminary' : 'official');
    const chain = `application:${publicId}` as const;
    await recordAudit(trx, context, chain, 'screen-again', `run:${run.publicId}`, null, {
      reason: 'asked for',
    });
    return run;
  });
  await announce(deps, { runs: [requested] });
  return getRunView(deps, context, requested.publicId);
}
