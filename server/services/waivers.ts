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
import {
  agreeToWaiver,
  deleteWaiver,
  listWaivers,
  saveWaiver,
  type WaiverRow,
} from '../../db/repositories/waivers.ts';
import { getRuleSetVersion } from '../../db/repositories/rule-sets.ts';
import { getSetAside } from '../../shared/rules/rule-terms.ts';
import type { Waiver, WaiverAgreement } from '../../shared/schemas/applications.ts';
import type { QuestionId } from '../../shared/schemas/findings.ts';
import type { RunView } from '../../shared/schemas/runs.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { conflict, notAllowed, notFound, refused } from '../errors.ts';
import { announce } from './announcements.ts';
import { recordAudit } from './audit.ts';
import type { Basis } from './bases.ts';
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

async function findWaiver(trx: Transaction, run: Run, key: FindingKey): Promise<WaiverRow | undefined> {
  const waivers = await listWaivers(trx, run.id);
  return waivers.find(({ question, element }) => question === key.question && element === key.element);
}

/** Who may set findings of this question aside, as the rules say that the run was asked by. */
async function getTerms(trx: Transaction, context: SignedInContext, run: Run, { question }: FindingKey) {
  const { ruleSetVersionId } = JSON.parse(run.basis) as Basis;
  const { content } = await getRuleSetVersion(trx, ruleSetVersionId);
  const terms = getSetAside(content.rules[question as QuestionId]);
  if (!terms.roles.some((role) => role === context.actor.role)) {
    throw notAllowed('role-not-trusted', 'The rules do not let your role set this finding aside');
  }
  return terms;
}

/** Both ways alike: lock, change, write the audit entry; then tell the pages that show the run. */
async function changeWaiver(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  key: FindingKey,
  step: { action: string; after: { reason: string | null; agreedBy?: string } },
  change: (trx: Transaction, run: Run) => Promise<void>,
): Promise<RunView> {
  const event = await inTransaction(deps.db, async (trx) => {
    const { run, application } = await lockOpenRun(trx, publicId);
    const before = await findWaiver(trx, run, key);
    await change(trx, run);
    const chain = `application:${application.publicId}` as const;
    const subject = `run:${publicId}`;
    const on = { ...key, runId: publicId, basisSha256: run.basisSha256.toString('hex') };
    const was = { ...on, reason: before?.reason ?? null };
    await recordAudit(trx, context, chain, step.action, subject, was, { ...on, ...step.after });
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
  const step = { action: 'set-finding-aside', after: { reason: body.reason } };
  return changeWaiver(deps, context, publicId, key, step, async (trx, run) => {
    const findings = await listFindings(trx, run.id);
    const finding = findings.find(({ id, element = '' }) => id === key.question && element === key.element);
    if (finding === undefined) throw refused('finding-unknown', 'The run has no such finding');
    if (finding.verdict === 'within' || finding.verdict === 'not-applicable') {
      throw refused('finding-settled', 'This finding stands against nothing; there is nothing to set aside');
    }
    await getTerms(trx, context, run, key);
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
  const step = { action: 'take-back-waiver', after: { reason: null } };
  return changeWaiver(deps, context, publicId, key, step, async (trx, run) => {
    await getTerms(trx, context, run, key);
    if ((await findWaiver(trx, run, key)) === undefined) throw notFound('What was set aside');
    await deleteWaiver(trx, { runId: run.id, ...key });
  });
}

/** The second person: what the rules let nobody set aside alone counts from here on. */
export async function agreeToSettingAside(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  body: WaiverAgreement,
): Promise<RunView> {
  const key = { question: body.question, element: body.element ?? '' };
  const step = { action: 'agree-to-waiver', after: { reason: body.reason, agreedBy: context.actor.name } };
  return changeWaiver(deps, context, publicId, key, step, async (trx, run) => {
    const { secondPerson } = await getTerms(trx, context, run, key);
    const waiver = await findWaiver(trx, run, key);
    if (waiver === undefined) throw notFound('What was set aside');
    if (!secondPerson) throw refused('one-is-enough', 'The rules ask for no second person here');
    if (waiver.byId === context.actor.id) {
      throw refused('second-person', 'You set it aside yourself; another person must agree');
    }
    // Agreed is to what was read: another reason is another setting-aside.
    if (waiver.reason !== body.reason) {
      throw conflict('version-conflict', 'The reason was changed meanwhile; load the page again');
    }
    await agreeToWaiver(trx, { runId: run.id, ...key }, { by: context.actor.id, at: context.now });
  });
}
