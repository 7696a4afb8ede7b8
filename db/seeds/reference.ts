import { createHash } from 'node:crypto';
import { federalHolidays } from '../../shared/rules/business-days.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { Database } from '../connection.ts';

/** Years for which clocks can be computed; the New Year of the year after may be observed in the last of them. */
const calendarYears = [2024, 2025, 2026, 2027, 2028, 2029];

/** What every installation has from its first start: the shipped rule set and the federal holidays. Safe to repeat. */
export async function plantReference(trx: Database, now: Date): Promise<void> {
  await plantRuleSet(trx);
  const days = [...new Set(calendarYears.flatMap(federalHolidays))].sort();
  await trx('holiday_calendars')
    .insert({ code: 'us-federal', number: 1, days: JSON.stringify(days), published_at: now })
    .onConflict(['code', 'number'])
    .ignore();
}

async function plantRuleSet(trx: Database): Promise<void> {
  const content = JSON.stringify(proFormaRuleSet);
  await trx('rule_set_versions')
    .insert({
      code: proFormaRuleSet.code,
      number: proFormaRuleSet.number,
      valid_from: '2014-01-01',
      content,
      sha256: createHash('sha256').update(content).digest(),
    })
    .onConflict(['code', 'number'])
    .ignore();
}

/** The demo's administrator has confirmed the remembered clauses; elsewhere one must do it before anything is decided. */
export async function confirmRuleSetForDemo(trx: Database, now: Date): Promise<void> {
  await trx('rule_set_versions').whereNull('confirmed_at').update({ confirmed_at: now });
}
