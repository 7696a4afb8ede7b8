import type {
  PreApplicationFigures,
  PreApplicationRequest,
} from '../../shared/schemas/pre-application-reports.ts';
import type { Database, Transaction } from '../connection.ts';

export interface NewPreApplicationReport {
  publicId: string;
  organisationId: number;
  requestedBy: number;
  requestedAt: Date;
  request: PreApplicationRequest;
  modelVersionId: number;
  nodeId: string;
  circuit: string;
  ruleSetVersionId: number;
  aheadRevisionIds: number[];
  figures: PreApplicationFigures;
}

export async function insertPreApplicationReport(
  trx: Transaction,
  report: NewPreApplicationReport,
): Promise<void> {
  await trx('pre_application_reports').insert({
    public_id: report.publicId,
    organisation_id: report.organisationId,
    requested_by: report.requestedBy,
    requested_at: report.requestedAt,
    request: JSON.stringify(report.request),
    model_version_id: report.modelVersionId,
    node_id: report.nodeId,
    circuit: report.circuit,
    rule_set_version_id: report.ruleSetVersionId,
    ahead_revision_ids: JSON.stringify(report.aheadRevisionIds),
    figures: JSON.stringify(report.figures),
  });
}

export interface StoredPreApplicationReport {
  id: number;
  publicId: string;
  organisation: string;
  requestedBy: string;
  requestedAt: Date;
  request: PreApplicationRequest;
  substation: string;
  circuit: string;
  modelVersion: number;
  figures: PreApplicationFigures;
}

type Row = Omit<StoredPreApplicationReport, 'request' | 'figures'> & { request: string; figures: string };

function selectReports(db: Database) {
  return db('pre_application_reports as report')
    .join('organisations', 'organisations.id', 'report.organisation_id')
    .join('users', 'users.id', 'report.requested_by')
    .join('model_versions', 'model_versions.id', 'report.model_version_id')
    .join('network_models', 'network_models.id', 'model_versions.model_id')
    .select<Row[]>({
      id: 'report.id',
      publicId: 'report.public_id',
      organisation: 'organisations.name',
      requestedBy: 'users.name',
      requestedAt: 'report.requested_at',
      request: 'report.request',
      substation: 'network_models.substation',
      circuit: 'report.circuit',
      modelVersion: 'model_versions.number',
      figures: 'report.figures',
    });
}

function toReport(row: Row): StoredPreApplicationReport {
  return {
    ...row,
    request: JSON.parse(row.request) as PreApplicationRequest,
    figures: JSON.parse(row.figures) as PreApplicationFigures,
  };
}

/** The newest first, at most 200; of one organisation, or of all. */
export async function listPreApplicationReports(
  db: Database,
  organisationId: number | null,
): Promise<StoredPreApplicationReport[]> {
  const reports = selectReports(db).orderBy('report.id', 'desc').limit(200);
  const rows = await (organisationId === null
    ? reports
    : reports.where({ 'report.organisation_id': organisationId }));
  return rows.map(toReport);
}

export async function findPreApplicationReport(
  db: Database,
  publicId: string,
): Promise<StoredPreApplicationReport | undefined> {
  const [row] = await selectReports(db).where({ 'report.public_id': publicId });
  return row && toReport(row);
}
