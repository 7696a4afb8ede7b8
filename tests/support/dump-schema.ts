import type { Database } from '../../db/connection.ts';

/** Knex keeps its own tables, and makes them its own way. */
const ownTables = /^knex_/;

/** The tables and triggers of a migrated database as MariaDB writes them, without what rows have left behind. */
export async function dumpSchema(db: Database): Promise<string> {
  const [tables] = (await db.raw('SHOW TABLES')) as [Record<string, string>[]];
  const names = tables.flatMap((row) => Object.values(row)).filter((name) => !ownTables.test(name));
  const statements: string[] = [];
  for (const name of names.sort()) {
    const [[row]] = (await db.raw('SHOW CREATE TABLE ??', [name])) as [[{ 'Create Table': string }]];
    statements.push(`${row['Create Table'].replace(/ AUTO_INCREMENT=\d+/, '')};`);
  }
  const [triggers] = (await db.raw('SHOW TRIGGERS')) as [
    { Trigger: string; Timing: string; Event: string; Table: string; Statement: string }[],
  ];
  for (const { Trigger, Timing, Event, Table, Statement } of triggers) {
    statements.push(`CREATE TRIGGER ${Trigger} ${Timing} ${Event} ON ${Table} FOR EACH ROW ${Statement};`);
  }
  const head =
    '-- What the migrations make, for reading: nothing runs this file. Written by tests/support/write-schema.ts.';
  return `${[head, ...statements].join('\n\n')}\n`;
}
