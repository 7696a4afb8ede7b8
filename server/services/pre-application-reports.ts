import { inTransaction } from '../../db/connection.ts';
import { getModelVersion } from '../../db/repositories/model-versions.ts';
import {
  findPreApplicationReport,
  insertPreApplicationReport,
  listPreApplicationReports,
  type StoredPreApplicationReport,
} from '../../db/repositories/pre-application-reports.ts';
import { listOpenEntries } from '../../db/repositories/queue-entries.ts';
import { getValidRuleSet } from '../../db/repositories/rule-sets.ts';
import { localDate } from '../../shared/rules/business-days.ts';
import type {
  PreApplicationReport,
  PreApplicationRequest,
} from '../../shared/schemas/pre-application-reports.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { invalid, notFound } from '../errors.ts';
import { recordAudit } from './audit.ts';
import { newPublicId } from './public-ids.ts';
import { snapToNode } from './snapping.ts';
import { composePlaceStudy } from './studies.ts';
import { getUtilitySettings } from './utility-settings.ts';

/** "PR-12": reports are counted by themselves. */
function toView({ id, request, requestedAt, ...report }: StoredPreApplicationReport): PreApplicationReport {
  const { lat, lng, sizeKw = null, purpose = null } = request;
  return { ...report, number: `PR-${id}`, requestedAt: requestedAt.toISOString(), lat, lng, sizeKw, purpose };
}

async function getReport(deps: Deps, publicId: string): Promise<PreApplicationReport> {
  const found = await findPreApplicationReport(deps.db, publicId);
  if (found === undefined) throw notFound('The report');
  return toView(found);
}

/** Where the place joins the network, and what the figures rest on: the published model and everybody in the queue. */
async function findGround(deps: Deps, context: SignedInContext, request: PreApplicationRequest) {
  const { lat, lng, phases } = request;
  const { found, reachMetres } = await snapToNode(deps.db, { lat, lng, phases });
  if (found === undefined) {
    const kind = phases === 'ABC' ? 'three-phase' : 'one-phase';
    const message = `Nothing that can take a ${kind} project is within ${reachMetres} m of the pin`;
    throw invalid([{ path: 'lat', message }]);
  }
  const { absorbs } = await getModelVersion(deps.db, found.model.versionId);
  const entries = await listOpenEntries(deps.db, found.model.modelId);
  const { timeZone } = await getUtilitySettings(deps.db);
  const rules = await getValidRuleSet(deps.db, localDate(context.now, timeZone));
  const aheadRevisionIds = entries
    .filter(({ applicationId }) => !absorbs.includes(applicationId))
    .map(({ revisionId }) => revisionId);
  return { node: found.node, modelVersionId: found.model.versionId, aheadRevisionIds, rules };
}

/** Computes and keeps the report of a place, on the network and the queue as they stand. */
export async function requestPreApplicationReport(
  deps: Deps,
  context: SignedInContext,
  request: PreApplicationRequest,
): Promise<PreApplicationReport> {
  const { actor, now } = context;
  if (actor.organisationId === null)
    throw new Error(`${actor.publicId} asks for a report without an organisation`);
  const organisationId = actor.organisationId;
  const { node, modelVersionId, aheadRevisionIds, rules } = await findGround(deps, context, request);
  const { bytes } = await composePlaceStudy(deps.db, modelVersionId, aheadRevisionIds);
  const figures = await deps.compute.ask('pre-application', {
    studyBytes: bytes,
    ruleSet: rules.content,
    node: node.nodeId,
  });
  const publicId = newPublicId();
  await inTransaction(deps.db, async (trx) => {
    await insertPreApplicationReport(trx, {
      publicId,
      organisationId,
      requestedBy: actor.id,
      requestedAt: now,
      request,
      modelVersionId,
      nodeId: node.nodeId,
      circuit: node.circuit,
      ruleSetVersionId: rules.id,
      aheadRevisionIds,
      figures,
    });
    await recordAudit(trx, context, 'system', 'pre-application-report', publicId, null, request);
  });
  return getReport(deps, publicId);
}

/** Of the reader's organisation; staff read all. */
export async function listReports(deps: Deps, { actor }: SignedInContext): Promise<PreApplicationReport[]> {
  const organisationId = actor.role === 'applicant' ? actor.organisationId : null;
  return (await listPreApplicationReports(deps.db, organisationId)).map(toView);
}

/** Who may read it was asked before (access.ts). */
export async function getPreApplicationReport(deps: Deps, publicId: string): Promise<PreApplicationReport> {
  return getReport(deps, publicId);
}

/** The report on paper, made from what was kept. */
export async function printPreApplicationReport(
  deps: Deps,
  publicId: string,
  paper: 'a4' | 'letter',
): Promise<{ name: string; bytes: Uint8Array }> {
  const report = await getReport(deps, publicId);
  const { name: utility, timeZone } = await getUtilitySettings(deps.db);
  const bytes = await deps.compute.ask('pre-application-pdf', { report, utility, timeZone, paper });
  return { name: `${report.number}.pdf`, bytes };
}
