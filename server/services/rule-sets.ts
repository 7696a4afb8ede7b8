import type { Database } from '../../db/connection.ts';
import { listRuleConfirmations } from '../../db/repositories/rule-confirmations.ts';
import {
  findRuleSetVersion,
  getValidRuleSet,
  listRuleSetVersions,
  type RuleSetVersion,
} from '../../db/repositories/rule-sets.ts';
import { addCalendarDays, localDate } from '../../shared/rules/business-days.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import { listUnconfirmed } from '../../shared/rules/rule-terms.ts';
import type { QuestionId } from '../../shared/schemas/findings.ts';
import type { RuleSetRow, RuleSetView } from '../../shared/schemas/rule-set-views.ts';
import { listAsked, listNotAsked, type RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { Context, Deps } from '../context.ts';
import { notFound } from '../errors.ts';
import { getUtilitySettings } from './utility-settings.ts';

type Dated = Pick<Context, 'now'>;

/** As the audit trail names it. */
export function nameRuleSet({ code, number }: Pick<RuleSetVersion, 'code' | 'number'>): string {
  return `rule-set:${code}/${number}`;
}

/** The rules from which the desk can ask what a set does not ask yet. */
export function listAvailable(content: RuleSet): RuleSet['rules'] {
  const shipped: RuleSet['rules'] = proFormaRuleSet.rules;
  const entries = listNotAsked(content).map(({ id }) => [id, shipped[id as QuestionId]] as const);
  return Object.fromEntries(entries.filter(([, rule]) => rule !== undefined));
}

/**
 * The first day from which something published now can be in force: tomorrow, because whoever was bound to rules today
 * must find the day's rules unchanged.
 */
export async function getEarliestFrom(db: Database, { now }: Dated): Promise<string> {
  const { timeZone } = await getUtilitySettings(db);
  return addCalendarDays(localDate(now, timeZone), 1);
}

async function toRow(db: Database, { now }: Dated, version: RuleSetVersion): Promise<RuleSetRow> {
  const { timeZone } = await getUtilitySettings(db);
  const confirmations = await listRuleConfirmations(db, version.id);
  const confirmed = confirmations.map(({ question }) => question);
  const known = { isWhole: version.confirmedAt !== null, questions: confirmed };
  return {
    code: version.code,
    number: version.number,
    name: version.content.name,
    state: version.state,
    inForce: (await getValidRuleSet(db, localDate(now, timeZone))).id === version.id,
    validFrom: version.validFrom,
    firstUsedAt: version.firstUsedAt?.toISOString() ?? null,
    askedCount: listAsked(version.content).length,
    unconfirmedCount: listUnconfirmed(version.content, known).length,
  };
}

/** Every version of every rule set: the latest to come into force first, drafts last. */
export async function listRuleSets(deps: Deps, context: Dated): Promise<RuleSetRow[]> {
  const versions = await listRuleSetVersions(deps.db);
  return Promise.all(versions.map((version) => toRow(deps.db, context, version)));
}

export async function getRuleSet(
  deps: Deps,
  context: Dated,
  code: string,
  number: number,
): Promise<RuleSetView> {
  const version = await findRuleSetVersion(deps.db, code, number);
  if (version === undefined) throw notFound('The rule set');
  const confirmations = await listRuleConfirmations(deps.db, version.id);
  const known = {
    isWhole: version.confirmedAt !== null,
    questions: confirmations.map(({ question }) => question),
  };
  return {
    ...(await toRow(deps.db, context, version)),
    version: version.version,
    sha256: version.sha256.toString('hex'),
    editedBy: version.editedBy,
    editedAt: version.editedAt?.toISOString() ?? null,
    publishedBy: version.publishedBy,
    publishedAt: version.publishedAt?.toISOString() ?? null,
    content: version.content,
    available: listAvailable(version.content),
    confirmations: confirmations.map(({ question, by, at }) => ({ question, by, at: at.toISOString() })),
    unconfirmed: listUnconfirmed(version.content, known).map(({ id }) => id),
    earliestFrom: await getEarliestFrom(deps.db, context),
  };
}
