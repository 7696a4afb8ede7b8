import { expect, it } from 'vitest';
import { releaseFindings } from '../../server/services/released-findings.ts';
import { describeFinding } from '../../shared/finding-words.ts';
import type { Finding } from '../../shared/schemas/findings.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import { listAsked } from '../../shared/schemas/rule-sets.ts';
import { makeFindings } from '../support/fixture-applications.ts';

const askedQuestions = listAsked(proFormaRuleSet);

const lacking = (element: string): Finding[] =>
  makeFindings(
    askedQuestions.map(({ id }) => ({
      id,
      verdict: 'needs-data',
      value: null,
      element,
      note: `The rating of ${element} is not known.`,
    })),
  );

it('an applicant reads why a question could not be answered, and learns no device of it', () => {
  const released = releaseFindings(lacking('PL2-R1'));
  expect(released).toHaveLength(askedQuestions.length);
  for (const finding of released) {
    const { sentence } = describeFinding(finding);
    expect(sentence).toMatch(/: The utility’s records of this feeder lack .+\.$/);
    expect(JSON.stringify(finding)).not.toContain('PL2-R1');
  }
  // The words are the same whatever it is that lacks, so that they tell nothing.
  expect(releaseFindings(lacking('q-1039/plant'))).toEqual(released);
  expect(new Set(released.map(({ note }) => note)).size).toBe(askedQuestions.length);
});

it('a finding that was measured is released without its note', () => {
  const noted = makeFindings([{ id: 'contribution', note: 'At n2 of FX-1.', element: 'n2' }]);
  for (const finding of releaseFindings(noted)) {
    expect(finding).not.toHaveProperty('note');
    expect(finding).not.toHaveProperty('element');
  }
});
