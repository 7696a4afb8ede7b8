import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import {
  eightyFivePercentVariant,
  ninetyPercentVariant,
  shippedVariants,
} from '../../../shared/rules/rule-variants.ts';
import { listChangedRules } from '../../../shared/rules/rule-set-edits.ts';
import { describeLimit } from '../../../shared/rule-words.ts';
import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import { readRuleSet } from '../../../workers/engine/read-rule-set.ts';

const dutyOf = ({ rules }: RuleSet) => rules['interrupting-duty']!;

describe('the shipped rule sets', () => {
  it('are rule sets that the engine reads, each under a code of its own', () => {
    const all: RuleSet[] = [proFormaRuleSet, ...shippedVariants];
    for (const ruleSet of all) expect(readRuleSet(JSON.stringify(ruleSet))).toEqual({ ruleSet });
    expect(new Set(all.map(({ code }) => code)).size).toBe(all.length);
  });

  // The numbers of 52 Pa. Code §75.38 and COMAR 20.50.09.10A(2)(b), read; SGIP 2.2.1.5, read.
  it('let fault duty go up to what their own texts say', () => {
    const words = [proFormaRuleSet, eightyFivePercentVariant, ninetyPercentVariant].map((ruleSet) => {
      const { limits, unit, source } = dutyOf(ruleSet);
      return `${describeLimit(limits[0], unit)}: ${source}`.replace('\u00a0', ' ');
    });
    expect(words).toEqual([
      'at most 87.5 %: SGIP 2.2.1.5',
      'at most 85 %: 52 Pa. Code §75.38',
      'at most 90 %: COMAR 20.50.09.10A(2)(b)',
    ]);
  });

  it('differ from the pro forma in what they cite alone', () => {
    expect(listChangedRules(proFormaRuleSet, ninetyPercentVariant)).toEqual(['interrupting-duty']);
    // COMAR 20.50.09, level 1: 5 business days for completeness, 15 for the review (read).
    expect(ninetyPercentVariant.clocks!.completeness).toMatchObject({ allowedDays: 5, unit: 'business-day' });
    expect(ninetyPercentVariant.clocks!.signing).toEqual(proFormaRuleSet.clocks.signing);
  });
});

describe('a rule set’s file', () => {
  it.each([
    ['a clock of no kind there is', { clocks: { tea: {} } }, '/clocks/tea'],
    [
      'a role that sets nothing aside',
      {
        rules: {
          contribution: {
            ...proFormaRuleSet.rules.contribution,
            setAside: { roles: ['applicant'], secondPerson: false },
          },
        },
      },
      '/rules/contribution/setAside/roles/0',
    ],
    ['an order of the queue that is none', { queueOrder: 'size' }, '/queueOrder'],
    [
      'a charge below nothing',
      {
        fees: [
          { label: 'F', currency: 'USD', baseCents: -1, perKwCents: 0, source: 'S', readOrMemory: 'read' },
        ],
      },
      '/fees/0/baseCents',
    ],
  ])('with %s is refused there', (_what, changes, path) => {
    const read = readRuleSet(JSON.stringify({ ...proFormaRuleSet, ...changes }));
    expect(JSON.stringify('problems' in read ? read.problems : [])).toContain(path);
  });

  it('without any of the terms that came later is still a rule set', () => {
    const { format, code, number, name, rules } = proFormaRuleSet;
    const early = { format, code, number, name, rules: { contribution: rules.contribution } };
    expect(readRuleSet(JSON.stringify(early))).toEqual({ ruleSet: early });
  });
});
