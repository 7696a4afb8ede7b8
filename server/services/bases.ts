import { createHash } from 'node:crypto';
import type { Database } from '../../db/connection.ts';
import type { Application } from '../../db/repositories/applications.ts';
import { getModelVersion } from '../../db/repositories/model-versions.ts';
import { findNetworkModelById } from '../../db/repositories/network-models.ts';
import { listOpenEntries, type QueueEntry } from '../../db/repositories/queue-entries.ts';
import { getRevision } from '../../db/repositories/revisions.ts';
import { getRuleSetVersion, getValidRuleSet } from '../../db/repositories/rule-sets.ts';
import { canonicalJson } from '../../shared/canonical-json.ts';
import { resultsVersion } from '../../shared/results-version.ts';
import { localDate } from '../../shared/rules/business-days.ts';
import type { RunKind } from '../../shared/schemas/runs.ts';
import type { Context } from '../context.ts';
import { getUtilitySettings } from './utility-settings.ts';

/** What a run is computed from: row ids of what never changes. Its hash says whether a result is still of today. */
export interface Basis {
  modelVersionId: number;
  /** In the order of their places in the queue. */
  aheadRevisionIds: number[];
  ownRevisionId: number;
  equipmentVersionIds: number[];
  ruleSetVersionId: number;
  resultsVersion: number;
}

interface FrozenBasis {
  basis: Basis;
  text: string;
  sha256: Buffer;
}

/**
 * A preliminary run sees everybody else who stands in the queue; an official one those before its own place. What the
 * published model already contains counts once.
 */
function selectAhead(
  entries: readonly QueueEntry[],
  application: Application,
  kind: RunKind,
  absorbs: readonly number[],
): QueueEntry[] {
  const own = entries.find((entry) => entry.applicationId === application.id);
  if (kind === 'official' && own === undefined) {
    throw new Error(`Application row ${application.id} has no place in the queue, an official run needs one`);
  }
  const before = kind === 'official' && own !== undefined ? own.position : Infinity;
  return entries.filter(
    (entry) => entry !== own && entry.position < before && !absorbs.includes(entry.applicationId),
  );
}

async function findRuleSetId(db: Database, context: Pick<Context, 'now'>, application: Application) {
  // Bound when it was confirmed complete: a rule set that comes later does not touch it.
  if (application.ruleSetVersionId !== null) return application.ruleSetVersionId;
  const { timeZone } = await getUtilitySettings(db);
  return (await getValidRuleSet(db, localDate(context.now, timeZone))).id;
}

/** The basis as it is at this moment; under the model's lock when something rests on it. */
export async function composeBasis(
  db: Database,
  context: Pick<Context, 'now'>,
  application: Application,
  kind: RunKind,
): Promise<FrozenBasis> {
  const { modelId, revisionId } = application;
  const model = modelId === null ? undefined : await findNetworkModelById(db, modelId);
  if (modelId === null || revisionId === null || !model || model.publishedVersionId === null) {
    throw new Error(`Application row ${application.id} has no published model or revision to screen on`);
  }
  const { absorbs } = await getModelVersion(db, model.publishedVersionId);
  const ahead = selectAhead(await listOpenEntries(db, modelId), application, kind, absorbs);
  const revision = await getRevision(db, revisionId);
  const basis: Basis = {
    modelVersionId: model.publishedVersionId,
    aheadRevisionIds: ahead.map((entry) => entry.revisionId),
    ownRevisionId: revisionId,
    equipmentVersionIds: [...revision.equipmentVersionIds].sort((a, b) => a - b),
    ruleSetVersionId: await findRuleSetId(db, context, application),
    resultsVersion,
  };
  const text = canonicalJson(basis);
  return { basis, text, sha256: createHash('sha256').update(text, 'utf8').digest() };
}

/** The words for a run that no longer rests on what is so today; null while it does. */
export async function describeStaleness(
  db: Database,
  context: Pick<Context, 'now'>,
  application: Application,
  run: { kind: RunKind; basis: string; basisSha256: Buffer },
): Promise<string | null> {
  const present = await composeBasis(db, context, application, run.kind);
  if (present.sha256.equals(run.basisSha256)) return null;
  const stored = JSON.parse(run.basis) as Basis;
  const changes = await listChanges(db, stored, present.basis);
  return `Since this run ${changes.join('; ')}`;
}

async function listChanges(db: Database, stored: Basis, present: Basis): Promise<string[]> {
  const ahead = (basis: Basis) => basis.aheadRevisionIds.join();
  const changes: string[] = [];
  if (stored.modelVersionId !== present.modelVersionId) {
    const { number } = await getModelVersion(db, present.modelVersionId);
    changes.push(`version ${number} of the feeder model was published`);
  }
  if (ahead(stored) !== ahead(present)) changes.push('the queue ahead changed');
  if (stored.ownRevisionId !== present.ownRevisionId) changes.push('the application was handed in again');
  if (stored.ruleSetVersionId !== present.ruleSetVersionId) {
    const { content } = await getRuleSetVersion(db, present.ruleSetVersionId);
    changes.push(`the rules “${content.name}”, version ${content.number}, came into force`);
  }
  if (stored.resultsVersion !== present.resultsVersion) changes.push('the way of computing changed');
  return changes.length > 0 ? changes : ['what it was computed from changed'];
}
