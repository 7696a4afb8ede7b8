import type { Finding } from '../../shared/schemas/findings.ts';
import type { RunKind, RunState, RunStep, RunSummary } from '../../shared/schemas/runs.ts';
import type { Database, Transaction } from '../connection.ts';

export interface Run {
  id: number;
  publicId: string;
  applicationId: number;
  kind: RunKind;
  /** JSON as it was frozen; `basisSha256` is over this text. */
  basis: string;
  basisSha256: Buffer;
  studySha256: Buffer | null;
  resultSha256: Buffer | null;
  resultsVersion: number;
  state: RunState;
  steps: RunStep[];
  summary: RunSummary | null;
  warnings: string[];
  error: string | null;
  errorDetail: string | null;
  version: number;
  queuedAt: Date;
  startedAt: Date | null;
  finishedAt: Date | null;
}

interface RunRow extends Omit<Run, 'steps' | 'summary' | 'warnings'> {
  steps: string;
  summary: string | null;
  warnings: string | null;
}

const columns = {
  id: 'id',
  publicId: 'public_id',
  applicationId: 'application_id',
  kind: 'kind',
  basis: 'basis',
  basisSha256: 'basis_sha256',
  studySha256: 'study_sha256',
  resultSha256: 'result_sha256',
  resultsVersion: 'results_version',
  state: 'state',
  steps: 'steps',
  summary: 'summary',
  warnings: 'warnings',
  error: 'error',
  errorDetail: 'error_detail',
  version: 'version',
  queuedAt: 'queued_at',
  startedAt: 'started_at',
  finishedAt: 'finished_at',
} as const satisfies Record<keyof Run, string>;

function selectRuns(db: Database) {
  return db('runs').select<RunRow[]>(columns);
}

function toRun(row: RunRow): Run {
  return {
    ...row,
    steps: JSON.parse(row.steps) as RunStep[],
    summary: JSON.parse(row.summary ?? 'null') as RunSummary | null,
    warnings: JSON.parse(row.warnings ?? '[]') as string[],
  };
}

export async function findRun(db: Database, publicId: string): Promise<Run | undefined> {
  const [row] = await selectRuns(db).where({ public_id: publicId });
  return row && toRun(row);
}

/** The newest first. */
export async function listRunsOf(db: Database, applicationId: number): Promise<Run[]> {
  return (await selectRuns(db).where({ application_id: applicationId }).orderBy('id', 'desc')).map(toRun);
}

/** The newest of the application, of one kind or state where that is asked. */
export async function findNewestRun(
  db: Database,
  applicationId: number,
  wanted: { kind?: RunKind; state?: RunState } = {},
): Promise<Run | undefined> {
  const [row] = await selectRuns(db)
    .where({ application_id: applicationId, ...wanted })
    .orderBy('id', 'desc')
    .limit(1);
  return row && toRun(row);
}

/** The newest run of the application that a decision rests on. */
export async function findNewestReleasedRun(db: Database, applicationId: number): Promise<Run | undefined> {
  const [row] = await selectRuns(db)
    .where({ application_id: applicationId })
    .whereIn('id', db('decisions').where({ application_id: applicationId }).select('run_id'))
    .orderBy('id', 'desc')
    .limit(1);
  return row && toRun(row);
}

export interface NewRun {
  publicId: string;
  applicationId: number;
  kind: RunKind;
  basis: string;
  basisSha256: Buffer;
  resultsVersion: number;
  queuedAt: Date;
}

export async function insertRun(trx: Transaction, run: NewRun): Promise<number> {
  const [id] = await trx('runs').insert({
    public_id: run.publicId,
    application_id: run.applicationId,
    kind: run.kind,
    basis: run.basis,
    basis_sha256: run.basisSha256,
    results_version: run.resultsVersion,
    state: 'queued' satisfies RunState,
    queued_at: run.queuedAt,
  });
  return id as number;
}

/** Something beside the result changed, such as what is set aside; gives the new version. */
export async function raiseRunVersion(trx: Transaction, run: Run): Promise<number> {
  await trx('runs').where({ id: run.id }).increment('version', 1);
  return run.version + 1;
}

/** In the order in which the engine wrote them. */
export async function listFindings(db: Database, runId: number): Promise<Finding[]> {
  const details = (await db('run_findings')
    .where({ run_id: runId })
    .orderBy('seq')
    .pluck('detail')) as string[];
  return details.map((detail) => JSON.parse(detail) as Finding);
}
