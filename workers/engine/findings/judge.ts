import { isLimitKept } from '../../../shared/rules/rule-terms.ts';
import type { Finding, QuestionId } from '../../../shared/schemas/findings.ts';
import { questions } from '../../../shared/schemas/findings.ts';
import type { Rule } from '../../../shared/schemas/rule-sets.ts';
import type { WorkingStep } from '../../../shared/schemas/working.ts';
import type { Screening } from './screening.ts';

/* From a measured value to a finding. Values are compared as they are, never as they will be printed. */

/** A finding with the steps that led to it, which the working sheet prints; they are no part of the result. */
export type Answered = Finding & { working?: readonly WorkingStep[] };

export type Measured = Pick<Answered, 'element' | 'before' | 'note' | 'working'> & {
  value: number;
  /** Where the limit follows from a table or from the load: the number that stands in place of the rule's first. */
  limit?: number;
};

/** Holds a value against the rule's limits and cites the gravest one that it breaks. */
export function judge(screening: Screening, id: QuestionId, measured: Measured): Answered {
  const rule = withLimit(ruleOf(screening, id), measured.limit);
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

function withLimit(rule: Rule, limit: number | undefined): Rule {
  return limit === undefined ? rule : { ...rule, limits: [{ ...rule.limits[0], limit }] };
}

/** The rule of a question that is asked; a question without one is never put. */
export function ruleOf({ ruleSet }: Pick<Screening, 'ruleSet'>, id: QuestionId): Rule {
  const rule = ruleSet.rules[id];
  if (!rule) throw new Error(`The rule set does not ask ${id}`);
  return rule;
}

/** Gives the gravest limit that a value breaks, nothing where it keeps all. */
export function findBrokenLimit(rule: Rule, value: number) {
  return rule.limits.find(
    ({ limit, comparison }) => limit !== null && !isLimitKept(value, comparison, limit),
  );
}

/** Answers without a number: by a table, for want of data, or because the question cannot arise. */
export function answer(
  screening: Screening,
  id: QuestionId,
  verdict: Finding['verdict'],
  rest: Pick<Answered, 'element' | 'note' | 'before' | 'working'>,
): Answered {
  const rule = ruleOf(screening, id);
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

function questionOf(id: QuestionId): Pick<Finding, 'id' | 'question'> {
  const { question } = questions.find((each) => each.id === id)!;
  return { id, question };
}
