import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { RuleSetView } from '../../shared/schemas/rule-set-views.ts';
import type { Rule } from '../../shared/schemas/rule-sets.ts';
import { makeFindings } from '../support/fixture-applications.ts';
import {
  decide,
  makeConfirmed,
  makeDecidable,
  makeFixtureDesk,
  screen,
  see,
  type FixtureDesk,
} from '../support/fixture-desk.ts';
import { makeRuleDesk, toRuleEdit } from '../support/fixture-rules.ts';
import { readProblem } from '../support/test-app.ts';

let desk: FixtureDesk;
let rules: ReturnType<typeof makeRuleDesk>;
beforeAll(async () => {
  desk = await makeFixtureDesk();
  rules = makeRuleDesk(desk);
});
afterAll(() => desk.stop());

describe('a remembered clause', () => {
  const question = 'effective-grounding';

  it('loses its confirmation in a draft that changes it, and only there', async () => {
    const draft = await rules.begin();
    expect(draft.unconfirmed).toEqual([]);
    const grounding = draft.content.rules[question]!;
    const limits = [{ limit: 75, comparison: '<=', consequence: 'study' }];
    const edit = { rules: { [question]: toRuleEdit(grounding, { limits }) } };
    const changed = (await rules.save(draft, edit).expect(200)).body as RuleSetView;
    expect(changed.unconfirmed).toEqual([question]);
    // Who may set it aside is not in the clause.
    const ratio = draft.content.rules['short-circuit-ratio']!;
    const trust = { setAside: { roles: ['planner'], secondPerson: true } };
    const trusted = await rules.save(changed, { rules: { 'short-circuit-ratio': toRuleEdit(ratio, trust) } });
    expect((trusted.body as RuleSetView).unconfirmed).toEqual([question]);
    const confirmed = await rules.confirm(draft.number, question).expect(200);
    expect((confirmed.body as RuleSetView).unconfirmed).toEqual([]);
    expect((confirmed.body as RuleSetView).confirmations).toContainEqual(
      expect.objectContaining({ question, by: 'Quin Ladd' }),
    );
  });

  it('carries no decision until each is confirmed, by whom and when', async () => {
    const { publicId, runId } = await makeDecidable(desk);
    const { db } = desk.deps;
    await db('rule_set_versions').where({ id: desk.world.ruleSetVersionId }).update({ confirmed_at: null });
    try {
      const { unconfirmed, content, sha256 } = await rules.read(proFormaRuleSet.number);
      expect(unconfirmed).toContain(question);
      const [last, ...others] = unconfirmed;
      const confirm = (id: string) => rules.confirm(proFormaRuleSet.number, id).expect(200);
      for (const id of others) await confirm(id);
      const problem = readProblem(await decide(desk, publicId, runId));
      expect(problem).toMatchObject({ status: 422, code: 'rule-set-unconfirmed' });
      expect(problem.title).toContain(content.rules[last as typeof question]!.source);
      await confirm(last!);
      expect(await rules.read(proFormaRuleSet.number)).toMatchObject({ unconfirmed: [], sha256 });
      expect((await decide(desk, publicId, runId)).body).toMatchObject({ stage: 'approved' });
    } finally {
      await db('rule_set_versions')
        .where({ id: desk.world.ruleSetVersionId })
        .update({ confirmed_at: new Date() });
    }
  });

  it('is not confirmed where the clause was read or the question is not asked', async () => {
    const send = (id: string) => rules.confirm(proFormaRuleSet.number, id);
    expect(readProblem(await send('contribution'))).toMatchObject({ code: 'not-remembered' });
    expect(readProblem(await send('no-such-question'))).toMatchObject({ status: 400 });
  });
});

describe('terms of a rule', () => {
  /** Rules of their own for one application that is bound already: the row is made past the services. */
  async function bind(publicId: string, changes: Partial<Record<string, Partial<Rule>>>): Promise<void> {
    const { content } = await rules.read(proFormaRuleSet.number);
    const changed = Object.fromEntries(
      Object.entries(content.rules).map(([id, rule]) => [id, { ...rule, ...changes[id] }]),
    );
    const [id] = await desk.deps.db('rule_set_versions').insert({
      code: `bound-${publicId.slice(0, 20)}`,
      number: 1,
      valid_from: '2999-01-01',
      content: JSON.stringify({ ...content, rules: changed }),
      sha256: Buffer.alloc(32),
      confirmed_at: new Date(),
    });
    await desk.deps.db('applications').where({ public_id: publicId }).update({ rule_set_version_id: id });
  }

  async function screenUnder(
    changes: Partial<Record<string, Partial<Rule>>>,
    findings: Parameters<typeof makeFindings>[0],
  ): Promise<{ publicId: string; runId: string }> {
    const { publicId } = await makeConfirmed(desk);
    await bind(publicId, changes);
    await desk.as.reviewer.send('post', `/api/applications/${publicId}/runs`, {}).expect(202);
    const runId = (await see(desk.as.reviewer, publicId)).run!.publicId;
    await screen(desk, runId, makeFindings(findings));
    return { publicId, runId };
  }

  const open = { id: 'contribution', verdict: 'outside', value: 12, consequence: 'supplemental' } as const;

  it('let a supplemental question stand open in the initial review, and not in the supplemental one', async () => {
    const stage = 'supplemental-review';
    const { publicId, runId } = await screenUnder({ contribution: { stage } }, [open]);
    const put = (to: string) =>
      desk.deps.db('applications').where({ public_id: publicId }).update({ stage: to });
    await put(stage);
    expect(readProblem(await decide(desk, publicId, runId))).toMatchObject({ code: 'findings-open' });
    await put('initial-review');
    expect((await see(desk.as.reviewer, publicId)).run!.terms.contribution).toMatchObject({ stage });
    expect((await decide(desk, publicId, runId)).body).toMatchObject({ stage: 'approved' });
  });

  it('ask for a second person, whose agreement alone makes what was set aside count', async () => {
    const setAside: Rule['setAside'] = { roles: ['reviewer'], secondPerson: true };
    const { publicId, runId } = await screenUnder({ contribution: { setAside } }, [open]);
    const body = { question: 'contribution', reason: 'Studied by hand.' };
    const agree = (person: 'reviewer' | 'secondReviewer', what: object = body) =>
      desk.as[person].send('put', `/api/runs/${runId}/waivers/agreement`, what);
    await agree('secondReviewer').expect(404);
    await desk.as.reviewer.send('put', `/api/runs/${runId}/waivers`, body).expect(200);
    expect(readProblem(await decide(desk, publicId, runId))).toMatchObject({ code: 'findings-open' });
    expect(readProblem(await agree('reviewer'))).toMatchObject({ status: 422, code: 'second-person' });
    const other = await agree('secondReviewer', { ...body, reason: 'Another reason.' });
    expect(readProblem(other)).toMatchObject({ status: 409 });
    const agreed = await agree('secondReviewer').expect(200);
    expect(agreed.body).toMatchObject({ waivers: [{ by: 'Mira Holt', agreedBy: 'Ned Ivers' }] });
    expect((await decide(desk, publicId, runId)).body).toMatchObject({ stage: 'approved' });
  });

  it('begin anew when the reason is written anew after the second person agreed', async () => {
    const setAside: Rule['setAside'] = { roles: ['reviewer'], secondPerson: true };
    const { runId } = await screenUnder({ contribution: { setAside } }, [open]);
    const path = `/api/runs/${runId}/waivers`;
    const body = { question: 'contribution', reason: 'Studied by hand.' };
    await desk.as.reviewer.send('put', path, body).expect(200);
    await desk.as.secondReviewer.send('put', `${path}/agreement`, body).expect(200);
    const again = await desk.as.reviewer.send('put', path, { ...body, reason: 'For another reason.' });
    expect(again.body).toMatchObject({ waivers: [{ agreedBy: null }] });
  });

  it('say which roles may set a finding aside', async () => {
    const setAside: Rule['setAside'] = { roles: ['planner'], secondPerson: false };
    const { runId } = await screenUnder({ contribution: { setAside } }, [open]);
    const body = { question: 'contribution', reason: 'Studied by hand.' };
    const put = (person: 'reviewer' | 'planner') =>
      desk.as[person].send('put', `/api/runs/${runId}/waivers`, body);
    expect(readProblem(await put('reviewer'))).toMatchObject({ status: 403, code: 'role-not-trusted' });
    await put('planner').expect(200);
  });
});
