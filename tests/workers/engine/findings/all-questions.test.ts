import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { RuleSet } from '../../../../shared/schemas/rule-sets.ts';
import { listAsked } from '../../../../shared/schemas/rule-sets.ts';
import type { QuantityValue } from '../../../../shared/schemas/working.ts';
import type { Answered } from '../../../../workers/engine/findings/judge.ts';
import { listNotFinite } from '../../../../workers/engine/finite-result.ts';
import { checkStudy } from '../../../../workers/engine/read-study.ts';
import { workStudy } from '../../../../workers/engine/run-study.ts';
import { listFaults } from '../../../support/recompute-step.ts';
import { makeOddStudy } from './odd-studies.ts';

/* All questions put to odd studies: whatever is missing or strange in a study, each question has an answer that can be followed. */

const count = 60;
const ruleSet: RuleSet = proFormaRuleSet;
const asked = listAsked(ruleSet).map(({ id }) => id);

/** Where nothing flows, what is printed is the rounding of it, and another order of the same sums gives another. */
const nothing = 1e-9;
function isNothing(value: QuantityValue): boolean {
  return typeof value === 'number' ? Math.abs(value) < nothing : Math.hypot(value.re, value.im) < nothing;
}

function listFlaws(answers: readonly Answered[]): string[] {
  const places = answers.map(({ id, element = '' }) => `${id} of ${element}`);
  return [
    ...asked.filter((id) => !answers.some((each) => each.id === id)).map((id) => `${id}: no answer`),
    ...places.filter((place, index) => places.indexOf(place) !== index).map((place) => `${place}: twice`),
    ...answers.flatMap((each, index) => listOwnFlaws(each).map((flaw) => `${places[index]!}: ${flaw}`)),
  ];
}

function listOwnFlaws({ verdict, value, consequence, note = '', working = [] }: Answered): string[] {
  const isSettled = verdict === 'within' || verdict === 'not-applicable';
  const flaws: [boolean, string][] = [
    [isSettled !== (consequence === 'none'), `${verdict} with consequence ${consequence}`],
    [note === '', `${verdict} without a note`],
    [/\b(NaN|Infinity|undefined|null)\b/.test(note), note],
    [value !== null && working.at(-1)?.result.value !== value, 'the last step does not give the value'],
    [listNotFinite(working).length > 0, 'a step that is not finite'],
  ];
  const steps = working.filter(({ result }) => !isNothing(result.value));
  return [...flaws.filter(([isThere]) => isThere).map(([, flaw]) => flaw), ...listFaults(steps)];
}

describe('All questions together', () => {
  it('are answered once for each place, with finite numbers that can be computed again, whatever the study', () => {
    let valid = 0;
    const verdicts = new Set<string>();
    for (let seed = 0; seed < count; seed++) {
      const read = checkStudy(JSON.parse(JSON.stringify(makeOddStudy(seed))));
      if ('problems' in read) continue;
      valid++;
      const { result, worked } = workStudy(read.study, ruleSet);
      const { answers } = worked!;
      expect([listFlaws(answers), listNotFinite(result).first], `seed ${seed}`).toEqual([[], []]);
      for (const { id, verdict } of answers) verdicts.add(`${id} ${verdict}`);
    }
    // The studies are odd, not spoilt, and bring about most verdicts that there are.
    expect(valid).toBeGreaterThan(count * 0.9);
    expect(verdicts.size).toBeGreaterThan(asked.length * 2.5);
  });
});
