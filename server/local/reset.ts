import { existsSync, readdirSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { createInterface } from 'node:readline/promises';
import { askHolder } from './claim.ts';
import { endLeftovers } from './leftovers.ts';

async function isMeant(dataDir: string): Promise<boolean> {
  const terminal = createInterface({ input: process.stdin, output: process.stdout });
  const question = `This removes everything in ${dataDir}: accounts, applications, files and mails.\nType "reset" to go on: `;
  try {
    const closed = new Promise<string>((resolve) => terminal.once('close', () => resolve('')));
    return (await Promise.race([terminal.question(question), closed])).trim() === 'reset';
  } finally {
    terminal.close();
  }
}

/** Throws the demo away. Gives back the exit code. */
export async function resetDesk(
  dataDir: string,
  sure: boolean,
  say: (line: string) => void,
): Promise<number> {
  if (!existsSync(dataDir) || readdirSync(dataDir).length === 0) {
    say(`There is nothing in ${dataDir}.`);
    return 0;
  }
  if (!existsSync(join(dataDir, 'secrets.json'))) {
    say(`${dataDir} holds no secrets.json, so it was not made by npm start: nothing was removed.`);
    return 1;
  }
  const holder = await askHolder(dataDir);
  if (holder !== undefined) {
    say(`Feederwright runs on ${dataDir} (${holder}): end it first. Nothing was removed.`);
    return 1;
  }
  if (!sure && !(await isMeant(dataDir))) {
    say('Nothing was removed.');
    return 1;
  }
  await endLeftovers(dataDir);
  rmSync(dataDir, { recursive: true, force: true });
  say('Removed. The next start makes the demo anew.');
  return 0;
}
