import type { Database } from '../../db/connection.ts';
import type { Application } from '../../db/repositories/applications.ts';
import { getRevision } from '../../db/repositories/revisions.ts';
import { getRuleSetVersion } from '../../db/repositories/rule-sets.ts';
import { listFindings, type Run } from '../../db/repositories/runs.ts';
import { getModelPart, listProjectParts } from '../../db/repositories/study-parts.ts';
import { listWaivers } from '../../db/repositories/waivers.ts';
import { getSetAside } from '../../shared/rules/rule-terms.ts';
import { listNotAsked, type RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { RunBasisView, RunView, WaivedFinding } from '../../shared/schemas/runs.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { describeStaleness, type Basis } from './bases.ts';
import { releaseFindings } from './released-findings.ts';
import { screenedStages } from './screened-stages.ts';
import { getUtilitySettings, writeReference } from './utility-settings.ts';

type StaffPart = Pick<RunView, 'terms' | 'stale' | 'staleReason' | 'summary' | 'warnings' | 'basis'>;

const nothingForApplicants: StaffPart = {
  terms: {},
  stale: null,
  staleReason: null,
  summary: null,
  warnings: [],
  basis: null,
};

async function makeBasisView(db: Database, run: Run): Promise<RunBasisView> {
  const basis = JSON.parse(run.basis) as Basis;
  const model = await getModelPart(db, basis.modelVersionId);
  const { content } = await getRuleSetVersion(db, basis.ruleSetVersionId);
  const ahead = await listProjectParts(db, basis.aheadRevisionIds);
  const utility = await getUtilitySettings(db);
  return {
    modelCode: model.code,
    modelVersion: model.number,
    ruleSet: `${content.name}, version ${content.number}`,
    ahead: ahead.map(({ applicationNumber }) => writeReference(utility, applicationNumber)),
    revisionNumber: (await getRevision(db, basis.ownRevisionId)).number,
    resultsVersion: basis.resultsVersion,
    basisSha256: run.basisSha256.toString('hex'),
    studySha256: run.studySha256?.toString('hex') ?? null,
    resultSha256: run.resultSha256?.toString('hex') ?? null,
  };
}

/** Once in the queue nothing rests on a preliminary run any more, and after the decision on none. */
function isStalenessAsked(application: Application, run: Run): boolean {
  if (!screenedStages.includes(application.stage)) return false;
  const isQueued = application.ruleSetVersionId !== null;
  return run.kind === (isQueued ? 'official' : 'preliminary');
}

async function makeStaffPart(
  deps: Deps,
  context: SignedInContext,
  application: Application,
  run: Run,
): Promise<StaffPart> {
  const isAsked = isStalenessAsked(application, run);
  const terms = describeTerms(await getRulesOf(deps.db, run));
  const staleReason = isAsked ? await describeStaleness(deps.db, context, application, run) : null;
  return {
    terms,
    stale: isAsked ? staleReason !== null : null,
    staleReason,
    summary: run.summary,
    warnings: run.warnings,
    basis: await makeBasisView(deps.db, run),
  };
}

function findPercent(run: Run): number {
  return run.state === 'finished' ? 100 : (run.steps.at(-1)?.percent ?? 0);
}

async function listWaivedFindings(deps: Deps, run: Run, isStaff: boolean): Promise<WaivedFinding[]> {
  const waivers = await listWaivers(deps.db, run.id);
  return waivers.map(({ question, element, reason, by, at, agreedBy }) => ({
    question,
    element: element === '' || !isStaff ? null : element,
    reason,
    by: isStaff ? by : 'The utility',
    at: at.toISOString(),
    agreedBy: isStaff ? agreedBy : null,
  }));
}

/** The rules that the run was asked by. */
async function getRulesOf(db: Database, run: Run): Promise<RuleSet> {
  const { ruleSetVersionId } = JSON.parse(run.basis) as Basis;
  return (await getRuleSetVersion(db, ruleSetVersionId)).content;
}

function describeTerms({ rules }: RuleSet): RunView['terms'] {
  const terms = Object.entries(rules).map(([id, rule]) => [
    id,
    { stage: rule.stage, setAside: getSetAside(rule) },
  ]);
  return Object.fromEntries(terms) as RunView['terms'];
}

/** A run as this person may see it; whether they may at all is decided before. */
export async function makeRunView(
  deps: Deps,
  context: SignedInContext,
  application: Application,
  run: Run,
): Promise<RunView> {
  const isStaff = context.actor.role !== 'applicant';
  const findings = await listFindings(deps.db, run.id);
  const rules = await getRulesOf(deps.db, run);
  const detail = isStaff && run.errorDetail !== null ? ` (${run.errorDetail})` : '';
  return {
    publicId: run.publicId,
    applicationId: application.publicId,
    kind: run.kind,
    state: run.state,
    percent: findPercent(run),
    steps: run.steps,
    queuedAt: run.queuedAt.toISOString(),
    startedAt: run.startedAt?.toISOString() ?? null,
    finishedAt: run.finishedAt?.toISOString() ?? null,
    error: run.error === null ? null : `${run.error}${detail}`,
    findings: isStaff ? findings : releaseFindings(findings),
    notAskedYet: listNotAsked(rules),
    waivers: await listWaivedFindings(deps, run, isStaff),
    ...(isStaff ? await makeStaffPart(deps, context, application, run) : nothingForApplicants),
  };
}
