import { clockKinds } from '../../shared/rules/clock-kinds.ts';
import { questions } from '../../shared/schemas/findings.ts';
import { setAsideRoles, type RuleSet } from '../../shared/schemas/rule-sets.ts';
import { parseJson } from './read-study.ts';
import { Problems } from './problems.ts';
import {
  expect,
  listOf,
  name,
  notNegative,
  number,
  object,
  oneOf,
  positive,
  text,
  truth,
  wholeFile,
} from './shape.ts';

const limit = object({
  limit: expect('a finite number or null', (value) => value === null || Number.isFinite(value)),
  comparison: oneOf('<=', '<', '>='),
  consequence: oneOf('none', 'supplemental', 'study', 'note'),
});

const parameters = expect(
  'numbers, texts or true and false, each under its name',
  (value) =>
    typeof value === 'object' &&
    value !== null &&
    Object.values(value).every(
      (each) => Number.isFinite(each) || typeof each === 'string' || typeof each === 'boolean',
    ),
);

const setAside = object({ roles: listOf(oneOf(...setAsideRoles)), secondPerson: truth });

const known = { source: name, readOrMemory: oneOf('read', 'memory') };
const clock = object({ allowedDays: positive, unit: oneOf('business-day', 'calendar-day'), ...known });
const fee = object({
  label: name,
  currency: name,
  baseCents: notNegative,
  perKwCents: notNegative,
  ...known,
});

const rule = object(
  {
    stage: oneOf('initial-review', 'supplemental-review', 'engineering'),
    limits: listOf(limit, 1),
    unit: text,
    source: name,
    readOrMemory: oneOf('read', 'memory'),
  },
  { sizeBasis: oneOf('nameplate', 'export'), prefaultFactor: positive, parameters, scope: text, setAside },
);

const upperEnd = expect('a number above 0 or null', (value) => value === null || positive.accepts(value));
const fastTrackRow = object({
  fromKv: notNegative,
  belowKv: upperEnd,
  anywhereKw: notNegative,
  mainlineKw: notNegative,
  ...known,
});
const fastTrack = object({
  rows: listOf(fastTrackRow, 1),
  mainlineMiles: notNegative,
  machinesKw: notNegative,
  maximumKv: positive,
  ...known,
});

const checkRuleSet = object(
  {
    format: oneOf('feederwright.rule-set/1'),
    code: name,
    number,
    name,
    rules: object({}, Object.fromEntries(questions.map(({ id }) => [id, rule]))),
  },
  {
    clocks: object({}, Object.fromEntries(Object.keys(clockKinds).map((kind) => [kind, clock]))),
    fees: listOf(fee),
    fastTrack,
    queueOrder: oneOf('receipt', 'completeness'),
  },
);

/** Reads a rule set from its file; no input makes it throw. */
export function readRuleSet(fileText: string): { ruleSet: RuleSet } | { problems: Problems } {
  const parsed = parseJson(fileText);
  if ('problems' in parsed) return parsed;
  const problems = new Problems();
  checkRuleSet(parsed.value, wholeFile, problems);
  return problems.length > 0 ? { problems } : { ruleSet: parsed.value as RuleSet };
}
