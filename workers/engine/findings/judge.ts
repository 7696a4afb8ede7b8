import type { AskedQuestionId, Comparison, Finding } from '../../../shared/schemas/findings.ts';
import { askedQuestions } from '../../../shared/schemas/findings.ts';
import type { Rule } from '../../../shared/schemas/rule-sets.ts';
import type { Screening } from './screening.ts';

/* From a measured value to a finding. Values are compared as they are, never as they will be printed. */

export type Measured = Pick<Finding, 'element' | 'before' | 'note'> & { value: number };

/** Holds a value against the rule's limits and cites the gravest one that it breaks. */
export function judge(screening: Screening, id: AskedQuestionId, measured: Measured): Finding {
  const rule = screening.ruleSet.rules[id];
  const broken = findBrokenLimit(rule, measured.value);
  const { limit, comparison } = broken ?? rule.limits.at(-1)!;
  return {
    ...questionOf(id),
    ...measured,
    verdict: broken ? 'outside' : 'within',
    comparison,
    limit,
    unit: rule.unit,
    consequence: broken ? broken.consequence : 'none',
    source: rule.source,
  };
}

/** Gives the gravest limit that a value breaks, nothing where it keeps all. */
export function findBrokenLimit(rule: Rule, value: number) {
  return rule.limits.find(({ limit, comparison }) => limit !== null && !holds(value, comparison, limit));
}

/** Answers without a number: by a table, for want of data, or because the question cannot arise. */
export function answer(
  screening: Screening,
  id: AskedQuestionId,
  verdict: Finding['verdict'],
  rest: Pick<Finding, 'element' | 'note' | 'before'>,
): Finding {
  const rule = screening.ruleSet.rules[id];
  const { limit, comparison, consequence } = rule.limits[0];
  const isOpen = verdict === 'outside' || verdict === 'needs-data';
  return {
    ...questionOf(id),
    ...rest,
    verdict,
    value: null,
    comparison,
    limit,
    unit: rule.unit,
    consequence: isOpen ? consequence : 'none',
    source: rule.source,
  };
}

function questionOf(id: AskedQuestionId): Pick<Finding, 'id' | 'question'> {
  const { question } = askedQuestions.find((asked) => asked.id === id)!;
  return { id, question };
}

function holds(value: number, comparison: Comparison, limit: number): boolean {
  if (comparison === '<=') return value <= limit;
  return comparison === '<' ? value < limit : value >= limit;
}
