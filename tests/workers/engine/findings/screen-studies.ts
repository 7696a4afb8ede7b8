import { expect } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { QuestionId } from '../../../../shared/schemas/findings.ts';
import type { Rule, RuleSet } from '../../../../shared/schemas/rule-sets.ts';
import type { Inverter, Study } from '../../../../shared/schemas/study.ts';
import type { Answered } from '../../../../workers/engine/findings/judge.ts';
import { makeScreening, type ProjectStudy } from '../../../../workers/engine/findings/make-screening.ts';
import { answerQuestions } from '../../../../workers/engine/findings/questions.ts';
import { listFaults } from '../../../support/recompute-step.ts';
import { checkedStudy, readCase } from '../cases.ts';

/* Marrow Lane, whose README has its numbers, as the screens' tests change it. */

const marrowLane = readCase('marrow-lane');

export const inverter = (id: string, kva: number, more: Partial<Inverter> = {}): Inverter => {
  return { id, node: 'poi', phases: 'ABC', kva, faultCurrentPu: 1.2, ...more };
};

/** Marrow Lane as read from its file after a change. */
export function study(change: (study: ProjectStudy) => void = () => undefined): ProjectStudy {
  const file = structuredClone(marrowLane) as ProjectStudy;
  change(file);
  return checkedStudy(file as Study) as ProjectStudy;
}

/** The same with an inverter plant of a size at the point of interconnection in place of the machine. */
export function plant(
  kva: number,
  more: Partial<Inverter> = {},
  change: (study: ProjectStudy) => void = () => undefined,
): ProjectStudy {
  return study((file) => {
    file.project = { id: 'project', node: 'poi', inverters: [inverter('plant', kva, more)] };
    change(file);
  });
}

/** The pro forma's rule of a question, changed, and the rules of the questions that it rests on. */
export function rulesFor(
  id: QuestionId,
  rule: Partial<Rule> = {},
  others: readonly QuestionId[] = [],
): RuleSet {
  const known: RuleSet['rules'] = proFormaRuleSet.rules;
  const rules: RuleSet['rules'] = { [id]: { ...known[id]!, ...rule } };
  for (const other of others) rules[other] = known[other]!;
  return { ...proFormaRuleSet, rules };
}

/** Answers one question; a measured answer's working must lead to its value, step by step as printed. */
export function ask(file: ProjectStudy, id: QuestionId, ruleSet: RuleSet = rulesFor(id)): Answered[] {
  const answers = answerQuestions(makeScreening(file, ruleSet)).filter((each) => each.id === id);
  expect(new Set(answers.map(({ element }) => element)).size).toBe(answers.length);
  for (const { value, working } of answers) {
    expect(working !== undefined).toBe(value !== null);
    if (!working) continue;
    expect(listFaults(working)).toEqual([]);
    expect(working.at(-1)!.result.value).toBe(value);
  }
  return answers;
}

/** What a reader sees at first of each answer. */
export function brief(answers: readonly Answered[]): [element: string | undefined, verdict: string][] {
  return answers.map(({ element, verdict }) => [element, verdict]);
}
