import { inTransaction, type Transaction } from '../../db/connection.ts';
import { lockApplicationById, type Application } from '../../db/repositories/applications.ts';
import { hasDecision } from '../../db/repositories/decisions.ts';
import {
  findNewestRun,
  findRun,
  listFindings,
  raiseRunVersion,
  type Run,
} from '../../db/repositories/runs.ts';
import { deleteWaiver, listWaivers, saveWaiver } from '../../db/repositories/waivers.ts';
import type { Waiver } from '../../shared/schemas/applications.ts';
import type { RunView } from '../../shared/schemas/runs.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { conflict, notFound, refused } from '../errors.ts';
import { announce } from './announcements.ts';
import { recordAudit } from './audit.ts';
import { getRunView } from './runs.ts';
import { screenedStages } from './screened-stages.ts';

interface FindingKey {
  question: string;
  /** Empty where the question has none. */
  element: string;
}

/** The run and its application, locked, if what it found can still be set aside. */
async function lockOpenRun(
  trx: Transaction,
  publicId: string,
): Promise<{ run: Run; application: Application }> {
  const seen = await findRun(trx, publicId);
  const application = seen && (await lockApplicationById(trx, seen.applicationId));
  const run = application && (await findRun(trx, publicId));
  if (run === undefined || application === undefined) throw notFound('The run');
  if (!screenedStages.includes(application.stage) || (await hasDecision(trx, run.id))) {
    throw conflict('run-decided', 'A decision was made; what it rests on is not changed any more');
  }
  const newest = await findNewestRun(trx, application.id, { state: 'finished' });
  if (newest?.id !== run.id) {
    throw conflict('stale-run', 'Findings are set aside on the newest finished run only; this is not it');
  }
  return { run, application };
}

async function findReason(trx: Transaction, run: Run, key: FindingKey): Promise<string | null> {
  const waivers = await listWaivers(trx, run.id);
  const known = waivers.find(({ question, element }) => question === key.question && element === key.element);
  return known?.reason ?? null;
}

/** Both ways alike: lock, change, write the audit entry; then tell the pages that show the run. */
async function changeWaiver(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  key: FindingKey,
  reason: string | null,
  change: (trx: Transaction, run: Run) => Promise<void>,
): Promise<RunView> {
  const event = await inTransaction(deps.db, async (trx) => {
    const { run, application } = await lockOpenRun(trx, publicId);
    const before = await findReason(trx, run, key);
    await change(trx, run);
    const chain = `application:${application.publicId}` as const;
    const action = reason === null ? 'take-back-waiver' : 'set-finding-aside';
    const subject = `run:${publicId}`;
    const on = { ...key, runId: publicId, basisSha256: run.basisSha256.toString('hex') };
    await recordAudit(trx, context, chain, action, subject, { ...on, reason: before }, { ...on, reason });
    const version = await raiseRunVersion(trx, run);
    return { publicId, applicationPublicId: application.publicId, version };
  });
  await announce(deps, { runVersions: [event] });
  return getRunView(deps, context, publicId);
}

/** Sets one finding aside for a reason that goes into the letter; what is within its limit needs none. */
export async function waiveFinding(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  body: Waiver,
): Promise<RunView> {
  const key = { question: body.question, element: body.element ?? '' };
  return changeWaiver(deps, context, publicId, key, body.reason, async (trx, run) => {
    const findings = await listFindings(trx, run.id);
    const finding = findings.find(({ id, element = '' }) => id === key.question && element === key.element);
    if (finding === undefined) throw refused('finding-unknown', 'The run has no such finding');
    if (finding.verdict === 'within' || finding.verdict === 'not-applicable') {
      throw refused('finding-settled', 'This finding stands against nothing; there is nothing to set aside');
    }
    const by = { waivedBy: context.actor.id, waivedAt: context.now };
    await saveWaiver(trx, { runId: run.id, ...key, reason: body.reason, ...by });
  });
}

export async function takeBackWaiver(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  key: FindingKey,
): Promise<RunView> {
  return changeWaiver(deps, context, publicId, key, null, async (trx, run) => {
    if ((await findReason(trx, run, key)) === null) throw notFound('What was set aside');
    await deleteWaiver(trx, { runId: run.id, ...key });
  });
}
