import type { DecisionKind } from '../../shared/schemas/applications.ts';
import type { Database, Transaction } from '../connection.ts';

export interface Decision {
  id: number;
  kind: DecisionKind;
  reason: string;
  conditions: string | null;
  runPublicId: string;
  decidedBy: string;
  decidedAt: Date;
}

export interface NewDecision {
  applicationId: number;
  runId: number;
  kind: DecisionKind;
  reason: string;
  conditions: string | null;
  decidedBy: number;
  decidedAt: Date;
}

export async function insertDecision(trx: Transaction, decision: NewDecision): Promise<number> {
  const [id] = await trx('decisions').insert({
    application_id: decision.applicationId,
    run_id: decision.runId,
    kind: decision.kind,
    reason: decision.reason,
    conditions: decision.conditions,
    decided_by: decision.decidedBy,
    decided_at: decision.decidedAt,
  });
  return id as number;
}

export async function findNewestDecision(db: Database, applicationId: number): Promise<Decision | undefined> {
  return db('decisions')
    .join('users', 'users.id', 'decisions.decided_by')
    .join('runs', 'runs.id', 'decisions.run_id')
    .where({ 'decisions.application_id': applicationId })
    .orderBy('decisions.id', 'desc')
    .first<Decision | undefined>({
      id: 'decisions.id',
      kind: 'decisions.kind',
      reason: 'reason',
      conditions: 'conditions',
      runPublicId: 'runs.public_id',
      decidedBy: 'users.name',
      decidedAt: 'decided_at',
    });
}

/** Whether a decision rests on this run: its findings are then released, and fixed. */
export async function hasDecision(db: Database, runId: number): Promise<boolean> {
  return (await db('decisions').where({ run_id: runId }).first('id')) !== undefined;
}
