import type { Knex } from 'knex';
import type { Database } from './connection.ts';
import { migrations } from './migrations/index.ts';

interface NamedMigration {
  name: string;
  migration: Knex.Migration;
}

const source: Knex.MigrationSource<NamedMigration> = {
  getMigrations: async () => [...migrations],
  // Without a file extension: the same name whether it runs from source or from a bundle.
  getMigrationName: ({ name }) => name,
  getMigration: async ({ migration }) => migration,
};

const waitForOtherSeconds = 60;

/**
 * Brings the tables up to date and gives the names of what was run. Of several processes one migrates and the others
 * wait. MariaDB's named lock ends with its connection, so a killed migration leaves nothing that stops the next one;
 * Knex's own lock, a row, would.
 */
export async function migrate(db: Database): Promise<string[]> {
  const config = { migrationSource: source };
  return db.transaction(async (holder) => {
    const lockName = `${(db.client as { database(): string }).database()}.migrate`;
    const [rows] = (await holder.raw('SELECT GET_LOCK(?, ?) AS held', [lockName, waitForOtherSeconds])) as [
      { held: number | null }[],
    ];
    if (rows[0]?.held !== 1) {
      throw new Error(`Another process has been migrating for over ${waitForOtherSeconds} s`);
    }
    try {
      await db.migrate.forceFreeMigrationsLock(config);
      const [, names] = (await db.migrate.latest(config)) as [number, string[]];
      return names;
    } finally {
      await holder.raw('SELECT RELEASE_LOCK(?)', [lockName]);
    }
  });
}
