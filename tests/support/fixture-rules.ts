import { expect } from 'vitest';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { RuleSetView } from '../../shared/schemas/rule-set-views.ts';
import type { Rule } from '../../shared/schemas/rule-sets.ts';
import type { FixtureDesk } from './fixture-desk.ts';

const base = '/api/rule-sets/pro-forma';

/** The fixture world's rule set and its versions, as an administrator works on them. */
export function makeRuleDesk(desk: FixtureDesk) {
  const { administrator } = desk.as;
  return {
    async read(number: number): Promise<RuleSetView> {
      return (await desk.as.auditor.get(`${base}/${number}`).expect(200)).body as RuleSetView;
    },
    async begin(from: number = proFormaRuleSet.number): Promise<RuleSetView> {
      const answer = await administrator.send('post', `${base}/${from}/drafts`, {});
      expect(answer.status).toBe(201);
      return answer.body as RuleSetView;
    },
    save: (draft: RuleSetView, edit: object) =>
      administrator.send('put', `${base}/${draft.number}`, { version: draft.version, ...edit }),
    publish: ({ version, number }: RuleSetView, validFrom: string) =>
      administrator.send('post', `${base}/${number}/publication`, { version, validFrom }),
    confirm: (number: number, question: string) =>
      administrator.send('post', `${base}/${number}/confirmations`, { question }),
    throwAway: (number: number) => administrator.send('delete', `${base}/${number}?version=1`),
  };
}

/** A rule as the form sends it. */
export function toRuleEdit({ unit: _unit, ...rule }: Rule, changes: object = {}) {
  return { asked: true, setAside: { roles: ['reviewer'], secondPerson: false }, ...rule, ...changes };
}
