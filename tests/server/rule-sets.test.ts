import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { RuleSetPreview, RuleSetRow, RuleSetView } from '../../shared/schemas/rule-set-views.ts';
import { addCalendarDays, localDate } from '../../shared/rules/business-days.ts';
import { finishRun, handIn, makeFindings } from '../support/fixture-applications.ts';
import { makeConfirmed, makeFixtureDesk, see, type FixtureDesk } from '../support/fixture-desk.ts';
import { makeRuleDesk, toRuleEdit } from '../support/fixture-rules.ts';
import { readProblem } from '../support/test-app.ts';

let desk: FixtureDesk;
let rules: ReturnType<typeof makeRuleDesk>;
beforeAll(async () => {
  desk = await makeFixtureDesk();
  rules = makeRuleDesk(desk);
});
afterAll(() => desk.stop());

const zone = 'America/New_York';
const today = () => localDate(new Date(), zone);
const tomorrow = () => addCalendarDays(today(), 1);
const base = '/api/rule-sets/pro-forma';

const limitTo = (draft: RuleSetView, limit: unknown) => ({
  rules: {
    'interrupting-duty': toRuleEdit(draft.content.rules['interrupting-duty']!, {
      limits: [{ limit, comparison: '<=', consequence: 'supplemental' }],
    }),
  },
});

describe('a draft of rules', () => {
  it('begins as a copy of any version, and saving it changes nothing but the draft', async () => {
    const before = await rules.read(proFormaRuleSet.number);
    const draft = await rules.begin();
    expect(draft).toMatchObject({ state: 'draft', validFrom: null, inForce: false, editedBy: 'Quin Ladd' });
    const saved = (await rules.save(draft, limitTo(draft, 85)).expect(200)).body as RuleSetView;
    expect(saved.content.rules['interrupting-duty']!.limits[0].limit).toBe(85);
    expect(saved.content.rules['interrupting-duty']!.unit).toBe('%');
    expect(saved.version).toBe(draft.version + 1);
    expect(saved.sha256).not.toBe(draft.sha256);
    expect(await rules.read(proFormaRuleSet.number)).toEqual(before);
    const again = await rules.begin(saved.number);
    expect(again.content.rules).toEqual(saved.content.rules);
    expect(again.number).toBe(saved.number + 1);
  });

  it('is refused with each error at its field, and nothing of it is kept', async () => {
    const draft = await rules.begin();
    const asked = draft.content.rules;
    const answer = await rules.save(draft, {
      name: ' ',
      rules: {
        'interrupting-duty': toRuleEdit(asked['interrupting-duty']!, {
          source: '',
          limits: [{ limit: '87,5', comparison: '<=', consequence: 'supplemental' }],
        }),
      },
      clocks: { tender: { allowedDays: 0, unit: 'business-day', source: 'S', readOrMemory: 'read' } },
    });
    const paths = readProblem(answer).errors.map(({ path }) => path);
    expect(paths).toEqual([
      'name',
      'rules.interrupting-duty.limits.0.limit',
      'rules.interrupting-duty.source',
      'clocks.tender.allowedDays',
    ]);
    expect((await rules.read(draft.number)).sha256).toBe(draft.sha256);
  });

  it('keeps to what the question’s computation can use', async () => {
    const draft = await rules.begin();
    const asked = draft.content.rules;
    const answer = await rules.save(draft, {
      rules: {
        'interrupting-duty': toRuleEdit(asked['interrupting-duty']!, {
          prefaultFactor: 1,
          limits: [{ limit: 85, comparison: '>=', consequence: 'supplemental' }],
        }),
        'transformer-connection': toRuleEdit(asked['transformer-connection']!, {
          limits: [{ limit: 3, comparison: '<=', consequence: 'supplemental' }],
        }),
        'short-circuit-ratio': toRuleEdit(asked['short-circuit-ratio']!, {
          limits: [
            { limit: 20, comparison: '>=', consequence: 'study' },
            { limit: 20, comparison: '>=', consequence: 'note' },
          ],
          parameters: { noSuchTerm: 1 },
        }),
      },
    });
    expect(readProblem(answer).errors.map(({ path }) => path)).toEqual([
      'rules.interrupting-duty.limits.0.comparison',
      'rules.interrupting-duty.prefaultFactor',
      'rules.transformer-connection.limits.0.limit',
      'rules.short-circuit-ratio.limits.1.limit',
      'rules.short-circuit-ratio.parameters.noSuchTerm',
    ]);
  });

  it('lets a question go unasked and be asked again', async () => {
    const draft = await rules.begin();
    const contribution = draft.content.rules.contribution!;
    const edit = { rules: { contribution: toRuleEdit(contribution, { asked: false }) } };
    const without = (await rules.save(draft, edit).expect(200)).body as RuleSetView;
    expect(without.content.rules.contribution).toBeUndefined();
    expect(without.available.contribution).toEqual(contribution);
    const back = { rules: { contribution: toRuleEdit(contribution) } };
    const again = (await rules.save(without, back).expect(200)).body as RuleSetView;
    expect(again.content.rules.contribution).toMatchObject(contribution);
  });

  it('is not saved over what another has saved meanwhile', async () => {
    const draft = await rules.begin();
    await rules.save(draft, { name: 'First' }).expect(200);
    const problem = readProblem(await rules.save(draft, { name: 'Second' }));
    expect(problem).toMatchObject({ status: 409, code: 'version-conflict' });
    expect(problem.title).toContain('Quin Ladd');
  });

  it('can be thrown away; a published version can not, and is not changed either', async () => {
    const draft = await rules.begin();
    await rules.throwAway(draft.number).expect(200);
    await desk.as.administrator.get(`${base}/${draft.number}`).expect(404);
    for (const answer of [
      await rules.throwAway(proFormaRuleSet.number),
      await rules.save(await rules.read(proFormaRuleSet.number), { name: 'Another' }),
      await rules.publish(await rules.read(proFormaRuleSet.number), tomorrow()),
    ]) {
      expect(readProblem(answer)).toMatchObject({ status: 409, code: 'rule-set-published' });
    }
  });

  it('is written by an administrator alone, and read by everybody at the utility', async () => {
    for (const person of ['reviewer', 'planner', 'auditor'] as const) {
      await desk.as[person].get(`${base}/${proFormaRuleSet.number}`).expect(200);
      await desk.as[person].send('post', `${base}/${proFormaRuleSet.number}/drafts`, {}).expect(403);
    }
    await desk.as.applicant.get(`${base}/${proFormaRuleSet.number}`).expect(403);
  });
});

describe('the database', () => {
  it('refuses to change what is published and to delete what was used', async () => {
    const rows = () =>
      desk.deps.db('rule_set_versions').where({ code: 'pro-forma', number: proFormaRuleSet.number });
    await expect(rows().update({ content: '{}' })).rejects.toThrow('published rules are never changed');
    await expect(rows().update({ valid_from: '2025-01-01' })).rejects.toThrow('never changed');
    await makeConfirmed(desk);
    await expect(rows().delete()).rejects.toThrow('used are never deleted');
  });
});

describe('publishing', () => {
  it('needs a day that there is, tomorrow at the earliest', async () => {
    const draft = await rules.begin();
    for (const day of [today(), '2030-02-30', 'soon']) {
      const problem = readProblem(await rules.publish(draft, day));
      expect(problem.errors.map(({ path }) => path)).toEqual(['validFrom']);
    }
    expect((await rules.read(draft.number)).state).toBe('draft');
  });

  it('puts rules into force from their day on, for what is not bound yet, and is in the audit trail', async () => {
    const bound = await makeConfirmed(desk);
    const draft = await rules.begin();
    const edited = (
      await rules
        .save(draft, {
          clocks: {
            'initial-review': {
              allowedDays: 21,
              unit: 'calendar-day',
              source: 'A rule of ours',
              readOrMemory: 'read',
            },
          },
        })
        .expect(200)
    ).body as RuleSetView;
    await rules.publish(edited, tomorrow()).expect(200);
    const list = async () => (await desk.as.reviewer.get('/api/rule-sets')).body as RuleSetRow[];
    const inForce = async () => (await list()).filter((row) => row.inForce).map(({ number }) => number);
    expect(await inForce()).toEqual([proFormaRuleSet.number]);

    // As it will be tomorrow: a date that lies behind can only be written past the triggers.
    const { db } = desk.deps;
    await db.raw('DROP TRIGGER rule_set_versions_kept');
    await db('rule_set_versions')
      .where({ code: 'pro-forma', number: draft.number })
      .update({ valid_from: today() });
    expect(await inForce()).toEqual([draft.number]);
    const next = await makeConfirmed(desk);
    expect((await see(desk.as.reviewer, next.publicId)).ruleSet).toMatchObject({ number: draft.number });
    expect((await see(desk.as.reviewer, bound.publicId)).ruleSet).toMatchObject({
      number: proFormaRuleSet.number,
    });
    const [clock] = (await see(desk.as.reviewer, next.publicId)).clocks.slice(-1);
    expect(clock).toMatchObject({
      kind: 'initial-review',
      unit: 'calendar-day',
      allowedDays: 21,
      dueOn: addCalendarDays(today(), 21),
    });
    await db('rule_set_versions')
      .where({ code: 'pro-forma', number: draft.number })
      .update({ valid_from: '2999-01-01' });

    const subject = `rule-set:pro-forma/${draft.number}`;
    const actions = await db('audit_entries')
      .where({ chain: 'system', subject })
      .orderBy('seq')
      .pluck('action');
    expect(actions).toEqual(['begin-rule-set', 'save-rule-set', 'publish-rule-set']);
  });
});

describe('a preview', () => {
  it('names what is handed in and not bound, and the verdicts that would turn', async () => {
    const { db } = desk.deps;
    const bound = await makeConfirmed(desk);
    const handedIn = await handIn(db, desk.world, new Date());
    const duty = { id: 'interrupting-duty', value: 86.2, element: 'cb1' } as const;
    await finishRun(db, handedIn.preliminaryRunId, makeFindings([duty]), new Date());
    const waiting = await handIn(db, desk.world, new Date());
    const draft = await rules.begin();
    const stricter = (await rules.save(draft, limitTo(draft, 85)).expect(200)).body as RuleSetView;
    const answer = await desk.as.administrator.get(`${base}/${stricter.number}/preview`).expect(200);
    const { applications } = answer.body as RuleSetPreview;
    const find = (publicId: string) => applications.find((each) => each.publicId === publicId);
    expect(find(bound.publicId)).toBeUndefined();
    expect(find(waiting.publicId)).toMatchObject({ screened: false, changes: [] });
    expect(find(handedIn.publicId)).toMatchObject({ screened: true, recomputed: [] });
    expect(find(handedIn.publicId)!.changes).toMatchObject([
      {
        element: 'cb1',
        value: 86.2,
        before: { verdict: 'within', limit: 87.5 },
        after: { verdict: 'outside', limit: 85, consequence: 'supplemental' },
      },
    ]);
  });

  it('says which questions only a new screening answers', async () => {
    const handedIn = await handIn(desk.deps.db, desk.world, new Date());
    await finishRun(desk.deps.db, handedIn.preliminaryRunId, makeFindings(), new Date());
    const draft = await rules.begin();
    const grounding = draft.content.rules['effective-grounding']!;
    const edit = { rules: { 'effective-grounding': toRuleEdit(grounding, { prefaultFactor: 1.1 }) } };
    await rules.save(draft, edit).expect(200);
    const answer = await desk.as.administrator.get(`${base}/${draft.number}/preview`).expect(200);
    const touched = (answer.body as RuleSetPreview).applications.find(
      ({ publicId }) => publicId === handedIn.publicId,
    );
    expect(touched).toMatchObject({ changes: [], recomputed: [expect.stringContaining('touches ground')] });
  });
});
