import { existsSync, mkdtempSync, readdirSync, rmSync, statfsSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

const prefix = 'feederwright-test-';
const wantedBytes = 2_000_000_000;

/** In memory where there is room (a container may give /dev/shm 64 MB only): a database there starts in no time. */
function findRoomyDirectory(): string {
  const memory = '/dev/shm';
  if (!existsSync(memory)) return tmpdir();
  const { bavail, bsize } = statfsSync(memory);
  return bavail * bsize >= wantedBytes ? memory : tmpdir();
}

/** The pid in the name tells a directory that is in use from one left by a test run that was killed. */
function removeAbandoned(parent: string): void {
  for (const name of readdirSync(parent).filter((found) => found.startsWith(prefix))) {
    const pid = name.slice(prefix.length).split('-')[0];
    if (existsSync(`/proc/${pid}`)) continue;
    rmSync(join(parent, name), { recursive: true, force: true, maxRetries: 5, retryDelay: 100 });
  }
}

export function makeTestDirectory(): string {
  const parent = findRoomyDirectory();
  removeAbandoned(parent);
  return mkdtempSync(join(parent, `${prefix}${process.pid}-`));
}

export function removeTestDirectory(path: string): void {
  rmSync(path, { recursive: true, force: true, maxRetries: 20, retryDelay: 100 });
}
