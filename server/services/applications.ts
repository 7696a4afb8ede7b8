import type { Database } from '../../db/connection.ts';
import { findApplication, type Application } from '../../db/repositories/applications.ts';
import { findNewestDecision } from '../../db/repositories/decisions.ts';
import { listRevisionPapers } from '../../db/repositories/files.ts';
import { listInformationRequests } from '../../db/repositories/information-requests.ts';
import { findModelNode } from '../../db/repositories/model-nodes.ts';
import { findNetworkModelById } from '../../db/repositories/network-models.ts';
import { findOpenEntry, listOpenEntries } from '../../db/repositories/queue-entries.ts';
import { findRevision, type Revision } from '../../db/repositories/revisions.ts';
import { getRuleSetVersion } from '../../db/repositories/rule-sets.ts';
import { listStageEvents } from '../../db/repositories/stage-events.ts';
import { getWorklistRow } from '../../db/repositories/worklists.ts';
import { listAllowedEvents } from '../../shared/rules/application-life.ts';
import type {
  ApplicationView,
  DecisionView,
  InformationRequestView,
  StageEventView,
} from '../../shared/schemas/applications.ts';
import type { RunView } from '../../shared/schemas/runs.ts';
import type { Actor, Deps, SignedInContext } from '../context.ts';
import { notFound } from '../errors.ts';
import { toApplicationRow, utilityActor } from './application-rows.ts';
import { listClockViews } from './clocks.ts';
import { toPaperView } from './files.ts';
import { findNewestRunView } from './runs.ts';
import { getUtilitySettings } from './utility-settings.ts';

/** The application, if its reader may know of it: their organisation's, or for staff whatever was handed in. */
async function getReadable(db: Database, reader: Actor, publicId: string): Promise<Application> {
  const application = await findApplication(db, publicId);
  const isOwn = application?.organisationId === reader.organisationId;
  const isReadable = reader.role === 'applicant' ? isOwn : application?.stage !== 'draft';
  if (application === undefined || !isReadable) throw notFound('The application');
  return application;
}

async function listEvents(db: Database, reader: Actor, applicationId: number): Promise<StageEventView[]> {
  const events = await listStageEvents(db, applicationId);
  return events.map(({ actor, at, ...event }) => {
    const isHidden = reader.role === 'applicant' && actor !== null && actor.role !== 'applicant';
    const who = isHidden ? utilityActor : (actor?.name ?? 'the desk');
    return { ...event, actor: who, at: at.toISOString() };
  });
}

async function listRequests(db: Database, reader: Actor, id: number): Promise<InformationRequestView[]> {
  const requests = await listInformationRequests(db, id);
  return requests.map(({ items, askedBy, askedAt, answeredAt }) => ({
    items,
    askedBy: reader.role === 'applicant' ? utilityActor : askedBy,
    askedAt: askedAt.toISOString(),
    answeredAt: answeredAt?.toISOString() ?? null,
  }));
}

async function findDecision(db: Database, reader: Actor, id: number): Promise<DecisionView | null> {
  const decision = await findNewestDecision(db, id);
  if (decision === undefined) return null;
  const { kind, reason, conditions, runPublicId, decidedBy, decidedAt } = decision;
  const by = reader.role === 'applicant' ? utilityActor : decidedBy;
  return { kind, reason, conditions, runId: runPublicId, by, at: decidedAt.toISOString() };
}

/** Where it connects, on the model as it is published now. Staff only: it is the network. */
async function findPoi(
  db: Database,
  reader: Actor,
  revision: Revision | undefined,
): Promise<ApplicationView['poi']> {
  if (reader.role === 'applicant' || revision === undefined) return null;
  const model = await findNetworkModelById(db, revision.modelId);
  const versionId = model?.publishedVersionId ?? null;
  if (model === undefined || versionId === null) return null;
  const node = await findModelNode(db, versionId, revision.poiNode);
  if (node === undefined) return null;
  const { kv, lat, lng } = node;
  return { modelCode: model.code, node: revision.poiNode, circuit: revision.circuit ?? '', kv, lat, lng };
}

async function findPlaceInQueue(db: Database, applicationId: number) {
  const entry = await findOpenEntry(db, applicationId);
  if (entry === undefined) return { queuePosition: null, aheadCount: null };
  const entries = await listOpenEntries(db, entry.modelId);
  const ahead = entries.filter(({ position }) => position < entry.position);
  return { queuePosition: entry.position, aheadCount: ahead.length };
}

async function findRuleSet(db: Database, id: number | null): Promise<ApplicationView['ruleSet']> {
  if (id === null) return null;
  const { code, number, content } = await getRuleSetVersion(db, id);
  return { code, number, name: content.name };
}

async function describeRevision(db: Database, revision: Revision | undefined) {
  if (revision === undefined) {
    return { answers: null, papers: [], revisionNumber: null, attestedBy: null, attestedAt: null };
  }
  const { answers, number, attestedBy, attestedAt } = revision;
  const papers = (await listRevisionPapers(db, revision.id)).map(toPaperView);
  return { answers, papers, revisionNumber: number, attestedBy, attestedAt: attestedAt.toISOString() };
}

/** An applicant's counts come from the run that they may read, not from the newest. */
function countFindings(run: RunView | null) {
  if (run?.state !== 'finished') return { outsideCount: null, needsDataCount: null };
  const count = (verdict: string) => run.findings.filter((finding) => finding.verdict === verdict).length;
  return { outsideCount: count('outside'), needsDataCount: count('needs-data') };
}

/** Everything that one page about an application needs, as its reader may see it. */
export async function getApplicationView(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
): Promise<ApplicationView> {
  const { db } = deps;
  const reader = context.actor;
  const application = await getReadable(db, reader, publicId);
  const { id, revisionId } = application;
  const clocks = (await listClockViews(db, context, [id])).get(id) ?? [];
  const row = toApplicationRow(await getWorklistRow(db, id), clocks, reader, await getUtilitySettings(db));
  const revision = revisionId === null ? undefined : await findRevision(db, revisionId);
  const run = await findNewestRunView(deps, context, application);
  return {
    ...row,
    ...(reader.role === 'applicant' && countFindings(run)),
    version: application.version,
    ...(await describeRevision(db, revision)),
    ...(await findPlaceInQueue(db, id)),
    clocks,
    events: await listEvents(db, reader, id),
    requests: await listRequests(db, reader, id),
    decision: await findDecision(db, reader, id),
    run,
    allowed: listAllowedEvents(application.stage, reader.role),
    poi: await findPoi(db, reader, revision),
    ruleSet: await findRuleSet(db, application.ruleSetVersionId),
  };
}
