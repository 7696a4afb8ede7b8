import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { Database, Transaction } from '../connection.ts';

export type RuleSetState = 'draft' | 'published';

export interface RuleSetVersion {
  id: number;
  code: string;
  number: number;
  state: RuleSetState;
  /** Null while it is a draft. */
  validFrom: string | null;
  content: RuleSet;
  sha256: Buffer;
  /** Somebody has confirmed all remembered clauses at once. */
  confirmedAt: Date | null;
  firstUsedAt: Date | null;
  /** Raised by every saving of a draft. */
  version: number;
  editedBy: string | null;
  editedAt: Date | null;
  publishedBy: string | null;
  publishedAt: Date | null;
}

interface RuleSetRow extends Omit<RuleSetVersion, 'content'> {
  content: string;
}

function selectRuleSets(db: Database) {
  return db('rule_set_versions as version')
    .leftJoin('users as editor', 'editor.id', 'version.edited_by')
    .leftJoin('users as publisher', 'publisher.id', 'version.published_by')
    .select<RuleSetRow[]>({
      id: 'version.id',
      code: 'version.code',
      number: 'version.number',
      state: 'version.state',
      validFrom: 'version.valid_from',
      content: 'version.content',
      sha256: 'version.sha256',
      confirmedAt: 'version.confirmed_at',
      firstUsedAt: 'version.first_used_at',
      version: 'version.version',
      editedBy: 'editor.name',
      editedAt: 'version.edited_at',
      publishedBy: 'publisher.name',
      publishedAt: 'version.published_at',
    });
}

function toRuleSet(row: RuleSetRow): RuleSetVersion {
  return { ...row, content: JSON.parse(row.content) as RuleSet };
}

/** Of two that begin on one day the one that was published later is in force. */
const newestFirst = [
  { column: 'version.valid_from', order: 'desc' },
  { column: 'version.published_at', order: 'desc' },
  { column: 'version.id', order: 'desc' },
];

export async function listRuleSetVersions(db: Database): Promise<RuleSetVersion[]> {
  return (await selectRuleSets(db).orderBy(newestFirst)).map(toRuleSet);
}

/** The newest that is in force on this local date. */
export async function getValidRuleSet(db: Database, date: string): Promise<RuleSetVersion> {
  const [row] = await selectRuleSets(db)
    .where('version.state', 'published' satisfies RuleSetState)
    .where('version.valid_from', '<=', date)
    .orderBy(newestFirst)
    .limit(1);
  if (row === undefined) throw new Error(`No rule set is in force on ${date}`);
  return toRuleSet(row);
}

export async function getRuleSetVersion(db: Database, id: number): Promise<RuleSetVersion> {
  const [row] = await selectRuleSets(db).where('version.id', id);
  if (row === undefined) throw new Error(`No rule set version has the row id ${id}`);
  return toRuleSet(row);
}

export async function findRuleSetVersion(
  db: Database,
  code: string,
  number: number,
): Promise<RuleSetVersion | undefined> {
  const [row] = await selectRuleSets(db).where({ 'version.code': code, 'version.number': number });
  return row && toRuleSet(row);
}

/** Waits for the row and keeps it until the transaction ends, then reads it as it is now. */
export async function lockRuleSetVersion(
  trx: Transaction,
  code: string,
  number: number,
): Promise<RuleSetVersion | undefined> {
  await trx('rule_set_versions').where({ code, number }).forUpdate().select('id');
  return findRuleSetVersion(trx, code, number);
}

/** The next free number of a code; its versions are locked, so that two drafts do not take the same. */
export async function takeRuleSetNumber(trx: Transaction, code: string): Promise<number> {
  const numbers = (await trx('rule_set_versions').where({ code }).forUpdate().pluck('number')) as number[];
  return Math.max(0, ...numbers) + 1;
}

export interface NewDraft {
  content: RuleSet;
  text: string;
  sha256: Buffer;
  editedBy: number;
  editedAt: Date;
}

export async function insertDraftRuleSet(trx: Transaction, draft: NewDraft): Promise<number> {
  const [id] = await trx('rule_set_versions').insert({
    code: draft.content.code,
    number: draft.content.number,
    state: 'draft' satisfies RuleSetState,
    valid_from: null,
    content: draft.text,
    sha256: draft.sha256,
    edited_by: draft.editedBy,
    edited_at: draft.editedAt,
  });
  return id as number;
}

export async function updateDraftRuleSet(
  trx: Transaction,
  id: number,
  draft: Pick<NewDraft, 'text' | 'sha256' | 'editedBy' | 'editedAt'>,
): Promise<void> {
  await trx('rule_set_versions')
    .where({ id, state: 'draft' satisfies RuleSetState })
    .update({
      content: draft.text,
      sha256: draft.sha256,
      edited_by: draft.editedBy,
      edited_at: draft.editedAt,
      version: trx.raw('version + 1'),
    });
}

export async function deleteDraftRuleSet(trx: Transaction, id: number): Promise<void> {
  await trx('rule_set_versions')
    .where({ id, state: 'draft' satisfies RuleSetState })
    .delete();
}

export async function publishRuleSet(
  trx: Transaction,
  id: number,
  { validFrom, by, at }: { validFrom: string; by: number; at: Date },
): Promise<void> {
  await trx('rule_set_versions')
    .where({ id, state: 'draft' satisfies RuleSetState })
    .update({ state: 'published', valid_from: validFrom, published_by: by, published_at: at });
}

/** From the first application bound to it on, a version's content is history. */
export async function markRuleSetUsed(trx: Transaction, id: number, at: Date): Promise<void> {
  await trx('rule_set_versions').where({ id }).whereNull('first_used_at').update({ first_used_at: at });
}
