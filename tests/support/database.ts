import { randomBytes } from 'node:crypto';
import { createConnection } from 'mysql2/promise';
import { openDatabase, type ConnectionSettings, type Database } from '../../db/connection.ts';
import { migrate } from '../../db/migrate.ts';
import { getTestServices, testDatabasePrefix } from './services.ts';

async function runStatement(statement: string): Promise<void> {
  const connection = await createConnection(getTestServices().database);
  try {
    await connection.query(statement);
  } finally {
    await connection.end();
  }
}

export interface EmptyDatabase {
  settings: ConnectionSettings;
  drop(): Promise<void>;
}

/** A database without tables: for what migrates by itself. */
export async function makeEmptyDatabase(): Promise<EmptyDatabase> {
  const name = `${testDatabasePrefix}${randomBytes(6).toString('hex')}`;
  await runStatement(`CREATE DATABASE ${name} CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_ci`);
  return {
    settings: { ...getTestServices().database, name },
    drop: () => runStatement(`DROP DATABASE ${name}`),
  };
}

export interface TestDatabase extends EmptyDatabase {
  db: Database;
}

/** A migrated database for one test file: make it in beforeAll, drop it (which closes `db`) in afterAll. */
export async function makeTestDatabase(): Promise<TestDatabase> {
  const { settings, drop } = await makeEmptyDatabase();
  const db = openDatabase(settings);
  await migrate(db);
  return {
    settings,
    db,
    drop: async () => {
      await db.destroy();
      await drop();
    },
  };
}
