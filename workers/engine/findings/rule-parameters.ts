import type { Comparison, Consequence, QuestionId } from '../../../shared/schemas/findings.ts';
import { ruleOf } from './judge.ts';
import type { Screening } from './screening.ts';

/* Numbers of a rule besides its limits, and judgements against them. */

/** A number that the question cannot do without; a rule set that lacks it cannot ask. */
export function numberOf(screening: Pick<Screening, 'ruleSet'>, id: QuestionId, name: string): number {
  const value = ruleOf(screening, id).parameters?.[name];
  if (typeof value !== 'number') {
    throw new Error(`Rule ${id}: got ${JSON.stringify(value)} as ${name}, expected a number`);
  }
  return value;
}

/** Where that number is from, by the parameter that says so; else as the rule's limits. */
export function sourceOf(screening: Pick<Screening, 'ruleSet'>, id: QuestionId, name: string): string {
  const { parameters, source } = ruleOf(screening, id);
  const given = parameters?.[name];
  return typeof given === 'string' ? given : source;
}

/** The same screening with another limit for one question, for a part of it that its parameters limit. */
export function limitedTo(
  screening: Screening,
  id: QuestionId,
  {
    limit,
    comparison,
    unit,
    source,
    consequence,
  }: { limit: number; comparison: Comparison; unit: string; source: string; consequence?: Consequence },
): Screening {
  const rule = ruleOf(screening, id);
  const limits: [(typeof rule.limits)[0]] = [
    { limit, comparison, consequence: consequence ?? rule.limits[0].consequence },
  ];
  const rules = { ...screening.ruleSet.rules, [id]: { ...rule, limits, unit, source } };
  return { ...screening, ruleSet: { ...screening.ruleSet, rules } };
}
