import { listAsked, type ClockRule, type Rule, type RuleSet, type SetAside } from '../schemas/rule-sets.ts';
import type { Comparison, Question, QuestionId, Verdict } from '../schemas/findings.ts';
import type { RuleLimit, RuleStage } from '../schemas/rule-sets.ts';
import type { Stage } from './application-life.ts';
import { clockKinds, type ClockKindKey } from './clock-kinds.ts';

/* What a rule set says, with what holds where it says nothing: contents stored earlier know fewer terms. */

export function getClockRule(ruleSet: RuleSet, kind: ClockKindKey): ClockRule {
  const { allowedBusinessDays, source, readOrMemory } = clockKinds[kind];
  return (
    ruleSet.clocks?.[kind] ?? { allowedDays: allowedBusinessDays, unit: 'business-day', source, readOrMemory }
  );
}

export function getSetAside(rule: Pick<Rule, 'setAside'> | undefined): SetAside {
  return rule?.setAside ?? { roles: ['reviewer'], secondPerson: false };
}

/** The stages of review at which the questions of the supplemental review are answered already. */
const afterSupplemental: readonly Stage[] = ['supplemental-review', 'facilities-study'];

/**
 * Whether an open finding stands against an approval at this stage. A supplemental question never blocks the initial
 * review: whoever fails no initial screen is not held to it. What no rule places blocks always.
 */
export function isBlockingAt(ruleStage: RuleStage | undefined, stage: Stage): boolean {
  return ruleStage !== 'supplemental-review' || afterSupplemental.includes(stage);
}

/** Whether a rule, or the table that its answer is read from, comes from memory. */
export function isRemembered({ rules, fastTrack }: RuleSet, id: QuestionId): boolean {
  const tables = id === 'fast-track-size' && fastTrack ? [fastTrack, ...fastTrack.rows] : [];
  return [rules[id], ...tables].some((part) => part?.readOrMemory === 'memory');
}

export interface Confirmations {
  /** Somebody has confirmed the version as a whole. */
  isWhole: boolean;
  questions: readonly string[];
}

/** The asked questions whose rule is remembered and has not been held against its clause by anybody. */
export function listUnconfirmed(ruleSet: RuleSet, { isWhole, questions }: Confirmations): Question[] {
  if (isWhole) return [];
  return listAsked(ruleSet).filter(
    ({ id }) => isRemembered(ruleSet, id as QuestionId) && !questions.includes(id),
  );
}

export function isLimitKept(value: number, comparison: Comparison, limit: number): boolean {
  if (comparison === '<=') return value <= limit;
  return comparison === '<' ? value < limit : value >= limit;
}

/** What limits say of a value: the gravest that it breaks, or the mildest that it keeps. */
export function judgeValue(
  value: number,
  limits: Rule['limits'],
): RuleLimit & { verdict: Extract<Verdict, 'within' | 'outside'> } {
  const broken = limits.find(
    ({ limit, comparison }) => limit !== null && !isLimitKept(value, comparison, limit),
  );
  if (broken !== undefined) return { ...broken, verdict: 'outside' };
  return { ...(limits.at(-1) ?? limits[0]), consequence: 'none', verdict: 'within' };
}
