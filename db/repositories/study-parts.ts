import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { Database } from '../connection.ts';

interface ModelPart {
  code: string;
  number: number;
  sha256: Buffer;
}

/** The model version that a study is computed on. */
export async function getModelPart(db: Database, modelVersionId: number): Promise<ModelPart> {
  const row = await db('model_versions')
    .join('network_models', 'network_models.id', 'model_versions.model_id')
    .where({ 'model_versions.id': modelVersionId })
    .first<ModelPart | undefined>({
      code: 'network_models.code',
      number: 'model_versions.number',
      sha256: 'model_versions.model_sha256',
    });
  if (row === undefined) throw new Error(`No model version has the row id ${modelVersionId}`);
  return row;
}

interface ProjectPart {
  revisionId: number;
  applicationNumber: number;
  sha256: Buffer;
}

/** The projects of these revisions, in the order asked for. */
export async function listProjectParts(db: Database, revisionIds: number[]): Promise<ProjectPart[]> {
  const rows = await db('application_revisions')
    .join('applications', 'applications.id', 'application_revisions.application_id')
    .whereIn('application_revisions.id', revisionIds)
    .select<ProjectPart[]>({
      revisionId: 'application_revisions.id',
      applicationNumber: 'applications.number',
      sha256: 'application_revisions.project_sha256',
    });
  const byId = new Map(rows.map((row) => [row.revisionId, row]));
  return revisionIds.map((id) => {
    const row = byId.get(id);
    if (row === undefined) throw new Error(`No revision has the row id ${id}`);
    return row;
  });
}

export async function getRuleSetPart(db: Database, ruleSetVersionId: number): Promise<RuleSet> {
  const row = await db('rule_set_versions')
    .where({ id: ruleSetVersionId })
    .first<{ content: string } | undefined>('content');
  if (row === undefined) throw new Error(`No rule set version has the row id ${ruleSetVersionId}`);
  return JSON.parse(row.content) as RuleSet;
}

interface StoredRun {
  state: string;
  basis: string;
  resultsVersion: number;
  studySha256: Buffer | null;
  resultSha256: Buffer | null;
}

/** What it takes to compute a run again. */
export async function findStoredRun(db: Database, publicId: string): Promise<StoredRun | undefined> {
  return db('runs').where({ public_id: publicId }).first<StoredRun | undefined>({
    state: 'state',
    basis: 'basis',
    resultsVersion: 'results_version',
    studySha256: 'study_sha256',
    resultSha256: 'result_sha256',
  });
}
