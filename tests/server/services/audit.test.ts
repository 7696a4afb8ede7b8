import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { inTransaction } from '../../../db/connection.ts';
import { recordAudit } from '../../../server/services/audit.ts';
import { verifyAudit, type ChainState } from '../../../server/services/audit-verification.ts';
import { makeTestDatabase, type TestDatabase } from '../../support/database.ts';
import { handIn, makeContext } from '../../support/fixture-applications.ts';
import { makeFixtureWorld, type FixtureWorld } from '../../support/fixture-world.ts';

let test: TestDatabase;
let world: FixtureWorld;
let chain: `application:${string}`;

beforeAll(async () => {
  test = await makeTestDatabase();
  world = await makeFixtureWorld(test.db);
});

afterAll(() => test.drop());

const at = new Date('2026-06-01T17:00:00.123Z');

async function record(chainName: typeof chain | 'system', action: string, after: unknown = null) {
  const context = makeContext(world.people.reviewer, at);
  await inTransaction(test.db, (trx) => recordAudit(trx, context, chainName, action, 'test', null, after));
}

/** A fresh chain of four entries: the submission's and three more. */
beforeEach(async () => {
  chain = `application:${(await handIn(test.db, world, at)).publicId}`;
  for (const action of ['one', 'two', 'three'])
    await record(chain, action, { words: 'naïve 😀', value: 87.51 });
});

async function verify(): Promise<ChainState | undefined> {
  const states: ChainState[] = [];
  for await (const state of verifyAudit(test.db)) states.push(state);
  return states.find((state) => state.chain === chain);
}

/** What somebody with the database's password could do: the triggers are taken away for it. */
async function tamper(sql: string, values: unknown[]): Promise<void> {
  const triggers = ['update', 'delete'] as const;
  for (const what of triggers) await test.db.raw(`DROP TRIGGER audit_entries_no_${what}`);
  try {
    await test.db.raw(sql, values as string[]);
  } finally {
    for (const what of triggers) {
      await test.db.raw(`CREATE TRIGGER audit_entries_no_${what} BEFORE ${what} ON audit_entries
        FOR EACH ROW SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'never'`);
    }
  }
}

describe('the audit trail', () => {
  it('holds together when nobody touched it', async () => {
    expect(await verify()).toEqual({ chain, entries: 4, fault: null });
  });

  it('lets the database refuse a change and a removal', async () => {
    const entry = () => test.db('audit_entries').where({ chain, seq: 2 });
    await expect(entry().update({ action: 'other' })).rejects.toThrow('never');
    await expect(entry().delete()).rejects.toThrow('never');
  });

  it.each([
    ['what it says', `UPDATE audit_entries SET after_json = '{"value":1}' WHERE chain = ? AND seq = 3`],
    ['who did it', `UPDATE audit_entries SET actor = 'Nobody' WHERE chain = ? AND seq = 3`],
    ['when', `UPDATE audit_entries SET at = '2026-06-01 17:00:00.124' WHERE chain = ? AND seq = 3`],
    ['from where', `UPDATE audit_entries SET ip = NULL WHERE chain = ? AND seq = 3`],
    ['the hash', `UPDATE audit_entries SET hash = REPEAT('x', 32) WHERE chain = ? AND seq = 3`],
  ])('names the entry in which %s was changed', async (_what, sql) => {
    await tamper(sql, [chain]);
    expect((await verify())?.fault).toEqual({ seq: 3, words: 'what it says is not what was hashed' });
  });

  it('names the entry that is missing from the middle', async () => {
    await tamper('DELETE FROM audit_entries WHERE chain = ? AND seq = 2', [chain]);
    expect((await verify())?.fault).toMatchObject({ seq: 2 });
  });

  it('misses a tail that was cut off', async () => {
    await tamper('DELETE FROM audit_entries WHERE chain = ? AND seq > 2', [chain]);
    expect(await verify()).toEqual({
      chain,
      entries: 2,
      fault: { seq: 3, words: 'it is missing: the head says that the chain has 4 entries' },
    });
  });

  it('misses a chain that is gone as a whole', async () => {
    await tamper('DELETE FROM audit_entries WHERE chain = ?', [chain]);
    expect((await verify())?.fault).toMatchObject({ seq: 1 });
  });

  it('finds an entry that was rewritten with a hash of its own, at the one after it', async () => {
    const rows = await test.db('audit_entries').where({ chain, seq: 1 });
    await tamper('UPDATE audit_entries SET previous_hash = ? WHERE chain = ? AND seq = 3', [
      rows[0].hash,
      chain,
    ]);
    expect((await verify())?.fault).toEqual({ seq: 3, words: 'it does not follow from the entry before it' });
  });

  it('gives entries of the system that are written at once a number each, in one chain', async () => {
    await Promise.all(Array.from({ length: 8 }, (_, index) => record('system', `at once ${index}`)));
    const states: ChainState[] = [];
    for await (const state of verifyAudit(test.db)) states.push(state);
    expect(states.find((state) => state.chain === 'system')).toMatchObject({ entries: 8, fault: null });
  });
});
