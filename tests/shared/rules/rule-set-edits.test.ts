import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import { editRuleSet, listChangedRules } from '../../../shared/rules/rule-set-edits.ts';
import { listUnconfirmed } from '../../../shared/rules/rule-terms.ts';
import type { FastTrackEdit } from '../../../shared/schemas/rule-set-edits.ts';
import { listAsked, type RuleSet } from '../../../shared/schemas/rule-sets.ts';
import { toRuleEdit } from '../../support/fixture-rules.ts';

const base: RuleSet = proFormaRuleSet;
const edit = (changes: object) => editRuleSet(base, {}, { version: 1, ...changes });
const pathsOf = (changes: object) => edit(changes).problems.map(({ path }) => path);

describe('an edit of a rule set', () => {
  it('that sends every rule as it is changes nothing that a clause says', () => {
    const rules = Object.fromEntries(Object.entries(base.rules).map(([id, rule]) => [id, toRuleEdit(rule)]));
    const { content, problems } = edit({ rules });
    expect(problems).toEqual([]);
    expect(listChangedRules(base, content)).toEqual([]);
    expect(listAsked(content)).toEqual(listAsked(base));
  });

  it('keeps the unit, which belongs to the computation, whatever is sent', () => {
    const rule = { ...toRuleEdit(base.rules['interrupting-duty']!), unit: 'kA' };
    const { content } = edit({ rules: { 'interrupting-duty': rule } });
    expect(content.rules['interrupting-duty']!.unit).toBe('%');
  });

  it('cannot leave nothing to ask, nor ask what no computation answers', () => {
    const unasked = Object.entries(base.rules).map(([id, rule]) => [id, toRuleEdit(rule, { asked: false })]);
    expect(pathsOf({ rules: Object.fromEntries(unasked) })).toEqual(['rules']);
    const { contribution, ...others } = base.rules;
    const asked = { version: 1, rules: { contribution: toRuleEdit(contribution!) } };
    const { problems } = editRuleSet({ ...base, rules: others }, {}, asked as never);
    expect(problems.map(({ path }) => path)).toEqual(['rules.contribution.asked']);
  });

  it('wants each term of the rule as the kind of thing it is', () => {
    const rule = base.rules.contribution!;
    const withTerms = {
      ...base,
      rules: { contribution: { ...rule, parameters: { atLeastKw: 5, isSummed: true, method: 'phasor' } } },
    };
    const terms = { atLeastKw: 'five', isSummed: 'yes', method: ' ' };
    const wrong = { version: 1, rules: { contribution: toRuleEdit(rule, { parameters: terms }) } };
    expect(editRuleSet(withTerms, {}, wrong as never).problems.map(({ path }) => path)).toEqual([
      'rules.contribution.parameters.atLeastKw',
      'rules.contribution.parameters.isSummed',
      'rules.contribution.parameters.method',
    ]);
  });
});

describe('the table of Fast Track sizes', () => {
  const table = (): FastTrackEdit => structuredClone(base.fastTrack!);

  it('is taken as it stands, and must not have gaps or shrink on a mainline', () => {
    expect(pathsOf({ fastTrack: table() })).toEqual([]);
    const gap = table();
    gap.rows[1]!.fromKv = 6;
    expect(pathsOf({ fastTrack: gap })).toEqual(['fastTrack.rows.0.belowKv']);
    const small = table();
    small.rows[1]!.mainlineKw = small.rows[1]!.anywhereKw - 1;
    expect(pathsOf({ fastTrack: small })).toEqual(['fastTrack.rows.1.mainlineKw']);
    const equal = table();
    equal.rows[1]!.mainlineKw = equal.rows[1]!.anywhereKw;
    expect(pathsOf({ fastTrack: equal })).toEqual([]);
    const high = table();
    high.maximumKv = high.rows.at(-1)!.fromKv;
    expect(pathsOf({ fastTrack: high })).toEqual([`fastTrack.rows.${high.rows.length - 1}.fromKv`]);
  });

  it('is part of what its question’s clause says, and remembered where one of its rows is', () => {
    const bigger = table();
    bigger.machinesKw += 1;
    expect(listChangedRules(base, edit({ fastTrack: bigger }).content)).toEqual(['fast-track-size']);
    const read = table();
    const known = { source: 'A rule of ours', readOrMemory: 'read' } as const;
    const rows: FastTrackEdit['rows'] = read.rows.map((row) => ({ ...row, ...known }));
    const rule = toRuleEdit(base.rules['fast-track-size']!, known);
    const isOpen = (content: RuleSet) =>
      listUnconfirmed(content, { isWhole: false, questions: [] }).some(({ id }) => id === 'fast-track-size');
    const change = { rules: { 'fast-track-size': rule }, fastTrack: { ...read, ...known, rows } };
    expect(isOpen(edit(change).content)).toBe(false);
    rows[2] = { ...rows[2]!, readOrMemory: 'memory' };
    expect(isOpen(edit(change).content)).toBe(true);
  });
});
