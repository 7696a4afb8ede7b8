import { canonicalJson } from '../canonical-json.ts';
import { questions, type Finding, type QuestionId } from '../schemas/findings.ts';
import type { VerdictChange } from '../schemas/rule-set-views.ts';
import type { Rule, RuleSet } from '../schemas/rule-sets.ts';
import { judgeValue } from './rule-terms.ts';

/* What other rules would say of findings that are there, without computing anything anew. */

const ruleOf = (ruleSet: RuleSet, id: string): Rule | undefined => ruleSet.rules[id as QuestionId];

/** A verdict that follows from its value and one of the rule's own limits; some are held against a table's. */
function isByValue(finding: Finding, rule: Rule): finding is Finding & { value: number } {
  const { value, limit, verdict } = finding;
  if (value === null || limit === null || !rule.limits.some((own) => own.limit === limit)) return false;
  return judgeValue(value, rule.limits).verdict === verdict;
}

/** The other verdict or consequence that a measured value would get; undefined where both stay or cannot be told. */
export function rejudge(finding: Finding, previous: RuleSet, next: RuleSet): VerdictChange | undefined {
  const { id, question, element = null, value, unit, verdict, comparison, limit, consequence } = finding;
  const before = { verdict, comparison, limit, consequence };
  const [from, to] = [ruleOf(previous, id), ruleOf(next, id)];
  if (to === undefined) {
    if (value === null || verdict !== 'outside') return undefined;
    return { question, element, value, unit, before, after: null };
  }
  if (from === undefined || !isByValue(finding, from) || isComputedOtherwise(from, to)) return undefined;
  const after = judgeValue(finding.value, to.limits);
  if (after.verdict === verdict && after.consequence === consequence) return undefined;
  return { question, element, value: finding.value, unit, before, after };
}

/** Whether a rule enters the computation with other terms, so that the value itself would be another. */
function isComputedOtherwise(from: Rule, to: Rule): boolean {
  const terms = ({ unit, sizeBasis, prefaultFactor, parameters }: Rule) =>
    canonicalJson({
      unit,
      sizeBasis: sizeBasis ?? null,
      prefaultFactor: prefaultFactor ?? null,
      parameters: parameters ?? {},
    });
  return terms(from) !== terms(to);
}

const sameLimits = (from: Rule, to: Rule) => JSON.stringify(from.limits) === JSON.stringify(to.limits);

const isSameTable = (previous: RuleSet, next: RuleSet) =>
  JSON.stringify(previous.fastTrack) === JSON.stringify(next.fastTrack);

/** Whether the terms of one rule say all about the next: what follows from a table may look at more than one place. */
function isAskedAnew(findings: readonly Finding[], id: string, previous: RuleSet, next: RuleSet): boolean {
  const [from, to] = [ruleOf(previous, id), ruleOf(next, id)];
  if (to === undefined) return false;
  if (from === undefined || isComputedOtherwise(from, to)) return true;
  if (id === 'fast-track-size' && !isSameTable(previous, next)) return true;
  const answers = findings.filter((finding) => finding.id === id);
  return !sameLimits(from, to) && answers.some((finding) => !isByValue(finding, from));
}

/** The questions that only a new screening answers under the next rules. */
export function listRecomputed(findings: readonly Finding[], previous: RuleSet, next: RuleSet): string[] {
  return questions
    .filter(({ id }) => isAskedAnew(findings, id, previous, next))
    .map(({ question }) => question);
}
