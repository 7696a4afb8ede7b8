import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { Database, Transaction } from '../connection.ts';

export interface RuleSetVersion {
  id: number;
  code: string;
  number: number;
  validFrom: string;
  content: RuleSet;
  sha256: Buffer;
  confirmedAt: Date | null;
  firstUsedAt: Date | null;
}

interface RuleSetRow extends Omit<RuleSetVersion, 'content'> {
  content: string;
}

function selectRuleSets(db: Database) {
  return db('rule_set_versions').select<RuleSetRow[]>({
    id: 'id',
    code: 'code',
    number: 'number',
    validFrom: 'valid_from',
    content: 'content',
    sha256: 'sha256',
    confirmedAt: 'confirmed_at',
    firstUsedAt: 'first_used_at',
  });
}

function toRuleSet(row: RuleSetRow): RuleSetVersion {
  return { ...row, content: JSON.parse(row.content) as RuleSet };
}

const newestFirst = [
  { column: 'valid_from', order: 'desc' },
  { column: 'number', order: 'desc' },
  { column: 'id', order: 'desc' },
];

export async function listRuleSetVersions(db: Database): Promise<RuleSetVersion[]> {
  return (await selectRuleSets(db).orderBy(newestFirst)).map(toRuleSet);
}

/** The newest that is in force on this local date. */
export async function getValidRuleSet(db: Database, date: string): Promise<RuleSetVersion> {
  const [row] = await selectRuleSets(db).where('valid_from', '<=', date).orderBy(newestFirst).limit(1);
  if (row === undefined) throw new Error(`No rule set is in force on ${date}`);
  return toRuleSet(row);
}

export async function getRuleSetVersion(db: Database, id: number): Promise<RuleSetVersion> {
  const [row] = await selectRuleSets(db).where({ id });
  if (row === undefined) throw new Error(`No rule set version has the row id ${id}`);
  return toRuleSet(row);
}

/** From the first application bound to it on, a version's content is history. */
export async function markRuleSetUsed(trx: Transaction, id: number, at: Date): Promise<void> {
  await trx('rule_set_versions').where({ id }).whereNull('first_used_at').update({ first_used_at: at });
}
