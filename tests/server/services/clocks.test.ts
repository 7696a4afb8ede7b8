import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { inTransaction } from '../../../db/connection.ts';
import { lockApplication } from '../../../db/repositories/applications.ts';
import type { Actor } from '../../../server/context.ts';
import { findCurrentClock, listClockViews } from '../../../server/services/clocks.ts';
import { moveApplication } from '../../../server/services/transitions.ts';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { ApplicationEvent } from '../../../shared/rules/application-life.ts';
import { makeTestDatabase, type TestDatabase } from '../../support/database.ts';
import { getRow, handIn, makeContext } from '../../support/fixture-applications.ts';
import { makeFixtureWorld, type FixtureWorld } from '../../support/fixture-world.ts';

let test: TestDatabase;
let world: FixtureWorld;

beforeAll(async () => {
  test = await makeTestDatabase();
  world = await makeFixtureWorld(test.db);
});

afterAll(() => test.drop());

/** Noon in the utility's zone; the fixture calendar has 2026-12-25 and 2027-01-01. */
const noon = (date: string) => new Date(`${date}T17:00:00Z`);

async function move(publicId: string, event: ApplicationEvent, actor: Actor, date: string) {
  await inTransaction(test.db, async (trx) => {
    const application = (await lockApplication(trx, publicId))!;
    await moveApplication(trx, makeContext(actor, noon(date)), application, event, null);
  });
}

async function seeClocks(publicId: string, date: string) {
  const { id, nextDueOn } = await getRow(test.db, publicId);
  const views = (await listClockViews(test.db, { now: noon(date) }, [id])).get(id)!;
  return { views, nextDueOn };
}

describe('the clocks of an application', () => {
  it('give the check for completeness ten business days from the day of receipt', async () => {
    const { publicId } = await handIn(test.db, world, noon('2026-12-21'));
    const { views, nextDueOn } = await seeClocks(publicId, '2026-12-23');
    expect(views).toEqual([
      {
        kind: 'completeness',
        label: 'Check for completeness',
        unit: 'business-day',
        allowedDays: 10,
        usedDays: 2,
        startedOn: '2026-12-21',
        dueOn: '2027-01-06',
        state: 'running',
      },
    ]);
    expect(nextDueOn).toBe('2027-01-06');
  });

  it('count the last day as kept and are overdue at the next local midnight', async () => {
    const { publicId } = await handIn(test.db, world, noon('2026-12-21'));
    const { id } = await getRow(test.db, publicId);
    const state = async (instant: string) =>
      (await listClockViews(test.db, { now: new Date(instant) }, [id])).get(id)![0]?.state;
    // 04:59 UTC is 23:59 in the utility's zone.
    expect(await state('2027-01-07T04:59:00Z')).toBe('running');
    expect(await state('2027-01-07T05:00:00Z')).toBe('overdue');
  });

  it('stand still while the applicant looks for what is missing, and go on with what was left', async () => {
    const { publicId } = await handIn(test.db, world, noon('2026-06-01'));
    // Used: 2, 3, 4 June. Then 5, 8, 9, 10, 11 June are the applicant's.
    await move(publicId, 'ask-for-missing', world.people.reviewer, '2026-06-04');
    const paused = await seeClocks(publicId, '2026-06-09');
    expect(paused.views.map(({ kind, state, usedDays }) => [kind, state, usedDays])).toEqual([
      ['completeness', 'paused', 3],
      ['cure', 'running', 3],
    ]);
    expect(findCurrentClock(paused.views)?.kind).toBe('cure');
    expect(paused.nextDueOn).toBe('2026-06-18');

    await move(publicId, 'resubmit', world.people.applicant, '2026-06-11');
    const resumed = await seeClocks(publicId, '2026-06-12');
    expect(resumed.views.map(({ kind, state, usedDays }) => [kind, state, usedDays])).toEqual([
      ['completeness', 'running', 4],
      ['cure', 'stopped', 5],
    ]);
    // Ten days from 1 June end on 15 June; five of the applicant's on top.
    expect(resumed.views[0]?.dueOn).toBe('2026-06-22');
    expect(resumed.nextDueOn).toBe('2026-06-22');
  });

  it('leave a limit that had passed before the pause passed', async () => {
    const { publicId } = await handIn(test.db, world, noon('2026-06-01'));
    await move(publicId, 'ask-for-missing', world.people.reviewer, '2026-06-17');
    await move(publicId, 'resubmit', world.people.applicant, '2026-06-19');
    const { views } = await seeClocks(publicId, '2026-06-19');
    expect(views[0]).toMatchObject({
      kind: 'completeness',
      dueOn: '2026-06-15',
      state: 'overdue',
      usedDays: 12,
    });
  });

  it('hand over from the check for completeness to the review, fifteen days', async () => {
    const { publicId } = await handIn(test.db, world, noon('2026-06-01'));
    await move(publicId, 'confirm-complete', world.people.reviewer, '2026-06-03');
    const { views, nextDueOn } = await seeClocks(publicId, '2026-06-03');
    expect(views.map(({ kind, state, dueOn }) => [kind, state, dueOn])).toEqual([
      ['completeness', 'stopped', '2026-06-15'],
      ['initial-review', 'running', '2026-06-24'],
    ]);
    expect(nextDueOn).toBe('2026-06-24');
  });

  it('end with the application', async () => {
    const { publicId } = await handIn(test.db, world, noon('2026-06-01'));
    await move(publicId, 'withdraw', world.people.applicant, '2026-06-03');
    const { views, nextDueOn } = await seeClocks(publicId, '2026-07-01');
    expect(views.map(({ state, usedDays }) => [state, usedDays])).toEqual([['stopped', 2]]);
    expect(nextDueOn).toBeNull();
  });

  it('take their days from the rules in force, counted by the calendar where these say so', async () => {
    const days = { unit: 'calendar-day', source: 'A rule of ours', readOrMemory: 'read' } as const;
    const clocks = { completeness: { ...days, allowedDays: 20 }, cure: { ...days, allowedDays: 7 } };
    await test.db('rule_set_versions').insert({
      code: 'by-calendar',
      number: 1,
      valid_from: '2026-09-01',
      content: JSON.stringify({ ...proFormaRuleSet, code: 'by-calendar', clocks }),
      sha256: Buffer.alloc(32),
    });
    // 4 September is a Friday; a weekend and Labor Day follow.
    const { publicId } = await handIn(test.db, world, noon('2026-09-04'));
    await move(publicId, 'ask-for-missing', world.people.reviewer, '2026-09-07');
    const paused = await seeClocks(publicId, '2026-09-10');
    expect(paused.views.map(({ unit, usedDays, allowedDays }) => [unit, usedDays, allowedDays])).toEqual([
      ['calendar-day', 3, 20],
      ['calendar-day', 3, 7],
    ]);
    expect(paused.nextDueOn).toBe('2026-09-14');
    await move(publicId, 'resubmit', world.people.applicant, '2026-09-12');
    // 20 days from 4 September end on the 24th; five of the applicant's on top.
    expect((await seeClocks(publicId, '2026-09-13')).nextDueOn).toBe('2026-09-29');
    await test.db('rule_set_versions').where({ code: 'by-calendar' }).delete();
  });

  it('fall back on the federal limits where the rules say nothing of them', async () => {
    const { clocks: _clocks, ...early } = proFormaRuleSet;
    await test.db('rule_set_versions').insert({
      code: 'early',
      number: 1,
      valid_from: '2026-09-01',
      content: JSON.stringify({ ...early, code: 'early' }),
      sha256: Buffer.alloc(32),
    });
    const { publicId } = await handIn(test.db, world, noon('2026-09-04'));
    expect((await seeClocks(publicId, '2026-09-04')).views).toMatchObject([
      { kind: 'completeness', unit: 'business-day', allowedDays: 10 },
    ]);
    await test.db('rule_set_versions').where({ code: 'early' }).delete();
  });
});
