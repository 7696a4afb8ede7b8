import { setTimeout as wait } from 'node:timers/promises';
import knex, { type Knex } from 'knex';

export type Database = Knex;
export type Transaction = Knex.Transaction;

export interface ConnectionSettings {
  host: string;
  port: number;
  user: string;
  password: string;
  name: string;
}

interface MysqlConnection {
  query(sql: string, done: (error: Error | null) => void): void;
}

/** Far below the server's 50 s: with three more tries nobody waits minutes for a lock. */
const lockWaitSeconds = 5;

export function openDatabase(settings: ConnectionSettings): Database {
  return knex({
    client: 'mysql2',
    connection: {
      host: settings.host,
      port: settings.port,
      user: settings.user,
      password: settings.password,
      database: settings.name,
      // Instants go in and out as UTC; local dates stay the text they are. No `charset`: it would force
      // a collation other than the tables'.
      timezone: 'Z',
      // Knex's types do not know that the driver takes the names of column types.
      dateStrings: ['DATE'] as unknown as boolean,
    },
    // Faults name the statement without its values: they end in logs.
    compileSqlOnError: false,
    pool: {
      min: 0,
      max: 10,
      afterCreate(connection: MysqlConnection, done: (error: Error | null, connection: unknown) => void) {
        connection.query(`SET SESSION innodb_lock_wait_timeout = ${lockWaitSeconds}`, (error) =>
          done(error, connection),
        );
      },
    },
  });
}

const deadlock = 1213;
const lockWaitTimeout = 1205;
const retries = 3;

function isWorthAnotherTry(error: unknown): boolean {
  const errno = (error as { errno?: unknown } | null)?.errno;
  return errno === deadlock || errno === lockWaitTimeout;
}

/** Value out of range, wrong for its column, too long; packet too large; text that is no JSON. */
const contentErrors = [1264, 1366, 1406, 1153, 3140];

/** Whether the database refused what it was given: it will refuse the same every time. */
export function isContentError(error: unknown): boolean {
  return contentErrors.includes((error as { errno?: number } | null)?.errno ?? 0);
}

/**
 * Runs `work` in one READ COMMITTED transaction and again, from the start, after a deadlock or a lock that did not
 * come in time: it must therefore do nothing but read and write the database.
 */
export async function inTransaction<T>(db: Database, work: (trx: Transaction) => Promise<T>): Promise<T> {
  for (let attempt = 0; ; attempt += 1) {
    try {
      return await db.transaction(work, { isolationLevel: 'read committed' });
    } catch (error) {
      if (attempt >= retries || !isWorthAnotherTry(error)) throw error;
      // Two that met must not meet again in step.
      await wait(10 * 2 ** attempt * (1 + Math.random()));
    }
  }
}
