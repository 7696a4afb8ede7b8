import { formatNumber, formatQuantity } from './format.ts';
import { getSetAside } from './rules/rule-terms.ts';
import type { Comparison, Consequence } from './schemas/findings.ts';
import type { ClockRule, Fee, Rule, RuleLimit, RuleStage, SetAside, Standing } from './schemas/rule-sets.ts';

/* Rules in words: the same on the sheet of a rule set, in its form and in a preview. */

export const comparisonWords: Record<Comparison, string> = {
  '<=': 'at most',
  '<': 'less than',
  '>=': 'at least',
};

export const consequenceWords: Record<Consequence, string> = {
  none: 'nothing follows',
  note: 'a note',
  supplemental: 'supplemental review',
  study: 'study required',
};

export const ruleStageWords: Record<RuleStage, string> = {
  'initial-review': 'Initial review',
  'supplemental-review': 'Supplemental review',
  engineering: 'Engineering findings',
};

export const standingWords: Record<Standing, string> = {
  read: 'Read at its source',
  memory: 'From memory',
};

export const dayWords: Record<ClockRule['unit'], string> = {
  'business-day': 'business days',
  'calendar-day': 'calendar days',
};

const decimalsOf = (value: number) => String(value).split('.')[1]?.length ?? 0;

/** As many digits as the limit itself has, up to four: 87.5 %, 15 %, 66.6667 %. */
export function describeLimit({ limit, comparison }: Pick<RuleLimit, 'limit' | 'comparison'>, unit: string) {
  if (limit === null) return 'by table';
  return `${comparisonWords[comparison]} ${formatQuantity(limit, unit, Math.min(4, decimalsOf(limit)))}`;
}

/** "at least 5, else study required; at least 20, else a note" */
export function describeLimits({ limits, unit }: Pick<Rule, 'limits' | 'unit'>): string {
  return limits
    .map((limit) => `${describeLimit(limit, unit)}, else ${consequenceWords[limit.consequence]}`)
    .join('; ');
}

const unitWords: Record<string, string> = {
  percent: '%',
  kw: 'kW',
  mw: 'MW',
  kva: 'kVA',
  kv: 'kV',
  km: 'km',
  ohm: 'Ω',
  pu: 'per unit',
  seconds: 's',
  cycles: 'cycles',
  miles: 'miles',
  hours: 'h',
};

/** A parameter's name as a label: deadTimeSeconds is "Dead time, in s". */
export function labelParameter(name: string): string {
  const words = name.split(/(?=[A-Z])/).map((word) => word.toLowerCase());
  const unit = words.length > 1 ? unitWords[words.at(-1) ?? ''] : undefined;
  const plain = (unit === undefined ? words : words.slice(0, -1)).join(' ');
  const label = plain.charAt(0).toUpperCase() + plain.slice(1);
  return unit === undefined ? label : `${label}, in ${unit}`;
}

function describeParameter(name: string, value: number | string | boolean): string {
  const said = typeof value === 'boolean' ? (value ? 'yes' : 'no') : String(value);
  return `${labelParameter(name)}: ${said}`;
}

function describeSetAside(setAside: SetAside): string[] {
  const { roles, secondPerson } = setAside;
  if (roles.length === 0) return ['Never set aside'];
  const isUsual = roles.join() === 'reviewer';
  return [
    ...(isUsual ? [] : [`Set aside by: ${roles.join(', ')}`]),
    ...(secondPerson ? ['Set aside only with a second person'] : []),
  ];
}

const sizeWords = { nameplate: 'nameplate', export: 'what may be exported' } as const;

/** Everything that the answer needs beside the limit, one sentence part each. */
export function listTerms(rule: Rule): string[] {
  const { sizeBasis, prefaultFactor, scope, parameters = {} } = rule;
  return [
    ...(scope === undefined ? [] : [`Over ${scope}`]),
    ...(sizeBasis === undefined ? [] : [`Size: ${sizeWords[sizeBasis]}`]),
    ...(prefaultFactor === undefined ? [] : [`Prefault voltage: ${prefaultFactor} × nominal`]),
    ...Object.entries(parameters).map(([name, value]) => describeParameter(name, value)),
    ...describeSetAside(getSetAside(rule)),
  ];
}

/** Whole cents as money: "500.00 USD", "100.00 USD and 1.00 USD for each kW". */
export function describeFee({ baseCents, perKwCents, currency }: Fee): string {
  const money = (cents: number) => `${formatNumber(cents / 100, 2)} ${currency}`;
  return perKwCents === 0 ? money(baseCents) : `${money(baseCents)} and ${money(perKwCents)} for each kW`;
}
