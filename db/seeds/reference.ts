import { createHash } from 'node:crypto';
import { federalHolidays } from '../../shared/rules/business-days.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import { shippedVariants } from '../../shared/rules/rule-variants.ts';
import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { Database } from '../connection.ts';
import { findSetting, saveSetting } from '../repositories/settings.ts';

/** Years for which clocks can be computed; the New Year of the year after may be observed in the last of them. */
const calendarYears = [2024, 2025, 2026, 2027, 2028, 2029];

const plantedVariants = 'rule-sets.planted';

/** What every installation has from its first start: the shipped rule sets and the federal holidays. Safe to repeat. */
export async function plantReference(trx: Database, now: Date): Promise<void> {
  await plantRuleSet(trx, proFormaRuleSet, { validFrom: '2014-01-01', publishedAt: now });
  await plantVariants(trx);
  const days = [...new Set(calendarYears.flatMap(federalHolidays))].sort();
  await trx('holiday_calendars')
    .insert({ code: 'us-federal', number: 1, days: JSON.stringify(days), published_at: now })
    .onConflict(['code', 'number'])
    .ignore();
}

interface Planting {
  validFrom: string | null;
  publishedAt: Date | null;
}

async function plantRuleSet(trx: Database, ruleSet: RuleSet, planting: Planting): Promise<void> {
  const content = JSON.stringify(ruleSet);
  await trx('rule_set_versions')
    .insert({
      code: ruleSet.code,
      number: ruleSet.number,
      state: planting.validFrom === null ? 'draft' : 'published',
      valid_from: planting.validFrom,
      published_at: planting.publishedAt,
      content,
      sha256: createHash('sha256').update(content).digest(),
    })
    .onConflict(['code', 'number'])
    .ignore();
}

/** Drafts to begin from. Planted once: one that somebody has thrown away does not come back. */
async function plantVariants(trx: Database): Promise<void> {
  const planted = ((await findSetting(trx, plantedVariants)) ?? []) as string[];
  const missing = shippedVariants.filter(({ code }) => !planted.includes(code));
  if (missing.length === 0) return;
  for (const ruleSet of missing) await plantRuleSet(trx, ruleSet, { validFrom: null, publishedAt: null });
  await saveSetting(trx, plantedVariants, [...planted, ...missing.map(({ code }) => code)]);
}

/**
 * The demo's administrator has confirmed the remembered clauses of the rules in force; elsewhere one must do it before
 * anything is decided.
 */
export async function confirmRuleSetForDemo(trx: Database, now: Date): Promise<void> {
  const { code, number } = proFormaRuleSet;
  await trx('rule_set_versions')
    .where({ code, number })
    .whereNull('confirmed_at')
    .update({ confirmed_at: now });
}
