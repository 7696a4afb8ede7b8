import { inTransaction, type Transaction } from '../../db/connection.ts';
import type { Application } from '../../db/repositories/applications.ts';
import { insertDecision } from '../../db/repositories/decisions.ts';
import { getRuleSetVersion } from '../../db/repositories/rule-sets.ts';
import { findNewestRun, findRun, listFindings, type Run } from '../../db/repositories/runs.ts';
import { listWaivers, type WaiverRow } from '../../db/repositories/waivers.ts';
import type { ApplicationEvent, Stage } from '../../shared/rules/application-life.ts';
import type { ApplicationView, Decision, DecisionKind } from '../../shared/schemas/applications.ts';
import { getSetAside, isBlockingAt } from '../../shared/rules/rule-terms.ts';
import type { Finding, QuestionId } from '../../shared/schemas/findings.ts';
import { listAsked, type RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { conflict, refused } from '../errors.ts';
import { announce } from './announcements.ts';
import { getApplicationView } from './applications.ts';
import { describeStaleness } from './bases.ts';
import { findMailSubject, queueMail } from './outbox.ts';
import { leaveQueue } from './queue-entries.ts';
import { releaseFindings } from './released-findings.ts';
import { listUnconfirmedOf } from './rule-confirmations.ts';
import { checkHolder, checkVersion, getTransition, lockWithModel, moveApplication } from './transitions.ts';

const events = {
  approve: 'approve',
  'require-study': 'require-study',
  deny: 'deny',
} as const satisfies Record<DecisionKind, ApplicationEvent>;

/** The run that the decision names, if a decision can rest on it; locked against change by the model's lock. */
async function getDecidableRun(
  trx: Transaction,
  context: SignedInContext,
  application: Application,
  publicId: string,
): Promise<Run> {
  const run = await findRun(trx, publicId);
  if (run === undefined || run.applicationId !== application.id) {
    throw refused('run-unknown', 'The decision must name a run of this application');
  }
  if (run.kind !== 'official') {
    throw refused('run-preliminary', 'A decision rests on an official run; this one is preliminary');
  }
  const newest = await findNewestRun(trx, application.id);
  if (newest?.id !== run.id) {
    throw conflict('stale-run', 'A newer run was asked for since; decide on that one when it is finished');
  }
  if (run.state !== 'finished') {
    throw conflict('run-unfinished', 'The run is not finished; nothing can be decided on it yet');
  }
  const staleness = await describeStaleness(trx, context, application, run);
  if (staleness !== null) throw conflict('stale-run', `${staleness}; screen it again before deciding`);
  return run;
}

/** Remembered values decide nothing until somebody has confirmed them against the clause. */
async function getSoundRuleSet(trx: Transaction, application: Application): Promise<RuleSet> {
  if (application.ruleSetVersionId === null)
    throw new Error(`Application ${application.publicId} has no rules`);
  const version = await getRuleSetVersion(trx, application.ruleSetVersionId);
  const { content } = version;
  const unconfirmed = await listUnconfirmedOf(trx, version);
  if (unconfirmed.length === 0) return content;
  const remembered = unconfirmed.map(({ id }) => content.rules[id as QuestionId]?.source);
  const sources = [...new Set(remembered)].join('; ');
  throw refused(
    'rule-set-unconfirmed',
    `The rules hold values from memory that nobody has confirmed: ${sources}`,
  );
}

/** What was set aside and counts: with a second person's agreement where the rules ask for one. */
function listEffective(ruleSet: RuleSet, waivers: readonly WaiverRow[]): WaiverRow[] {
  const needsSecond = ({ question }: WaiverRow) =>
    getSetAside(ruleSet.rules[question as QuestionId]).secondPerson;
  return waivers.filter((waiver) => waiver.agreedBy !== null || !needsSecond(waiver));
}

/**
 * What stands against an approval at this stage: each finding that is neither within nor set aside, each question not
 * answered.
 */
function listOpenQuestions(
  ruleSet: RuleSet,
  stage: Stage,
  findings: readonly Finding[],
  waivers: readonly WaiverRow[],
): string[] {
  const isBlocking = ({ id }: { id: string }) => isBlockingAt(ruleSet.rules[id as QuestionId]?.stage, stage);
  const isWaived = (finding: Finding) =>
    waivers.some(({ question, element }) => question === finding.id && element === (finding.element ?? ''));
  const isSettled = (finding: Finding) =>
    finding.verdict === 'within' || finding.verdict === 'not-applicable' || isWaived(finding);
  const open = findings.filter((finding) => isBlocking(finding) && !isSettled(finding));
  const unanswered = listAsked(ruleSet).filter(
    (asked) => isBlocking(asked) && !findings.some(({ id }) => id === asked.id),
  );
  const named = open.map(({ question, element }) =>
    element === undefined ? question : `${question} (${element})`,
  );
  return [...named, ...unanswered.map(({ question }) => `${question} (not answered)`)];
}

/** What was decided and on what, for the trail. */
function describeDecision(decision: Decision, run: Run, waivers: readonly WaiverRow[]) {
  return {
    kind: decision.kind,
    reason: decision.reason,
    conditions: decision.conditions ?? null,
    runId: run.publicId,
    basisSha256: run.basisSha256.toString('hex'),
    resultSha256: run.resultSha256?.toString('hex') ?? null,
    setAside: waivers.map(({ question, element, reason, by, agreedBy }) => ({
      question,
      element,
      reason,
      by,
      agreedBy,
    })),
  };
}

async function mailDecision(
  trx: Transaction,
  context: SignedInContext,
  application: Application,
  decision: Decision,
  ground: { decisionId: number; findings: Finding[]; waivers: WaiverRow[] },
): Promise<void> {
  const subject = await findMailSubject(trx, application.id);
  if (subject === undefined) return;
  const { recipient, ...about } = subject;
  const words = (id: string) => ground.findings.find((finding) => finding.id === id)?.question ?? id;
  await queueMail(trx, context, {
    kind: 'decision',
    dedupeKey: `decision:${ground.decisionId}`,
    applicationId: application.id,
    recipient,
    payload: {
      ...about,
      decision: decision.kind,
      reason: decision.reason,
      conditions: decision.conditions ?? null,
      findings: releaseFindings(ground.findings),
      waivers: ground.waivers.map(({ question, reason }) => ({ question: words(question), reason })),
      runPublicId: decision.runId,
    },
  });
}

/**
 * Approves, requires a study or denies, on one official run that is of today: model and queue are locked while that is
 * checked, so nothing ahead can move between the check and the decision.
 */
export async function decide(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  body: Decision,
): Promise<ApplicationView> {
  const { changed, runs } = await inTransaction(deps.db, async (trx) => {
    const { application } = await lockWithModel(trx, publicId);
    await checkVersion(trx, context, application, body.version);
    await checkHolder(trx, context, application);
    const event = events[body.kind];
    getTransition(context, application, event);
    const run = await getDecidableRun(trx, context, application, body.runId);
    const ruleSet = await getSoundRuleSet(trx, application);
    const findings = await listFindings(trx, run.id);
    const waivers = listEffective(ruleSet, await listWaivers(trx, run.id));
    const open =
      body.kind === 'approve' ? listOpenQuestions(ruleSet, application.stage, findings, waivers) : [];
    if (open.length > 0) {
      const errors = open.map((message) => ({ path: 'kind', message }));
      const words = `Answer these or set them aside with a reason before you approve: ${open.join(' · ')}`;
      throw refused('findings-open', words, errors);
    }
    const decisionId = await insertDecision(trx, {
      applicationId: application.id,
      runId: run.id,
      kind: body.kind,
      reason: body.reason,
      conditions: body.conditions ?? null,
      decidedBy: context.actor.id,
      decidedAt: context.now,
    });
    const about = describeDecision(body, run, waivers);
    const moved = await moveApplication(trx, context, application, event, body.reason, {}, about);
    await mailDecision(trx, context, moved, body, { decisionId, findings, waivers });
    const rescreened = body.kind === 'deny' ? await leaveQueue(trx, context, moved) : [];
    return { changed: moved, runs: rescreened };
  });
  await announce(deps, { applications: [changed], runs });
  return getApplicationView(deps, context, publicId);
}
