import { existsSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { writePrivateFile } from './private-files.ts';

const made = ['mariadb', 'redis', 'files', 'mailbox'];

/** There from before the tables are made until the first start has prepared them, and never again. */
function markFile(dataDir: string): string {
  return join(dataDir, 'first-start');
}

/**
 * A first start that was broken off leaves half a demo. No server ever ran on it, so nobody's work is in it: it is
 * thrown away and made anew. Gives back whether this is a first start.
 */
export function beginFirstStart(dataDir: string): boolean {
  if (existsSync(markFile(dataDir))) {
    for (const name of made) rmSync(join(dataDir, name), { recursive: true, force: true });
  }
  if (existsSync(join(dataDir, 'mariadb'))) return false;
  writePrivateFile(markFile(dataDir), '');
  return true;
}

export function endFirstStart(dataDir: string): void {
  rmSync(markFile(dataDir), { force: true });
}
