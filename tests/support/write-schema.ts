/** `npx tsx tests/support/write-schema.ts` after a migration: db/schema.sql as it is now. */
import { writeFileSync } from 'node:fs';
import { makeTestDatabase } from './database.ts';
import { dumpSchema } from './dump-schema.ts';
import { startTestServices, writeServices } from './services.ts';

const { services, stop } = await startTestServices();
Object.assign(process.env, writeServices(services));
try {
  const { db, drop } = await makeTestDatabase();
  writeFileSync('db/schema.sql', await dumpSchema(db));
  await drop();
} finally {
  await stop();
}
