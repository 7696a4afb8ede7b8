import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { readJsonFile, writePrivateFile } from './private-files.ts';

interface Left {
  name: string;
  pid: number;
  /** Clock ticks since the machine started: with the pid it names one process for good. */
  startTicks: string;
}

function recordFile(dataDir: string): string {
  return join(dataDir, 'processes.json');
}

/** Field 22 of proc(5) stat. The name before it may hold blanks and brackets, so it is cut off first. */
function readStartTicks(pid: number): string | undefined {
  const path = `/proc/${pid}/stat`;
  if (!existsSync(path)) return undefined;
  try {
    const stat = readFileSync(path, 'utf8');
    return stat.slice(stat.lastIndexOf(')') + 2).split(' ')[19];
  } catch (error) {
    // It ended between the two lines above.
    if (['ENOENT', 'ESRCH'].includes((error as NodeJS.ErrnoException).code ?? '')) return undefined;
    throw error;
  }
}

function isAlive(left: Left): boolean {
  return readStartTicks(left.pid) === left.startTicks;
}

/** Writes down what runs now, so that the next start can tell it from a stranger with the same pid. */
export function recordProcesses(dataDir: string, running: { name: string; pid: number }[]): void {
  const lines = running.flatMap(({ name, pid }) => {
    const startTicks = readStartTicks(pid);
    return startTicks === undefined ? [] : [{ name, pid, startTicks }];
  });
  writePrivateFile(recordFile(dataDir), JSON.stringify(lines));
}

async function waitUntilGone(left: Left, seconds: number): Promise<boolean> {
  const end = Date.now() + seconds * 1000;
  while (isAlive(left)) {
    if (Date.now() > end) return false;
    await sleep(50);
  }
  return true;
}

/**
 * After a kill -9 of the supervisor its services are told by the system to end, and may still be at it: a
 * second MariaDB on the directory would wait for a lock. Gives back the names of those that were found.
 */
export async function endLeftovers(dataDir: string): Promise<string[]> {
  const recorded = (readJsonFile(recordFile(dataDir)) ?? []) as Left[];
  const found = recorded.filter(isAlive);
  for (const left of found) {
    if (await waitUntilGone(left, 2)) continue;
    process.kill(left.pid, 'SIGTERM');
    if (await waitUntilGone(left, 20)) continue;
    process.kill(left.pid, 'SIGKILL');
    await waitUntilGone(left, 10);
  }
  recordProcesses(dataDir, []);
  return found.map((left) => left.name);
}
