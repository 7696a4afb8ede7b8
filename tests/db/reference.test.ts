import { afterAll, beforeAll, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import { getValidRuleSet, listRuleSetVersions } from '../../db/repositories/rule-sets.ts';
import { confirmRuleSetForDemo, plantReference } from '../../db/seeds/reference.ts';
import { makeTestDatabase, type TestDatabase } from '../support/database.ts';

const now = new Date('2026-12-01T12:00:00Z');

let test: TestDatabase;
beforeAll(async () => {
  test = await makeTestDatabase();
  await plantReference(test.db, now);
});
afterAll(() => test.drop());

const list = async () =>
  (await listRuleSetVersions(test.db)).map(({ code, state }) => `${code} ${state}`).toSorted();

it('what every installation begins with: the pro forma in force, the variants as drafts', async () => {
  expect(await list()).toEqual(['85-percent draft', '90-percent draft', 'pro-forma published']);
  expect(await getValidRuleSet(test.db, '2026-12-01')).toMatchObject({
    code: 'pro-forma',
    number: proFormaRuleSet.number,
  });
});

it('planting again changes nothing, and a variant that was thrown away does not come back', async () => {
  await test.db('rule_set_versions').where({ code: '90-percent' }).delete();
  await plantReference(test.db, now);
  expect(await list()).toEqual(['85-percent draft', 'pro-forma published']);
});

it('the demo confirms the rules in force alone, not what somebody writes later', async () => {
  await confirmRuleSetForDemo(test.db, now);
  const versions = await listRuleSetVersions(test.db);
  expect(versions.map(({ code, confirmedAt }) => [code, confirmedAt !== null]).toSorted()).toEqual([
    ['85-percent', false],
    ['pro-forma', true],
  ]);
});
