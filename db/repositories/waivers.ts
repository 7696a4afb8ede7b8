import type { Database, Transaction } from '../connection.ts';

/** A finding set aside. `element` is empty where the question has none. */
export interface WaiverRow {
  runId: number;
  question: string;
  element: string;
  reason: string;
  by: string;
  byId: number;
  at: Date;
  /** The second person; null until one has agreed. */
  agreedBy: string | null;
  agreedAt: Date | null;
}

export interface NewWaiver {
  runId: number;
  question: string;
  element: string;
  reason: string;
  waivedBy: number;
  waivedAt: Date;
}

/** A second reason for the same finding takes the first one's place; whoever agreed had agreed to the first. */
export async function saveWaiver(trx: Transaction, waiver: NewWaiver): Promise<void> {
  await trx('finding_waivers')
    .insert({
      run_id: waiver.runId,
      question: waiver.question,
      element: waiver.element,
      reason: waiver.reason,
      waived_by: waiver.waivedBy,
      waived_at: waiver.waivedAt,
      agreed_by: null,
      agreed_at: null,
    })
    .onConflict(['run_id', 'question', 'element'])
    .merge(['reason', 'waived_by', 'waived_at', 'agreed_by', 'agreed_at']);
}

export async function agreeToWaiver(
  trx: Transaction,
  waiver: Pick<NewWaiver, 'runId' | 'question' | 'element'>,
  { by, at }: { by: number; at: Date },
): Promise<void> {
  await trx('finding_waivers')
    .where({ run_id: waiver.runId, question: waiver.question, element: waiver.element })
    .update({ agreed_by: by, agreed_at: at });
}

export async function deleteWaiver(
  trx: Transaction,
  waiver: Pick<NewWaiver, 'runId' | 'question' | 'element'>,
): Promise<void> {
  await trx('finding_waivers')
    .where({ run_id: waiver.runId, question: waiver.question, element: waiver.element })
    .delete();
}

export async function listWaivers(db: Database, runId: number): Promise<WaiverRow[]> {
  return db('finding_waivers')
    .join('users', 'users.id', 'finding_waivers.waived_by')
    .leftJoin('users as second', 'second.id', 'finding_waivers.agreed_by')
    .where({ run_id: runId })
    .orderBy(['waived_at', 'question', 'element'])
    .select<WaiverRow[]>({
      runId: 'run_id',
      question: 'question',
      element: 'element',
      reason: 'reason',
      by: 'users.name',
      byId: 'users.id',
      at: 'waived_at',
      agreedBy: 'second.name',
      agreedAt: 'agreed_at',
    });
}
