import type { Database, Transaction } from '../connection.ts';

/** One remembered clause of one version, held against its document. */
export interface RuleConfirmation {
  question: string;
  /** Null where it was confirmed by setting up the desk. */
  by: string | null;
  at: Date;
}

export async function listRuleConfirmations(db: Database, versionId: number): Promise<RuleConfirmation[]> {
  return db('rule_confirmations as confirmation')
    .leftJoin('users as person', 'person.id', 'confirmation.confirmed_by')
    .where('confirmation.rule_set_version_id', versionId)
    .orderBy('confirmation.question')
    .select<RuleConfirmation[]>({
      question: 'confirmation.question',
      by: 'person.name',
      at: 'confirmation.confirmed_at',
    });
}

/** A second confirmation of the same clause leaves the first as it was. */
export async function insertRuleConfirmation(
  trx: Transaction,
  confirmation: { versionId: number; question: string; by: number | null; at: Date },
): Promise<void> {
  await trx('rule_confirmations')
    .insert({
      rule_set_version_id: confirmation.versionId,
      question: confirmation.question,
      confirmed_by: confirmation.by,
      confirmed_at: confirmation.at,
    })
    .onConflict(['rule_set_version_id', 'question'])
    .ignore();
}

/** What was confirmed of a version holds for a copy of it, rule by rule. */
export async function copyRuleConfirmations(trx: Transaction, fromId: number, toId: number): Promise<void> {
  await trx.raw(
    `INSERT INTO rule_confirmations (rule_set_version_id, question, confirmed_by, confirmed_at)
     SELECT ?, question, confirmed_by, confirmed_at FROM rule_confirmations WHERE rule_set_version_id = ?`,
    [toId, fromId],
  );
}

/** A rule that was changed is another rule: nobody has confirmed it. */
export async function deleteRuleConfirmations(
  trx: Transaction,
  versionId: number,
  questions: readonly string[],
): Promise<void> {
  await trx('rule_confirmations')
    .where({ rule_set_version_id: versionId })
    .whereIn('question', questions)
    .delete();
}
