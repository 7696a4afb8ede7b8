import type { Finding } from '../../shared/schemas/findings.ts';
import type { RunKind, RunStep, RunSummary } from '../../shared/schemas/runs.ts';
import type { Database, Transaction } from '../connection.ts';

/** A worker's turn at a run: it holds as long as the row carries its token. */
export interface RunTurn {
  runId: number;
  publicId: string;
  applicationId: number;
  applicationPublicId: string;
  kind: RunKind;
  /** JSON, as it was frozen. */
  basis: string;
  basisSha256: Buffer;
  resultsVersion: number;
  /** Counts from 1. */
  attempt: number;
  token: Buffer;
  /** Of the row, when it was taken. */
  version: number;
}

interface Claim {
  runId: number;
  token: Buffer;
  now: Date;
  leaseUntil: Date;
}

/** Takes a run that waits and is due; undefined when it is somebody else's, or done, or not due yet. */
export async function claimRun(db: Database, claim: Claim): Promise<RunTurn | undefined> {
  const { runId, token, now, leaseUntil } = claim;
  const taken = await db('runs')
    .where({ id: runId, state: 'queued' })
    .andWhere((due) => void due.whereNull('next_attempt_at').orWhere('next_attempt_at', '<=', now))
    .update({
      state: 'running',
      token,
      lease_until: leaseUntil,
      next_attempt_at: null,
      attempt: db.raw('attempt + 1'),
      started_at: db.raw('COALESCE(started_at, ?)', [now]),
      steps: '[]',
      version: db.raw('version + 1'),
    });
  if (taken !== 1) return undefined;
  const row = await db('runs')
    .join('applications', 'applications.id', 'runs.application_id')
    .where({ 'runs.id': runId })
    .first<Omit<RunTurn, 'token'>>({
      runId: 'runs.id',
      publicId: 'runs.public_id',
      applicationId: 'runs.application_id',
      applicationPublicId: 'applications.public_id',
      kind: 'runs.kind',
      basis: 'runs.basis',
      basisSha256: 'runs.basis_sha256',
      resultsVersion: 'runs.results_version',
      attempt: 'runs.attempt',
      version: 'runs.version',
    });
  return { ...row, token };
}

function ofTurn(db: Database, turn: RunTurn) {
  return db('runs').where({ id: turn.runId, state: 'running', token: turn.token });
}

/** Writes the steps so far and holds the turn on; false when it is lost. */
export async function renewTurn(
  db: Database,
  turn: RunTurn,
  leaseUntil: Date,
  steps: RunStep[],
): Promise<boolean> {
  const update = {
    lease_until: leaseUntil,
    steps: JSON.stringify(steps),
    version: db.raw('version + 1'),
  };
  return (await ofTurn(db, turn).update(update)) === 1;
}

/** Locks the run's row for the end of the turn; false when it is lost. */
export async function lockTurn(trx: Transaction, turn: RunTurn): Promise<boolean> {
  return (await ofTurn(trx, turn).forUpdate().first('id')) !== undefined;
}

interface Outcome {
  studySha256: Buffer;
  resultSha256: Buffer;
  summary: RunSummary | null;
  warnings: string[];
  steps: RunStep[];
  now: Date;
}

export async function finishTurn(trx: Transaction, turn: RunTurn, outcome: Outcome): Promise<void> {
  await ofTurn(trx, turn).update({
    state: 'finished',
    study_sha256: outcome.studySha256,
    result_sha256: outcome.resultSha256,
    summary: JSON.stringify(outcome.summary),
    warnings: JSON.stringify(outcome.warnings),
    steps: JSON.stringify(outcome.steps),
    finished_at: outcome.now,
    token: null,
    lease_until: null,
    error: null,
    error_detail: null,
    version: trx.raw('version + 1'),
  });
}

interface Failure {
  /** For everyone. */
  error: string;
  /** Names elements and causes: staff only. */
  detail: string;
  now: Date;
}

/** For good: what is wrong is in the model or the project, or it was tried often enough. */
export async function failTurn(trx: Transaction, turn: RunTurn, failure: Failure): Promise<void> {
  await ofTurn(trx, turn).update({
    state: 'failed',
    error: failure.error,
    error_detail: failure.detail,
    finished_at: failure.now,
    token: null,
    lease_until: null,
    version: trx.raw('version + 1'),
  });
}

/** Gives the run back, to be tried again at `nextAttemptAt`; false when the turn is lost. */
export async function releaseTurn(
  db: Database,
  turn: RunTurn,
  nextAttemptAt: Date,
  detail: string,
): Promise<boolean> {
  const update = {
    state: 'queued',
    token: null,
    lease_until: null,
    next_attempt_at: nextAttemptAt,
    error_detail: detail,
    version: db.raw('version + 1'),
  };
  return (await ofTurn(db, turn).update(update)) === 1;
}

export async function insertFindings(trx: Transaction, runId: number, findings: Finding[]): Promise<void> {
  if (findings.length === 0) return;
  await trx('run_findings').insert(
    findings.map((finding, seq) => ({
      run_id: runId,
      seq,
      question: finding.id,
      element: finding.element ?? '',
      verdict: finding.verdict,
      value: finding.value,
      before_value: finding.before ?? null,
      comparison: finding.comparison,
      limit_value: finding.limit,
      unit: finding.unit,
      consequence: finding.consequence,
      source: finding.source,
      // The finding whole and as the engine wrote it; the columns beside it are for questions to the database.
      detail: JSON.stringify(finding),
    })),
  );
}

interface EarlierResult {
  studySha256: Buffer;
  resultSha256: Buffer;
  summary: RunSummary | null;
  warnings: string[];
  findings: Finding[];
}

/** A finished run on an equal basis: its numbers are these numbers. */
export async function findEqualResult(db: Database, turn: RunTurn): Promise<EarlierResult | undefined> {
  const row = await db('runs')
    .where({ basis_sha256: turn.basisSha256, results_version: turn.resultsVersion, state: 'finished' })
    .orderBy('id', 'desc')
    .first<
      | {
          id: number;
          study_sha256: Buffer;
          result_sha256: Buffer;
          summary: string | null;
          warnings: string | null;
        }
      | undefined
    >('id', 'study_sha256', 'result_sha256', 'summary', 'warnings');
  if (row === undefined) return undefined;
  const findings = (await db('run_findings')
    .where({ run_id: row.id })
    .orderBy('seq')
    .pluck('detail')) as string[];
  return {
    studySha256: row.study_sha256,
    resultSha256: row.result_sha256,
    summary: JSON.parse(row.summary ?? 'null') as RunSummary | null,
    warnings: JSON.parse(row.warnings ?? '[]') as string[],
    findings: findings.map((detail) => JSON.parse(detail) as Finding),
  };
}
