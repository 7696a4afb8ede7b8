import type { Database } from '../../db/connection.ts';
import {
  countDraftApplications,
  listUnboundApplications,
  type UnboundApplication,
} from '../../db/repositories/rule-set-reach.ts';
import { findRuleSetVersion, getRuleSetVersion } from '../../db/repositories/rule-sets.ts';
import { listFindings } from '../../db/repositories/runs.ts';
import { listRecomputed, rejudge } from '../../shared/rules/rule-comparison.ts';
import type { RuleSetPreview, TouchedApplication } from '../../shared/schemas/rule-set-views.ts';
import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { Deps } from '../context.ts';
import { notFound } from '../errors.ts';
import type { Basis } from './bases.ts';
import { getUtilitySettings, writeReference, type UtilitySettings } from './utility-settings.ts';

async function describeTouched(
  db: Database,
  utility: UtilitySettings,
  next: RuleSet,
  application: UnboundApplication,
): Promise<TouchedApplication> {
  const { publicId, name, organisation, stage, number, runId, runBasis } = application;
  const who = { publicId, name, organisation, stage, reference: writeReference(utility, number) };
  if (runId === null || runBasis === null) {
    return { ...who, screened: false, changes: [], recomputed: [] };
  }
  const { ruleSetVersionId } = JSON.parse(runBasis) as Basis;
  const { content: previous } = await getRuleSetVersion(db, ruleSetVersionId);
  const findings = await listFindings(db, runId);
  return {
    ...who,
    screened: true,
    changes: findings.flatMap((finding) => rejudge(finding, previous, next) ?? []),
    recomputed: listRecomputed(findings, previous, next),
  };
}

/**
 * Whom publishing these rules would touch: what is handed in and bound to no rules yet, with the verdicts that the values
 * of its newest run would get. Nothing is computed anew.
 */
export async function previewRuleSet(deps: Deps, code: string, number: number): Promise<RuleSetPreview> {
  const { db } = deps;
  const version = await findRuleSetVersion(db, code, number);
  if (version === undefined) throw notFound('The rule set');
  const utility = await getUtilitySettings(db);
  const applications: TouchedApplication[] = [];
  for (const application of await listUnboundApplications(db)) {
    applications.push(await describeTouched(db, utility, version.content, application));
  }
  return { draftCount: await countDraftApplications(db), applications };
}
