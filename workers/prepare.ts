/** Before the server starts: migrates, plants what every installation has, and the demo once. */
import { writeFileSync } from 'node:fs';
import { inTransaction, openDatabase, type Database } from '../db/connection.ts';
import { migrate } from '../db/migrate.ts';
import { findSetting, saveSetting } from '../db/repositories/settings.ts';
import { confirmRuleSetForDemo, plantReference } from '../db/seeds/reference.ts';
import { readConfig } from '../server/config.ts';
import { createLog } from '../server/log.ts';
import { plantApplications } from './planting/applications.ts';
import { demoAccounts, plantEquipment, plantPeople } from './planting/people.ts';
import { plantTerritory } from './planting/territory.ts';

/** In order, each once. A first start that is cut off in the middle of a step begins anew: the supervisor sees to it. */
const demoSteps = ['people', 'equipment', 'territory', 'applications'] as const;

const config = readConfig();
const log = createLog(config.logLevel, 'prepare');

async function plantStep(db: Database, step: (typeof demoSteps)[number], now: Date): Promise<void> {
  if (step === 'people') await plantPeople(db);
  else if (step === 'equipment') await plantEquipment(db);
  else if (step === 'territory') await plantTerritory(db, new Date(now.getTime() - 400 * 86_400_000));
  else await plantApplications({ db, config, log }, now);
}

async function plantDemo(db: Database): Promise<void> {
  const now = new Date();
  await confirmRuleSetForDemo(db, now);
  for (const step of demoSteps) {
    const mark = `demo.planted.${step}`;
    if ((await findSetting(db, mark)) !== undefined) continue;
    const started = performance.now();
    await plantStep(db, step, now);
    await saveSetting(db, mark, now.toISOString());
    log.info(`Demo: ${step} planted in ${Math.round(performance.now() - started)} ms`);
  }
  writeFileSync(config.demoAccountsFile, JSON.stringify(demoAccounts, null, 2), { mode: 0o600 });
}

const db = openDatabase(config.database);
try {
  const applied = await migrate(db);
  if (applied.length > 0) log.info(`Migrated: ${applied.length} changes`);
  await inTransaction(db, (trx) => plantReference(trx, new Date()));
  if (config.demo) await plantDemo(db);
} finally {
  await db.destroy();
}
