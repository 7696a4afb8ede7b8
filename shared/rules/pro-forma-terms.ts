import type { Fee, RuleSet } from '../schemas/rule-sets.ts';
import { clockKinds } from './clock-kinds.ts';

/** The federal pro forma's time limits, each with its clause. */
export const clockRules = Object.fromEntries(
  Object.values(clockKinds).map(({ key, allowedBusinessDays, source, readOrMemory }) => [
    key,
    { allowedDays: allowedBusinessDays, unit: 'business-day', source, readOrMemory },
  ]),
) as NonNullable<RuleSet['clocks']>;

const fee = (label: string, cents: number, source: string, readOrMemory: Fee['readOrMemory']): Fee => ({
  label,
  currency: 'USD',
  baseCents: cents,
  perKwCents: 0,
  source,
  readOrMemory,
});

/** The federal pro forma's charges. The desk shows them; it does not collect them. */
export const feeRules: Fee[] = [
  fee(
    'Pre-application report',
    30_000,
    'SGIP 1.2 as amended by Order 792, read in a derived rule (83 Ill. Adm. Code 467.45)',
    'read',
  ),
  fee(
    'Inverter of 10 kW or less',
    10_000,
    'SGIP Attachment 5, read on a utility page that applies it',
    'read',
  ),
  fee('Fast Track', 50_000, 'SGIP Attachment 2 (value from memory)', 'memory'),
  fee('Study process, largest deposit', 100_000, 'SGIP Attachment 2 (value from memory)', 'memory'),
];
