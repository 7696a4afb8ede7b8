import { describe, expect, it } from 'vitest';
import { listRecomputed, rejudge } from '../../../shared/rules/rule-comparison.ts';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import { judgeValue } from '../../../shared/rules/rule-terms.ts';
import type { Finding } from '../../../shared/schemas/findings.ts';
import type { Rule, RuleSet } from '../../../shared/schemas/rule-sets.ts';
import { makeFindings } from '../../support/fixture-applications.ts';

const previous: RuleSet = proFormaRuleSet;

function withRule(id: keyof RuleSet['rules'], changes: Partial<Rule>): RuleSet {
  return { ...previous, rules: { ...previous.rules, [id]: { ...previous.rules[id]!, ...changes } } };
}

const limitedTo = (limit: number, comparison: '<=' | '<' = '<=') =>
  withRule('interrupting-duty', { limits: [{ limit, comparison, consequence: 'supplemental' }] });

function find(changes: Partial<Finding> & { id: string }): Finding {
  return makeFindings([changes]).find(({ id }) => id === changes.id)!;
}

describe('a finding held against other limits', () => {
  it.each([
    [84.9, 85, '<=', undefined],
    [85, 85, '<=', undefined],
    [85, 85, '<', 'outside'],
    [85.0001, 85, '<=', 'outside'],
    [86, 90, '<=', undefined],
  ] as const)('at %d against %d (%s) turns: %s', (value, limit, comparison, verdict) => {
    const change = rejudge(find({ id: 'interrupting-duty', value }), previous, limitedTo(limit, comparison));
    expect(change?.after?.verdict).toBe(verdict);
  });

  it('turns within where the limit is raised over it', () => {
    const outside = { verdict: 'outside', value: 88, consequence: 'supplemental' } as const;
    const change = rejudge(find({ id: 'interrupting-duty', ...outside }), previous, limitedTo(90));
    expect(change).toMatchObject({ before: { verdict: 'outside' }, after: { verdict: 'within', limit: 90 } });
  });

  it('is not judged where data were missing, or the verdict came from a table', () => {
    const missing = find({ id: 'interrupting-duty', verdict: 'needs-data', value: null });
    expect(rejudge(missing, previous, limitedTo(1))).toBeUndefined();
    expect(listRecomputed([missing], previous, limitedTo(1))).toHaveLength(1);
    const byTable = find({ id: 'interrupting-duty', value: 5, limit: 10 });
    expect(rejudge(byTable, previous, limitedTo(1))).toBeUndefined();
    expect(listRecomputed([byTable], previous, limitedTo(1))).toHaveLength(1);
  });

  it('is not judged where the value itself would be another', () => {
    const next = withRule('effective-grounding', {
      prefaultFactor: 1.1,
      limits: [{ limit: 1, comparison: '<=', consequence: 'study' }],
    });
    const finding = find({ id: 'effective-grounding' });
    expect(rejudge(finding, previous, next)).toBeUndefined();
    expect(listRecomputed([finding], previous, next)).toEqual([finding.question]);
  });

  it('falls away with a question that is not asked any more, where it stood against something', () => {
    const { contribution: _contribution, ...rules } = previous.rules;
    const next = { ...previous, rules };
    const outside = find({ id: 'contribution', verdict: 'outside', value: 12, consequence: 'supplemental' });
    expect(rejudge(outside, previous, next)).toMatchObject({ after: null });
    expect(rejudge(find({ id: 'contribution' }), previous, next)).toBeUndefined();
  });

  it('needs a screening where the question is new or its table changed', () => {
    const { contribution: _contribution, ...rules } = previous.rules;
    expect(listRecomputed(makeFindings(), { ...previous, rules }, previous)).toHaveLength(1);
    const fastTrack = { ...previous.fastTrack!, machinesKw: 1 };
    expect(listRecomputed(makeFindings(), previous, { ...previous, fastTrack })).toHaveLength(1);
    expect(listRecomputed(makeFindings(), previous, previous)).toEqual([]);
  });
});

describe('a value held against several limits', () => {
  const { limits } = previous.rules['short-circuit-ratio']!;

  it('breaks the gravest it can, and keeps the mildest where it keeps all', () => {
    expect(limits.map(({ limit }) => limit)).toEqual([5, 20]);
    expect(judgeValue(4, limits)).toMatchObject({ verdict: 'outside', limit: 5, consequence: 'study' });
    expect(judgeValue(5, limits)).toMatchObject({ verdict: 'outside', limit: 20, consequence: 'note' });
    expect(judgeValue(20, limits)).toMatchObject({ verdict: 'within', limit: 20, consequence: 'none' });
  });
});
