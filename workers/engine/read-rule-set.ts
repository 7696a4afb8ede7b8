import { askedQuestions } from '../../shared/schemas/findings.ts';
import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import { parseJson } from './read-study.ts';
import { Problems } from './problems.ts';
import { expect, listOf, name, number, object, oneOf, positive, text, wholeFile } from './shape.ts';

const limit = object({
  limit: expect('a finite number or null', (value) => value === null || Number.isFinite(value)),
  comparison: oneOf('<=', '<', '>='),
  consequence: oneOf('none', 'supplemental', 'study', 'note'),
});

const rule = object(
  {
    stage: oneOf('initial-review', 'supplemental-review', 'engineering'),
    limits: listOf(limit, 1),
    unit: text,
    source: name,
    readOrMemory: oneOf('read', 'memory'),
  },
  { sizeBasis: oneOf('nameplate', 'export'), prefaultFactor: positive },
);

const checkRuleSet = object({
  format: oneOf('feederwright.rule-set/1'),
  code: name,
  number,
  name,
  rules: object(Object.fromEntries(askedQuestions.map(({ id }) => [id, rule]))),
});

/** Reads a rule set from its file; no input makes it throw. */
export function readRuleSet(fileText: string): { ruleSet: RuleSet } | { problems: Problems } {
  const parsed = parseJson(fileText);
  if ('problems' in parsed) return parsed;
  const problems = new Problems();
  checkRuleSet(parsed.value, wholeFile, problems);
  return problems.length > 0 ? { problems } : { ruleSet: parsed.value as RuleSet };
}
