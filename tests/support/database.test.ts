import { expect, it } from 'vitest';
import { makeTestDatabase } from './database.ts';

it('gives two test files two migrated databases that know nothing of each other, and drops them', async () => {
  const first = await makeTestDatabase();
  const second = await makeTestDatabase();
  await first.db('settings').insert({ name: 'planted', value: '{}' });
  expect(await first.db('settings').where({ name: 'planted' })).toHaveLength(1);
  expect(await second.db('settings').where({ name: 'planted' })).toHaveLength(0);
  await first.drop();
  const [names] = (await second.db.raw('SHOW DATABASES LIKE ?', [first.settings.name])) as [unknown[]];
  expect(names).toEqual([]);
  await second.drop();
});
