import type { QuestionId } from '../schemas/findings.ts';
import type { ClockRule, Rule, RuleSet } from '../schemas/rule-sets.ts';
import type { ClockKindKey } from './clock-kinds.ts';
import { proFormaRuleSet } from './pro-forma.ts';

/* Rule sets that differ from the federal pro forma in what states have written otherwise. Every value here was read. */

interface Variation {
  code: string;
  name: string;
  /** The first limit of each rule that a state's text gives, with its clause. */
  limits: Partial<Record<QuestionId, { limit: number; source: string }>>;
  clocks?: Partial<Record<ClockKindKey, { allowedDays: number; source: string }>>;
}

/** The pro forma with other limits; a rule that the pro forma does not have is not made up. */
function vary(base: RuleSet, { code, name, limits, clocks = {} }: Variation): RuleSet {
  const rules = Object.entries(base.rules).map(([id, rule]): [string, Rule] => {
    const change = limits[id as QuestionId];
    if (change === undefined) return [id, rule];
    const [first, ...milder] = rule.limits;
    const changed: Rule['limits'] = [{ ...first, limit: change.limit }, ...milder];
    return [id, { ...rule, limits: changed, source: change.source, readOrMemory: 'read' }];
  });
  const times = Object.entries(clocks).map(([kind, clock]): [string, ClockRule] => [
    kind,
    { ...clock, unit: 'business-day', readOrMemory: 'read' },
  ]);
  return {
    ...base,
    code,
    number: 1,
    name,
    rules: Object.fromEntries(rules) as RuleSet['rules'],
    clocks: { ...base.clocks, ...(Object.fromEntries(times) as RuleSet['clocks']) },
  };
}

const pennsylvania = '52 Pa. Code §75.38';

/** Fault duty up to 85 % of what interrupts it, as Pennsylvania's code has it; the other numbers there are the pro forma's. */
export const eightyFivePercentVariant = vary(proFormaRuleSet, {
  code: '85-percent',
  name: '85 percent variant',
  limits: {
    'section-peak-load': { limit: 15, source: pennsylvania },
    contribution: { limit: 10, source: pennsylvania },
    'interrupting-duty': { limit: 85, source: pennsylvania },
  },
});

const maryland = 'COMAR 20.50.09 (Level 1)';

/** Fault duty up to 90 %, and the shorter times of Maryland's first level. */
export const ninetyPercentVariant = vary(proFormaRuleSet, {
  code: '90-percent',
  name: '90 percent variant',
  limits: { 'interrupting-duty': { limit: 90, source: 'COMAR 20.50.09.10A(2)(b)' } },
  clocks: {
    completeness: { allowedDays: 5, source: maryland },
    'initial-review': { allowedDays: 15, source: maryland },
  },
});

/** What comes with the product beside the pro forma: to begin from, never in force by itself. */
export const shippedVariants: readonly RuleSet[] = [eightyFivePercentVariant, ninetyPercentVariant];
