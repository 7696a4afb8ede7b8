import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { inTransaction, openDatabase, type Transaction } from '../../db/connection.ts';
import { migrate } from '../../db/migrate.ts';
import { migrations } from '../../db/migrations/index.ts';
import { findSetting, saveSetting } from '../../db/repositories/settings.ts';
import { makeEmptyDatabase, makeTestDatabase, type TestDatabase } from '../support/database.ts';

let database: TestDatabase;
beforeAll(async () => {
  database = await makeTestDatabase();
});
afterAll(() => database.drop());
beforeEach(async () => {
  await database.db('settings').delete();
  await saveSetting(database.db, 'left', 0);
  await saveSetting(database.db, 'right', 0);
});

const add = async (trx: Transaction, name: string) =>
  trx('settings')
    .where({ name })
    .update({ value: trx.raw('value + 1') });

describe('a transaction', () => {
  it('keeps everything or nothing', async () => {
    const work = inTransaction(database.db, async (trx) => {
      await add(trx, 'left');
      throw new Error('second thoughts');
    });
    await expect(work).rejects.toThrow('second thoughts');
    expect(await findSetting(database.db, 'left')).toBe(0);
    expect(await inTransaction(database.db, async (trx) => add(trx, 'left'))).toBe(1);
    expect(await findSetting(database.db, 'left')).toBe(1);
  });

  it('reads what others committed meanwhile (READ COMMITTED)', async () => {
    await inTransaction(database.db, async (trx) => {
      expect(await findSetting(trx, 'left')).toBe(0);
      await saveSetting(database.db, 'left', 7);
      expect(await findSetting(trx, 'left')).toBe(7);
    });
  });

  it('that meets another crosswise is done again, and both are kept', async () => {
    let tries = 0;
    let arrived = 0;
    let bothHold: () => void = () => undefined;
    const meeting = new Promise<void>((resolve) => (bothHold = resolve));
    const cross = (first: string, second: string) =>
      inTransaction(database.db, async (trx) => {
        tries += 1;
        await add(trx, first);
        arrived += 1;
        if (arrived === 2) bothHold();
        await meeting;
        await add(trx, second);
      });
    await Promise.all([cross('left', 'right'), cross('right', 'left')]);
    expect(tries).toBe(3);
    expect([await findSetting(database.db, 'left'), await findSetting(database.db, 'right')]).toEqual([2, 2]);
  });

  it('is tried three times more and then gives the fault, whatever it was that stood in the way', async () => {
    for (const errno of [1213, 1205]) {
      let tries = 0;
      const work = inTransaction(database.db, async () => {
        tries += 1;
        throw Object.assign(new Error(`number ${errno}`), { errno });
      });
      await expect(work).rejects.toThrow(`number ${errno}`);
      expect(tries).toBe(4);
    }
  });

  it('is not tried again for any other fault', async () => {
    let tries = 0;
    const work = inTransaction(database.db, async (trx) => {
      tries += 1;
      await trx('settings').insert({ name: 'left', value: '1' });
    });
    await expect(work).rejects.toMatchObject({ errno: 1062 });
    expect(tries).toBe(1);
  });
});

describe('a connection', () => {
  it('waits five seconds for a lock, keeps local dates as text and instants to the millisecond in UTC', async () => {
    const { db } = database;
    const [rows] = (await db.raw('SELECT @@innodb_lock_wait_timeout AS wait')) as [{ wait: number }[]];
    expect(rows[0]?.wait).toBe(5);
    const at = new Date('2026-03-29T01:30:00.123Z');
    await db('organisations').insert({ public_id: 'o', name: 'Pell' });
    await db('users').insert({
      public_id: 'u',
      organisation_id: 1,
      email: 'e@x.example',
      name: 'E',
      password_hash: '',
      role: 'applicant',
    });
    await db('applications').insert({
      public_id: 'a',
      organisation_id: 1,
      created_by: 1,
      stage: 'draft',
      waiting_on: 'applicant',
      received_on: '2026-03-29',
      created_at: at,
      updated_at: at,
    });
    expect(await db('applications').first('received_on', 'created_at')).toEqual({
      received_on: '2026-03-29',
      created_at: at,
    });
  });
});

describe('migrating', () => {
  it('records names without a file extension, and has nothing to do the second time', async () => {
    expect(await migrate(database.db)).toEqual([]);
    const rows = (await database.db('knex_migrations').orderBy('id').select('name')) as { name: string }[];
    expect(rows.map(({ name }) => name)).toEqual(migrations.map(({ name }) => name));
    for (const { name } of rows) expect(name).toMatch(/^\d{14}_[a-z_]+$/);
  });

  it('is done once when two processes begin at the same moment', async () => {
    const empty = await makeEmptyDatabase();
    const [one, two] = [openDatabase(empty.settings), openDatabase(empty.settings)];
    const done = await Promise.all([migrate(one), migrate(two)]);
    expect(done.map((names) => names.length).sort((a, b) => a - b)).toEqual([0, migrations.length]);
    await Promise.all([one.destroy(), two.destroy()]);
    await empty.drop();
  });

  it('goes on after one that was killed and left its mark in Knex’s own table of locks', async () => {
    await database.db('knex_migrations_lock').update({ is_locked: 1 });
    expect(await migrate(database.db)).toEqual([]);
  });

  it('can be taken back, all of it', async () => {
    const empty = await makeEmptyDatabase();
    const db = openDatabase(empty.settings);
    await migrate(db);
    for (const { migration } of [...migrations].reverse()) await migration.down(db);
    const [tables] = (await db.raw('SHOW TABLES')) as [object[]];
    expect(tables.map((row) => Object.values(row)[0])).toEqual(['knex_migrations', 'knex_migrations_lock']);
    await db.destroy();
    await empty.drop();
  });
});
