import { inTransaction, type Database } from '../../db/connection.ts';
import { systemChain } from '../../db/repositories/audit-entries.ts';
import { insertRuleConfirmation, listRuleConfirmations } from '../../db/repositories/rule-confirmations.ts';
import { lockRuleSetVersion, type RuleSetVersion } from '../../db/repositories/rule-sets.ts';
import { isRemembered, listUnconfirmed } from '../../shared/rules/rule-terms.ts';
import type { Question, QuestionId } from '../../shared/schemas/findings.ts';
import type { RuleConfirmation } from '../../shared/schemas/rule-set-edits.ts';
import type { RuleSetView } from '../../shared/schemas/rule-set-views.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { notFound, refused } from '../errors.ts';
import { recordAudit } from './audit.ts';
import { getRuleSet, nameRuleSet } from './rule-sets.ts';

/** The asked questions whose remembered clause nobody has confirmed: a decision cannot rest on them. */
export async function listUnconfirmedOf(db: Database, version: RuleSetVersion): Promise<Question[]> {
  const confirmations = await listRuleConfirmations(db, version.id);
  return listUnconfirmed(version.content, {
    isWhole: version.confirmedAt !== null,
    questions: confirmations.map(({ question }) => question),
  });
}

/** Somebody has held a remembered rule against its clause. The content stays as it is: this stands beside it. */
export async function confirmRule(
  deps: Deps,
  context: SignedInContext,
  code: string,
  number: number,
  { question }: RuleConfirmation,
): Promise<RuleSetView> {
  await inTransaction(deps.db, async (trx) => {
    const version = await lockRuleSetVersion(trx, code, number);
    if (version === undefined) throw notFound('The rule set');
    const rule = version.content.rules[question as QuestionId];
    if (rule === undefined) throw refused('not-asked', 'These rules do not ask that question');
    if (!isRemembered(version.content, question)) {
      throw refused('not-remembered', 'This clause was read at its source; there is nothing to confirm');
    }
    if (!(await listUnconfirmedOf(trx, version)).some(({ id }) => id === question)) return;
    const confirmation = { versionId: version.id, question, by: context.actor.id, at: context.now };
    await insertRuleConfirmation(trx, confirmation);
    const about = {
      question,
      source: rule.source,
      limits: rule.limits,
      sha256: version.sha256.toString('hex'),
    };
    const subject = nameRuleSet(version);
    await recordAudit(trx, context, systemChain, 'confirm-rule', subject, null, about);
  });
  return getRuleSet(deps, context, code, number);
}
