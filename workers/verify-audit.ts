import { openDatabase } from '../db/connection.ts';
import { readConfig } from '../server/config.ts';
import { verifyAudit } from '../server/services/audit-verification.ts';

const count = (number: number, one: string, many: string) => `${number} ${number === 1 ? one : many}`;

/** `npm run verify-audit`: recomputes every chain of the audit trail; ends with 1 when something does not fit. */
async function run(): Promise<number> {
  const db = openDatabase(readConfig().database);
  let chains = 0;
  let entries = 0;
  let faults = 0;
  try {
    for await (const state of verifyAudit(db)) {
      chains += 1;
      entries += state.entries;
      if (state.fault === null) {
        console.log(`${state.chain}: ${count(state.entries, 'entry', 'entries')}, whole`);
        continue;
      }
      faults += 1;
      console.log(`${state.chain}: BROKEN at entry ${state.fault.seq}: ${state.fault.words}`);
    }
  } finally {
    await db.destroy();
  }
  console.log(
    `${count(chains, 'chain', 'chains')}, ${count(entries, 'entry', 'entries')} in order, ${faults} broken`,
  );
  return faults === 0 ? 0 : 1;
}

process.exitCode = await run();
