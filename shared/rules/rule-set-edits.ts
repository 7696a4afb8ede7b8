import { canonicalJson } from '../canonical-json.ts';
import { questions, type QuestionId } from '../schemas/findings.ts';
import type { FieldProblem } from '../schemas/problems.ts';
import type { FastTrackEdit, RuleEdit, RuleSetEdit } from '../schemas/rule-set-edits.ts';
import type { Rule, RuleLimit, RuleSet } from '../schemas/rule-sets.ts';

/*
 * What an administrator may change of a rule: its numbers and words. Unit, number of limits, the way of comparing (at
 * most or at least) and the names of parameters belong to the computation that answers the question.
 */

interface Edited {
  content: RuleSet;
  problems: FieldProblem[];
}

const isAtLeast = ({ comparison }: Pick<RuleLimit, 'comparison'>) => comparison === '>=';

function checkLimit(limit: RuleLimit, base: RuleLimit, path: string): FieldProblem[] {
  if (base.limit === null && limit.limit !== null) {
    return [{ path: `${path}.limit`, message: 'This question is answered by a table; it takes no number' }];
  }
  if (base.limit !== null && limit.limit === null) {
    return [{ path: `${path}.limit`, message: 'Enter the limit as a number of 0 or more' }];
  }
  if (isAtLeast(limit) === isAtLeast(base)) return [];
  const kept = isAtLeast(base) ? '“at least”' : '“at most” or “less than”';
  return [{ path: `${path}.comparison`, message: `This question compares by ${kept}` }];
}

/** The gravest first: a milder one that could never be the first to break would never be cited. */
function checkOrder(limits: readonly RuleLimit[], path: string): FieldProblem[] {
  return limits.flatMap(({ limit, comparison }, index) => {
    const graver = limits[index - 1]?.limit;
    if (graver === undefined || graver === null || limit === null) return [];
    const isMilder = comparison === '>=' ? limit > graver : limit < graver;
    const words = comparison === '>=' ? 'more' : 'less';
    if (isMilder) return [];
    return [{ path: `${path}.${index}.limit`, message: `Must be ${words} than the graver limit, ${graver}` }];
  });
}

function checkParameter(value: unknown, base: number | string | boolean): string | undefined {
  if (typeof base === 'number') return Number.isFinite(value) ? undefined : 'Enter a number';
  if (typeof base === 'boolean') return typeof value === 'boolean' ? undefined : 'Choose yes or no';
  return typeof value === 'string' && value.trim() !== '' ? undefined : 'Enter a text';
}

function checkParameters(edit: RuleEdit, base: Rule, path: string): FieldProblem[] {
  const given = edit.parameters ?? {};
  const expected = base.parameters ?? {};
  const wrong = Object.entries(expected).flatMap(([name, value]) => {
    const message = checkParameter(given[name], value);
    return message === undefined ? [] : [{ path: `${path}.${name}`, message }];
  });
  const unknown = Object.keys(given).filter((name) => !Object.hasOwn(expected, name));
  return [
    ...wrong,
    ...unknown.map((name) => ({ path: `${path}.${name}`, message: 'This question has no such term' })),
  ];
}

function checkOptions(edit: RuleEdit, base: Rule, path: string): FieldProblem[] {
  const unknown = (['sizeBasis', 'prefaultFactor'] as const).filter(
    (name) => (edit[name] === undefined) !== (base[name] === undefined),
  );
  return unknown.map((name) => ({
    path: `${path}.${name}`,
    message: base[name] === undefined ? 'This question has no such term' : 'This is needed',
  }));
}

function checkRule(edit: RuleEdit, base: Rule, path: string): FieldProblem[] {
  const count = base.limits.length;
  if (edit.limits.length !== count) {
    return [{ path: `${path}.limits`, message: `This question has ${count} limits` }];
  }
  const limits = edit.limits.flatMap((limit, index) =>
    checkLimit(limit, base.limits[index] ?? base.limits[0], `${path}.limits.${index}`),
  );
  return [
    ...limits,
    ...(limits.length > 0 ? [] : checkOrder(edit.limits, `${path}.limits`)),
    ...checkOptions(edit, base, path),
    ...checkParameters(edit, base, `${path}.parameters`),
  ];
}

function toRule({ asked: _asked, parameters, limits, ...edit }: RuleEdit, base: Rule): Rule {
  return {
    ...edit,
    limits: limits as Rule['limits'],
    unit: base.unit,
    ...(parameters === undefined ? {} : { parameters: parameters as Rule['parameters'] }),
  };
}

/** The rules with the edited ones in place, in the order of the questions. */
function editRules(
  base: RuleSet,
  available: RuleSet['rules'],
  edits: NonNullable<RuleSetEdit['rules']>,
): { rules: RuleSet['rules']; problems: FieldProblem[] } {
  const rules: RuleSet['rules'] = {};
  const problems: FieldProblem[] = [];
  for (const { id } of questions) {
    const before = base.rules[id];
    const edit: RuleEdit | undefined = edits[id];
    const from = before ?? available[id];
    if (edit === undefined) {
      if (before !== undefined) rules[id] = before;
    } else if (edit.asked && from === undefined) {
      problems.push({ path: `rules.${id}.asked`, message: 'This version of the desk does not compute it' });
    } else if (edit.asked && from !== undefined) {
      problems.push(...checkRule(edit, from, `rules.${id}`));
      rules[id] = toRule(edit, from);
    }
  }
  return { rules, problems };
}

/** Rows follow one another without gap, and a mainline never carries less than any place does. */
function checkFastTrack({ rows, maximumKv }: FastTrackEdit): FieldProblem[] {
  return rows.flatMap(({ fromKv, belowKv, anywhereKw, mainlineKw }, index) => {
    const at = (name: string) => `fastTrack.rows.${index}.${name}`;
    const next = rows[index + 1]?.fromKv ?? null;
    const problems: FieldProblem[] = [];
    if (index === 0 && fromKv !== 0)
      problems.push({ path: at('fromKv'), message: 'Must be 0: the lowest voltage' });
    const before = rows[index - 1]?.fromKv;
    if (before !== undefined && fromKv <= before)
      problems.push({ path: at('fromKv'), message: `Must be more than ${before} kV` });
    if (fromKv >= maximumKv)
      problems.push({
        path: at('fromKv'),
        message: `Must be less than the highest voltage, ${maximumKv} kV`,
      });
    if (belowKv !== next)
      problems.push({ path: at('belowKv'), message: 'Must end where the next row begins' });
    if (mainlineKw < anywhereKw)
      problems.push({ path: at('mainlineKw'), message: `Must be ${anywhereKw} kW or more, as at any place` });
    return problems;
  });
}

/**
 * The draft as the edit would make it, and what is wrong with it at each field. `available` are the rules that a question
 * which is not asked yet would begin from.
 */
export function editRuleSet(base: RuleSet, available: RuleSet['rules'], edit: RuleSetEdit): Edited {
  const { rules, problems } = editRules(base, available, edit.rules ?? {});
  if (Object.keys(rules).length === 0) problems.push({ path: 'rules', message: 'Ask at least one question' });
  if (edit.fastTrack !== undefined) problems.push(...checkFastTrack(edit.fastTrack));
  const { clocks = base.clocks, fees = base.fees, name = base.name, fastTrack = base.fastTrack } = edit;
  const content: RuleSet = {
    ...base,
    name,
    rules,
    ...(clocks === undefined ? {} : { clocks: { ...base.clocks, ...clocks } }),
    ...(fees === undefined ? {} : { fees }),
    ...(fastTrack === undefined ? {} : { fastTrack }),
  };
  return { content, problems };
}

/** What a question's clause says: not who may set it aside, but with the table that its answer is read from. */
function writeClause({ rules, fastTrack }: RuleSet, id: QuestionId): string {
  const rule = rules[id];
  if (rule === undefined) return '';
  const { setAside: _setAside, ...clause } = rule;
  const table = id === 'fast-track-size' ? (fastTrack ?? null) : null;
  // Through text, so that what is absent and what is undefined are one.
  return canonicalJson(JSON.parse(JSON.stringify({ clause, table })));
}

/** The questions whose rule says something else in the one than in the other. */
export function listChangedRules(before: RuleSet, after: RuleSet): QuestionId[] {
  return questions.map(({ id }) => id).filter((id) => writeClause(before, id) !== writeClause(after, id));
}
