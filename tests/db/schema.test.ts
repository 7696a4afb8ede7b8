import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { makeTestDatabase, type TestDatabase } from '../support/database.ts';
import { dumpSchema } from '../support/dump-schema.ts';

let test: TestDatabase;
beforeAll(async () => {
  test = await makeTestDatabase();
});
afterAll(() => test.drop());

it('db/schema.sql is what the migrations make; if not, run npx tsx tests/support/write-schema.ts', async () => {
  expect(await dumpSchema(test.db)).toBe(readFileSync('db/schema.sql', 'utf8'));
});

it('the dump of the schema is the same when rows have counted up', async () => {
  const before = await dumpSchema(test.db);
  await test.db('organisations').insert({ public_id: 'counted', name: 'Counted' });
  expect(await dumpSchema(test.db)).toBe(before);
});
