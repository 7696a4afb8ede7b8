import type { Stage, WaitingOn } from '../../shared/rules/application-life.ts';
import type { GeneratorKind } from '../../shared/schemas/equipment.ts';
import type { Database, Transaction } from '../connection.ts';

/** The row of an application. */
export interface Application {
  id: number;
  publicId: string;
  /** Null until it is handed in. */
  number: number | null;
  organisationId: number;
  createdBy: number;
  name: string;
  place: string | null;
  kind: GeneratorKind | null;
  sizeKw: number | null;
  exportKw: number | null;
  modelId: number | null;
  circuit: string | null;
  stage: Stage;
  waitingOn: WaitingOn;
  reviewerId: number | null;
  revisionId: number | null;
  runId: number | null;
  ruleSetVersionId: number | null;
  receivedOn: string | null;
  nextDueOn: string | null;
  outsideCount: number | null;
  needsDataCount: number | null;
  auditSeq: number;
  auditHead: Buffer | null;
  version: number;
  createdAt: Date;
  updatedAt: Date;
}

const columns = {
  id: 'id',
  publicId: 'public_id',
  number: 'number',
  organisationId: 'organisation_id',
  createdBy: 'created_by',
  name: 'name',
  place: 'place',
  kind: 'kind',
  sizeKw: 'size_kw',
  exportKw: 'export_kw',
  modelId: 'model_id',
  circuit: 'circuit',
  stage: 'stage',
  waitingOn: 'waiting_on',
  reviewerId: 'reviewer_id',
  revisionId: 'revision_id',
  runId: 'run_id',
  ruleSetVersionId: 'rule_set_version_id',
  receivedOn: 'received_on',
  nextDueOn: 'next_due_on',
  outsideCount: 'outside_count',
  needsDataCount: 'needs_data_count',
  auditSeq: 'audit_seq',
  auditHead: 'audit_head',
  version: 'version',
  createdAt: 'created_at',
  updatedAt: 'updated_at',
} as const satisfies Record<keyof Application, string>;

type ApplicationColumn = keyof Application;

function selectApplications(db: Database) {
  return db('applications').select<Application[]>(columns);
}

export async function findApplication(db: Database, publicId: string): Promise<Application | undefined> {
  const [row] = await selectApplications(db).where({ public_id: publicId });
  return row;
}

export async function findApplicationById(db: Database, id: number): Promise<Application | undefined> {
  const [row] = await selectApplications(db).where({ id });
  return row;
}

/** Waits for the row and keeps it until the transaction ends; a network model's row is locked before it. */
export async function lockApplication(trx: Transaction, publicId: string): Promise<Application | undefined> {
  const [row] = await selectApplications(trx).where({ public_id: publicId }).forUpdate();
  return row;
}

export async function lockApplicationById(trx: Transaction, id: number): Promise<Application | undefined> {
  const [row] = await selectApplications(trx).where({ id }).forUpdate();
  return row;
}

interface NewApplication {
  publicId: string;
  organisationId: number;
  createdBy: number;
  at: Date;
}

/** A draft: in nobody's worklist but its organisation's. */
/** Begun and never handed in. */
export async function countDrafts(db: Database, organisationId: number): Promise<number> {
  const [row] = await db('applications')
    .where({ organisation_id: organisationId, stage: 'draft' satisfies Stage })
    .count<{ drafts: number }[]>({ drafts: '*' });
  return Number(row?.drafts ?? 0);
}

export async function insertApplication(trx: Database, application: NewApplication): Promise<number> {
  const [id] = await trx('applications').insert({
    public_id: application.publicId,
    organisation_id: application.organisationId,
    created_by: application.createdBy,
    stage: 'draft' satisfies Stage,
    waiting_on: 'applicant' satisfies WaitingOn,
    created_at: application.at,
    updated_at: application.at,
  });
  return id as number;
}

export type ApplicationChanges = Partial<Omit<Application, 'id' | 'publicId' | 'createdAt' | 'createdBy'>>;

/** Writes what is named and nothing else; the caller holds the row's lock and counts `version` up. */
export async function updateApplication(
  trx: Database,
  id: number,
  changes: ApplicationChanges,
): Promise<void> {
  const row = Object.fromEntries(
    Object.entries(changes).map(([key, value]) => [columns[key as ApplicationColumn], value]),
  );
  const changed = await trx('applications').where({ id }).update(row);
  if (changed !== 1) throw new Error(`Application row ${id}: got ${changed} rows changed, expected 1`);
}

/** Of what nobody received: an application that was handed in is never deleted. */
export async function deleteDraftApplication(trx: Database, id: number): Promise<void> {
  await trx('application_drafts').where({ application_id: id }).delete();
  await trx('stage_events').where({ application_id: id }).delete();
  const deleted = await trx('applications').where({ id, stage: 'draft' }).delete();
  if (deleted !== 1) throw new Error(`Draft application row ${id}: got ${deleted} rows deleted, expected 1`);
}

/** The next number that people quote; holds the counter's row until the transaction ends, so none is given twice. */
export async function takeApplicationNumber(trx: Transaction): Promise<number> {
  await trx.raw(
    `INSERT INTO settings (name, value) VALUES ('applications.last-number', '1001')
     ON DUPLICATE KEY UPDATE value = CAST(value AS UNSIGNED) + 1`,
  );
  const row = await trx('settings')
    .where({ name: 'applications.last-number' })
    .first<{ value: string }>('value');
  return Number(row.value);
}
