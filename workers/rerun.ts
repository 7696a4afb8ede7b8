/** `npm run rerun -- RUN`: computes a stored run again and compares the hashes. */
import { openDatabase } from '../db/connection.ts';
import { readConfig } from '../server/config.ts';
import { compareRun } from './compare-run.ts';

async function main(publicId: string | undefined): Promise<number> {
  if (publicId === undefined) {
    console.error('Got no run, expected the public id of one: npm run rerun -- RUN');
    return 2;
  }
  const db = openDatabase(readConfig().database);
  try {
    return await compareRun(db, publicId, (line) => console.log(line));
  } finally {
    await db.destroy();
  }
}

process.exitCode = await main(process.argv[2]);
