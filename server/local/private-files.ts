import { randomBytes } from 'node:crypto';
import { chmodSync, existsSync, mkdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

/** Readable by the person who started us alone; whole or not there at all, whatever kills us meanwhile. */
export function writePrivateFile(path: string, text: string): void {
  const half = `${path}.${process.pid}.half`;
  writeFileSync(half, text, { mode: 0o600 });
  renameSync(half, path);
}

export function makePrivateDirectory(path: string): void {
  mkdirSync(path, { recursive: true, mode: 0o700 });
  chmodSync(path, 0o700);
}

/** undefined where the file is missing; a damaged one is named, not made again over what it may have held. */
export function readJsonFile(path: string): unknown {
  if (!existsSync(path)) return undefined;
  try {
    return JSON.parse(readFileSync(path, 'utf8'));
  } catch (cause) {
    throw new Error(`${path} is not JSON: mend it, or \`npm run reset\` to begin anew`, { cause });
  }
}

export interface Secrets {
  database: string;
  redis: string;
  session: string;
}

/** Made once for a data directory: the databases in it know no other. */
export function keepSecrets(dataDir: string): Secrets {
  const path = join(dataDir, 'secrets.json');
  const kept = (readJsonFile(path) ?? {}) as Partial<Secrets>;
  const secrets = {
    database: kept.database ?? makeSecret(),
    redis: kept.redis ?? makeSecret(),
    session: kept.session ?? makeSecret(),
  };
  writePrivateFile(path, `${JSON.stringify(secrets, null, 2)}\n`);
  return secrets;
}

/** 256 bits, in letters that need no quoting in a configuration file or in SQL. */
function makeSecret(): string {
  return randomBytes(32).toString('hex');
}
